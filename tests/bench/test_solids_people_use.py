"""What a person notices of the table of solids."""

import pytest

from core.bench.solids import SOLIDS, solid
from core.errors import BadSetup


@pytest.mark.parametrize("name", ["brass", "Brass", "  BRASS ", "stainless  steel 304", "aluminium 6082"])
def test_a_material_is_found_whatever_its_capitals_and_spaces(name):
    assert solid(name).name.casefold() == " ".join(name.split()).casefold()


@pytest.mark.parametrize(
    ("typed", "meant"),
    [("bras", "brass"), ("aluminum", "aluminium"), ("steel 304", "stainless steel 304"), ("coper", "copper")],
)
def test_a_misspelt_material_names_the_nearest_known_one(typed, meant):
    with pytest.raises(BadSetup, match=f"did you mean '{meant}'"):
        solid(typed)


def test_an_unheard_of_material_lists_what_is_known():
    with pytest.raises(BadSetup, match=r"known are brass, .*lead"):
        solid("xyzzyq")


def test_every_material_is_complete_and_has_a_source():
    """Positive properties, u of every one, emissivities between 0 and 1 including one for black paint."""
    for one in SOLIDS.values():
        assert one.source
        assert min(one.density_kg_m3, one.heat_capacity_J_kgK, one.conductivity_W_mK) > 0.0
        assert all(0.0 < u <= 0.15 for u in (one.density_u_rel, one.heat_capacity_u_rel, one.conductivity_u_rel))
        assert all(0.0 < emissivity < 1.0 for emissivity in one.emissivity.values())
        assert one.emissivity["painted black"] > 0.9


def test_heat_capacity_rises_with_temperature_by_the_tabled_slope():
    """From 35 to 90 °C brass gains about 2 % and aluminium about 3 %: too much to leave out."""
    for name, gain in (("brass", 0.0217), ("aluminium", 0.0280)):
        one = solid(name)
        assert one.heat_capacity_at(20.0) == one.heat_capacity_J_kgK
        assert one.heat_capacity_at(90.0) / one.heat_capacity_at(35.0) - 1.0 == pytest.approx(gain, abs=1e-3)

"""A set-up goes to TOML and back without losing a digit, and the contract's own example is read as it stands."""

from dataclasses import MISSING, fields, replace
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.bench.setup import SECTIONS, Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.bench.setup_check import problems
from core.bench.setup_file import read_setup, setup_from_text, setup_to_dict, setup_to_text
from core.errors import BadSetup

EXAMPLE = """
[body]
shape = "cylinder"            # cylinder | sphere | block
diameter_m = 0.016            # block: side_a_m, side_b_m, side_c_m
length_m = 0.110
material = "brass"            # or density_kg_m3, heat_capacity_J_kgK, conductivity_W_mK
mass_kg = 0.189               # optional: weighed beats computed
emissivity = 0.05
exposed = "side"              # side | side+end | all
stem_loss_W_K = 0.0           # optional: conductance of holder and sensor stem, measured in still air
position = "centre"           # where the thermometer sits

[thermometer]
resolution_K = 1.0
refresh_s = 0.5
rounding = "nearest"          # nearest | down
accuracy_K = 0.5              # standard uncertainty of its calibration
lag_s = 0.0                   # time constant of the sensor in the body

[recording]
mode = "change"               # change | beat
tap_lag_s = 0.0               # mean delay of this person's tap
tap_jitter_s = 0.05           # standard deviation of it

[air]
temperature_C = 23.0          # before the run
temperature_end_C = 23.4      # optional: after the run
pressure_Pa = 101325
relative_humidity = 0.4
surroundings_C = 23.0         # for radiation; the air temperature if left out

[flow]
velocity_m_s = 8.0            # or dynamic_pressure_Pa, or flow_m3_s with duct area
velocity_end_m_s = 7.9        # optional: after the run
velocity_u_m_s = 0.2          # standard uncertainty
duct_height_m = 0.15          # optional: for blockage
duct_width_m = 0.15
arrangement = "single"        # single | inline | staggered
pitch_transverse_m = 0.025    # banks
pitch_longitudinal_m = 0.025
row = 3                       # row of the heated body, 1 = first in the stream
rows = 5
"""


def refusal(text):
    """The sentence by which a text is refused, empty if it is not."""
    try:
        setup_from_text(text, "bench.toml")
    except BadSetup as error:
        return str(error)
    return ""


def any_value(field):
    """Any value that the description of a field allows, None where that is its default."""
    one = field.metadata["description"]
    if one.kind == "choice":
        values = st.sampled_from(one.choices)
    elif one.kind == "integer":
        values = st.integers(int(one.low), int(one.high))
    elif one.kind == "text":
        values = st.text(st.characters(codec="utf-8"), min_size=1, max_size=80).filter(
            lambda text: text.strip() and text.isprintable()
        )
    else:
        values = st.floats(one.low, one.high, exclude_min=one.above_low)
        if one.kind == "numbers":
            return st.lists(values, max_size=4).map(tuple)
    if field.default is None:
        return st.none() | values
    return values if field.default is MISSING else st.just(field.default) | values


SECTION = {
    name: st.builds(kind, **{field.name: any_value(field) for field in fields(kind)})
    for name, kind in SECTIONS.items()
}
PROPERTIES = {"density_kg_m3": 8500.0, "heat_capacity_J_kgK": 380.0, "conductivity_W_mK": 115.0}


@st.composite
def usable_setups(draw):
    """Any set-up that the checks let through: every field drawn, then the contradictions taken out."""
    body = draw(SECTION["body"])
    sizes = {"diameter_m": None, "length_m": None, "side_a_m": None, "side_b_m": None, "side_c_m": None}
    size = st.floats(0.01, 0.02)
    if body.shape == "block":
        sizes |= {"side_a_m": draw(size), "side_b_m": draw(size), "side_c_m": draw(size)}
    else:
        sizes["diameter_m"] = draw(size)
        sizes["length_m"] = draw(size) if body.shape == "cylinder" else None
    body = replace(body, **sizes, **PROPERTIES, mass_kg=None, axial_offset_m=draw(st.floats(0, 0.005)))
    flow = draw(SECTION["flow"])
    way = draw(st.sampled_from(["velocity_m_s", "velocity_readings_m_s", "dynamic_pressure_Pa", "flow_m3_s"]))
    ways = {"velocity_m_s": None, "velocity_readings_m_s": (), "dynamic_pressure_Pa": None, "flow_m3_s": None}
    speed = draw(st.floats(0.5, 50.0))
    ways[way] = (speed, 2 * speed) if way == "velocity_readings_m_s" else speed
    flow = replace(flow, **ways, duct_height_m=0.5, duct_width_m=0.5, row=2, rows=draw(st.integers(2, 9)))
    flow = replace(
        flow, pitch_transverse_m=draw(st.floats(0.05, 1)), pitch_longitudinal_m=draw(st.floats(0.05, 1))
    )
    air = draw(SECTION["air"])
    air = replace(air, temperature_end_C=draw(st.none() | st.just(air.temperature_C)))
    return Setup(
        body, draw(SECTION["thermometer"]), draw(SECTION["recording"]), air, flow, draw(SECTION["limits"])
    )


@settings(max_examples=150, deadline=None)
@given(usable_setups())
def test_any_usable_setup_reads_back_as_it_was_written(setup):
    """Written as TOML and read again, a set-up is equal in every field."""
    assert problems(setup) == ()
    assert setup_from_text(setup_to_text(setup), "bench.toml") == setup


@settings(max_examples=400, deadline=None)
@given(
    st.text(max_size=300) | st.tuples(st.sampled_from(EXAMPLE.splitlines()), st.text(max_size=40)).map("\n".join)
)
def test_any_text_is_read_or_refused(text):
    """No text makes the reader raise anything but its own refusal."""
    sentence = refusal(text)
    assert sentence.isprintable()
    assert sentence.startswith("bench.toml") or not sentence


@settings(max_examples=300, deadline=None)
@given(st.integers(0, len(EXAMPLE) - 1), st.integers(0, 30), st.text(max_size=6))
def test_the_example_with_a_piece_changed_is_read_or_refused(at, cut, put):
    """Damage anywhere in a good file is read as another set-up or refused in one line."""
    assert refusal(EXAMPLE[:at] + put + EXAMPLE[at + cut :]).isprintable()


def test_the_example_of_the_contract_is_read(tmp_path):
    """The example reads to the numbers that stand in it, the rest to the defaults, with a mark of UTF-8."""
    path = tmp_path / "bench.toml"
    path.write_bytes(b"\xef\xbb\xbf" + EXAMPLE.encode())
    setup = read_setup(path)
    assert setup.body.diameter_m == 0.016
    assert setup.body.mass_kg == 0.189
    assert setup.air.pressure_Pa == 101325.0
    assert isinstance(setup.air.pressure_Pa, float)
    assert (setup.flow.row, setup.flow.rows) == (3, 5)
    assert setup.recording.beat_s == 5.0


def test_the_example_in_the_documents_is_read():
    """The example that a refusal points to stands in DEVELOPERS.md and is read as it is."""
    documents = Path(__file__).parents[2].joinpath("DEVELOPERS.md").read_text(encoding="utf-8")
    example = documents.split("```toml")[1].split("```")[0]
    assert setup_from_text(example, "DEVELOPERS.md") == setup_from_text(EXAMPLE, "example.toml")


def test_the_least_that_is_required_is_enough():
    """Shape with sizes, material, resolution, mode, air temperature and velocity make a set-up."""
    text = """
        body = {shape = "sphere", diameter_m = 0.02, material = "brass"}
        thermometer.resolution_K = 1
        recording.mode = "beat"
        air.temperature_C = 21
        flow.velocity_m_s = 5
    """
    assert setup_from_text(text, "least.toml") == Setup(
        Body(shape="sphere", diameter_m=0.02, material="brass"),
        Thermometer(resolution_K=1.0),
        Recording(mode="beat"),
        Surrounding(temperature_C=21.0),
        Flow(velocity_m_s=5.0),
    )


def test_a_run_in_still_air_needs_no_velocity():
    """With kind = "still-air" the section [flow] may stay empty."""
    text = EXAMPLE[: EXAMPLE.index("[flow]")].replace('mode = "change"', 'mode = "change"\nkind = "still-air"')
    assert setup_from_text(text, "still.toml").flow == Flow()


def test_the_whole_setup_is_given_for_json():
    """Every key of every section is there, with what was given or its default."""
    whole = setup_to_dict(setup_from_text(EXAMPLE, "bench.toml"))
    assert {section: set(keys) for section, keys in whole.items()} == {
        section: {field.name for field in fields(kind)} for section, kind in SECTIONS.items()
    }
    assert whole["recording"]["beat_s"] == 5.0
    assert whole["body"]["side_a_m"] is None


@pytest.mark.parametrize("digits", ["9" * 5000, "[" * 5000, "{a=" * 3000, "1e999"])
def test_a_monstrous_value_is_refused(digits):
    """Thousands of digits or brackets are refused like any other slip."""
    with pytest.raises(BadSetup, match=r"^bench.toml"):
        setup_from_text(f"[body]\ndiameter_m = {digits}", "bench.toml")

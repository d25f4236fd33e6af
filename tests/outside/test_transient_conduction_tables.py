"""Eigenvalues and centre amplitudes of transient conduction against handbook and library.

One-term coefficients ζ₁ and C₁: Incropera et al., Fundamentals of Heat and Mass Transfer, table 5.1 (Bi with the
half thickness of the wall, the radius of cylinder and sphere). Bessel functions: SciPy. A short cylinder: the
product of the two one-dimensional solutions, against the project's own finite volumes, and against one mesh over
radius and length that knows of no product."""

import numpy as np
import pytest
from scipy import sparse, special
from scipy.sparse.linalg import eigsh

from core.bench.body import thermal_body
from core.bench.setup import Body
from core.cooling.conduction import amplitudes, bessel, eigenvalues, factors_of, modes_of
from core.cooling.finite_volume import decay_in

TABLE = [
    # Bi, then ζ₁, C₁ of wall, cylinder, sphere
    (0.01, 0.0998, 1.0017, 0.1412, 1.0025, 0.1730, 1.0030),
    (0.1, 0.3111, 1.0161, 0.4417, 1.0246, 0.5423, 1.0298),
    (1.0, 0.8603, 1.1191, 1.2558, 1.2071, 1.5708, 1.2732),
    (10.0, 1.4289, 1.2620, 2.1795, 1.5677, 2.8363, 1.9249),
]


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"Bi {row[0]}")
@pytest.mark.parametrize(("place", "kind"), [(0, "wall"), (1, "cylinder"), (2, "sphere")])
def test_the_one_term_table_is_met_to_its_last_digit(row, place, kind):
    zeta = eigenvalues(kind, np.array([row[0]]), 1)
    assert zeta[0, 0] == pytest.approx(row[1 + 2 * place], abs=6e-5)
    assert amplitudes(kind, zeta, 0.0)[0, 0] == pytest.approx(row[2 + 2 * place], abs=6e-5)


def test_bessel_functions_agree_with_scipy():
    x = np.linspace(0.0, 20.0, 2001)
    assert np.max(np.abs(bessel(0, x) - special.j0(x))) < 1e-14
    assert np.max(np.abs(bessel(1, x) - special.j1(x))) < 1e-14


@pytest.mark.parametrize("kind", ["wall", "cylinder", "sphere"])
def test_every_eigenvalue_solves_its_condition(kind):
    biot = np.geomspace(1e-5, 300.0, 40)
    zeta = eigenvalues(kind, biot, 6)
    left = {
        "wall": lambda z: z * np.sin(z) - biot * np.cos(z),
        "cylinder": lambda z: z * special.j1(z) - biot * special.j0(z),
        "sphere": lambda z: z * np.cos(z) - (1.0 - biot) * np.sin(z),
    }[kind](zeta)
    assert np.all(np.diff(zeta, axis=0) > 0.0)
    assert np.max(np.abs(left) / (1.0 + biot)) < 1e-8


@pytest.mark.parametrize("exposed", ["side", "side+end", "all"])
def test_a_short_cylinder_decays_as_its_finite_volumes_do(exposed):
    body = Body("cylinder", diameter_m=0.03, length_m=0.05, density_kg_m3=1400.0, heat_capacity_J_kgK=1200.0,
                conductivity_W_mK=0.6, exposed=exposed, axial_offset_m=0.01)  # fmt: skip
    thermal = thermal_body(body)
    modes = modes_of(factors_of(body), np.array([40.0]), 0.6, 0.6 / 1400.0 / 1200.0,
                     thermal.area_m2 / thermal.volume_m3)  # fmt: skip
    decay = decay_in(body, thermal, 40.0)
    lumped_rate = 40.0 * thermal.area_m2 / thermal.capacity_J_K(56.0)
    assert modes.share[0] * lumped_rate == pytest.approx(decay.rate_s[0], rel=1e-4)
    later = np.array([150.0, 300.0, 600.0])
    more = 1.0 + np.exp(-np.outer(later, modes.rate_s[:, 0])) @ modes.amplitude[:, 0]
    whole = decay.at(later) / (decay.share[0] * np.exp(-decay.rate_s[0] * later))
    assert more == pytest.approx(whole, rel=2e-4)


def test_the_published_thermocouple_bead_is_met():
    """Incropera et al., example 5.1: a bead with τ = 1 s at h = 400 W/(m²·K), ρ 8500, c 400, k 20 SI units, has
    D = 0.706 mm; from 25 °C in gas of 200 °C it reaches 199 °C after 5.2 s."""
    bead = thermal_body(Body("sphere", diameter_m=7.06e-4, density_kg_m3=8500.0, heat_capacity_J_kgK=400.0,
                             conductivity_W_mK=20.0, exposed="all"))  # fmt: skip
    tau = bead.capacity_J_K(20.0) / (400.0 * bead.area_m2)
    assert tau == pytest.approx(1.0, abs=2e-3)
    assert tau * np.log((200.0 - 25.0) / (200.0 - 199.0)) == pytest.approx(5.2, abs=0.05)


def first_mode_on_a_mesh(radius, length, h, k, ends, rings=70, slices=140):
    """Decay rate over the diffusivity, excess along the axis, and places on it, of the lasting mode of a cylinder.

    Started at one temperature; finite volumes in radius and length at once, 0 to 2 of whose ends lose heat."""
    r, z = np.linspace(0.0, radius, rings + 1), np.linspace(0.0, length, slices + 1)
    rim, dz = (r[1:] ** 2 - r[:-1] ** 2) / 2.0, length / slices
    volume = np.outer(rim, np.full(slices, dz)).ravel()
    across = np.append(r[1:-1] / np.diff((r[1:] + r[:-1]) / 2.0), 0.0)
    matrix = np.diag(across + np.append(0.0, across[:-1])) - np.diag(across[:-1], 1) - np.diag(across[:-1], -1)
    matrix[-1, -1] += radius / (k / h + (r[-1] - r[-2]) / 2.0)
    along = np.full(slices, 2.0 / dz)
    along[0], along[-1] = 1.0 / dz, 1.0 / dz
    end = 1.0 / (k / h + dz / 2.0)
    along[-1] += end * (ends >= 1)
    along[0] += end * (ends == 2)
    line = sparse.diags([np.full(slices - 1, -1.0 / dz), along, np.full(slices - 1, -1.0 / dz)], [-1, 0, 1])
    whole = sparse.kron(matrix, sparse.identity(slices) * dz) + sparse.kron(sparse.diags(rim), line)
    scale = sparse.diags(volume**-0.5)
    rate, mode = eigsh((scale @ whole @ scale).tocsc(), k=1, sigma=0.0)
    shape = mode[:, 0] / np.sqrt(volume)
    excess = shape * (mode[:, 0] @ np.sqrt(volume))
    return rate[0], excess.reshape(rings, slices)[0], (z[1:] + z[:-1]) / 2.0


@pytest.mark.parametrize(("exposed", "ends"), [("side", 0), ("side+end", 1), ("all", 2)])
def test_a_short_cylinder_by_product_agrees_with_one_mesh_over_both_directions(exposed, ends):
    """Decay rate, and the excess at five places on the axis, on a body of Bi 0.6 across and 1 to 2 along it."""
    radius, length, h, k = 0.015, 0.05, 40.0, 1.0
    rate, axis, place = first_mode_on_a_mesh(radius, length, h, k, ends)
    for offset in (-0.02, -0.01, 0.0, 0.012, 0.024):
        body = Body("cylinder", diameter_m=2 * radius, length_m=length, density_kg_m3=1400.0,
                    heat_capacity_J_kgK=1200.0, conductivity_W_mK=k, exposed=exposed,
                    axial_offset_m=offset)  # fmt: skip
        thermal = thermal_body(body)
        ratio = thermal.area_m2 / thermal.volume_m3
        modes = modes_of(factors_of(body), np.array([h]), k, 1e-6, ratio)
        assert modes.share[0] * h * ratio / k == pytest.approx(rate, rel=2e-4)
        product = 1.0
        for one in factors_of(body):
            zeta = eigenvalues(one.kind, np.array([h * one.half_m / k]), 1)
            product *= amplitudes(one.kind, zeta, one.place)[0, 0]
        assert product == pytest.approx(np.interp(length / 2 + offset, place, axis), rel=3e-4)

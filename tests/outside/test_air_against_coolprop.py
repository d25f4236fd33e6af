"""Air against CoolProp's equations of state over the whole stated range; the worst deviations are printed."""

import numpy as np
import pytest
from CoolProp.CoolProp import PT_INPUTS, AbstractState, PropsSI
from CoolProp.HumidAirProp import HAPropsSI

from core.bench.air import (
    DRY_AIR_MOLAR_MASS_kg_mol,
    WATER_MOLAR_MASS_kg_mol,
    air_properties,
    dry_air_transport,
    saturation_pressure_Pa,
    vapour_conductivity_W_mK,
    vapour_fraction,
    vapour_viscosity_Pa_s,
)

TEMPERATURES_C = np.linspace(-10.0, 120.0, 27)
PRESSURES_Pa = np.linspace(60e3, 105e3, 6)
NAMES = ("density", "viscosity", "conductivity", "heat capacity", "Prandtl")


def ours(air):
    return np.array(
        [air.density_kg_m3, air.viscosity_Pa_s, air.conductivity_W_mK, air.heat_capacity_J_kgK, air.prandtl]
    )


def show(title, worst):
    print(title, *(f"{name} {value:.1e}" for name, value in zip(NAMES, worst, strict=False)), sep="  ")


def test_dry_air_agrees_with_the_full_equation_of_state_over_the_whole_range():
    """Lemmon et al. 2000 and Lemmon and Jacobsen 2004 in full, by CoolProp; stated: ρ 0.002 %, η and λ 0.0001 %,
    c_p and Pr 0.01 %."""
    state = AbstractState("HEOS", "Air")
    worst = np.zeros(5)
    for temperature in TEMPERATURES_C:
        for pressure in PRESSURES_Pa:
            state.update(PT_INPUTS, pressure, temperature + 273.15)
            eta, lam, cp = state.viscosity(), state.conductivity(), state.cpmass()
            theirs = np.array([state.rhomass(), eta, lam, cp, eta * cp / lam])
            worst = np.maximum(worst, np.abs(ours(air_properties(temperature, pressure)) / theirs - 1.0))
    show("dry air, worst relative deviation:", worst)
    assert np.all(worst < [2e-5, 1e-6, 1e-6, 1e-4, 1e-4])


def wilke_on_coolprop_components(temperature_K, pressure, x):
    """Wilke's rule written out for two gases with CoolProp's own pure-gas values at the mixture's temperature."""
    M = np.array([DRY_AIR_MOLAR_MASS_kg_mol, WATER_MOLAR_MASS_kg_mol])
    fractions = np.array([1.0 - x, x])
    dew = min(0.5 * PropsSI("P", "T", temperature_K, "Q", 1, "Water"), 1000.0)
    states = (("Air", pressure), ("Water", dew))
    eta, lam = (np.array([PropsSI(k, "T", temperature_K, "P", p, gas) for gas, p in states]) for k in ("V", "L"))
    phi = (1 + np.sqrt(eta[:, None] / eta) * (M / M[:, None]) ** 0.25) ** 2 / np.sqrt(8 * (1 + M[:, None] / M))
    weights = fractions / (phi @ fractions)
    return weights @ eta, weights @ lam


@pytest.mark.parametrize(
    ("low", "high", "limits"),
    [(0.0, 0.1, [5e-5, 5e-5, 1e-4, 3e-4, 3e-4]), (0.1, 0.94, [6e-4, 2e-4, 4e-4, 1.2e-2, 1.2e-2])],
    ids=["vapour up to 0.1", "vapour above 0.1"],
)
def test_moist_air_agrees_with_humid_air_equations(low, high, limits):
    """Density and c_p against HAPropsSI (Herrmann et al. 2009). Its viscosity and conductivity take the vapour's
    at the boiling point of the total pressure whatever the temperature, so η and λ are held against the same
    mixture rule on CoolProp's pure gases at the mixture's own temperature."""
    worst = np.zeros(5)
    points = 0
    for temperature in TEMPERATURES_C[TEMPERATURES_C > 0.01]:
        for pressure in PRESSURES_Pa:
            saturation = saturation_pressure_Pa(temperature)
            for humidity in np.linspace(0.02, 1.0, 8):
                if humidity * saturation > 0.94 * pressure:
                    continue
                x = vapour_fraction(temperature, pressure, humidity)
                if not low < x <= high:
                    continue
                T = temperature + 273.15
                volume, cp = (HAPropsSI(k, "T", T, "P", pressure, "psi_w", x) for k in ("Vha", "cp_ha"))
                eta, lam = wilke_on_coolprop_components(T, pressure, x)
                theirs = np.array([1.0 / volume, eta, lam, cp, eta * cp / lam])
                deviation = np.abs(ours(air_properties(temperature, pressure, humidity)) / theirs - 1.0)
                worst, points = np.maximum(worst, deviation), points + 1
    show(f"moist air, {low:g} < x_v <= {high:g}, {points} points:", worst)
    assert points > 100
    assert np.all(worst < limits)


def test_moist_transport_agrees_with_humid_air_equations_where_these_hold():
    """At the boiling point of the total pressure HAPropsSI takes the vapour at the right temperature; there the
    viscosity and conductivity agree within 0.7 % and 1.4 %, the rest being saturated instead of dilute vapour."""
    worst = np.zeros(2)
    for pressure in PRESSURES_Pa:
        boiling = PropsSI("T", "P", pressure, "Q", 1, "Water")
        for humidity in (0.05, 0.2, 0.5, 0.8):
            air = air_properties(boiling - 273.15, pressure, humidity)
            x = vapour_fraction(boiling - 273.15, pressure, humidity)
            theirs = np.array([HAPropsSI(k, "T", boiling, "P", pressure, "psi_w", x) for k in ("mu", "k")])
            mine = np.array([air.viscosity_Pa_s, air.conductivity_W_mK])
            worst[0] = max(worst[0], abs(mine[0] / theirs[0] - 1.0))
            worst[1] = max(worst[1], abs(mine[1] / theirs[1] - 1.0))
    print(f"moist transport at boiling: viscosity {worst[0]:.1e}, conductivity {worst[1]:.1e}")
    assert np.all(worst < [7e-3, 1.4e-2])


def test_pure_vapour_and_its_saturation_agree_with_iapws():
    """Wagner and Pruß's saturation line within 0.03 % and the dilute vapour's transport within 0.01 %."""
    for temperature in np.linspace(0.5, 120.0, 25):
        T = temperature + 273.15
        saturation = PropsSI("P", "T", T, "Q", 0, "Water")
        assert saturation_pressure_Pa(temperature) == pytest.approx(saturation, rel=3e-4)
        assert vapour_viscosity_Pa_s(T) == pytest.approx(PropsSI("V", "T", T, "P", 50, "Water"), rel=1e-4)
        assert vapour_conductivity_W_mK(T) == pytest.approx(PropsSI("L", "T", T, "P", 50, "Water"), rel=1e-4)


def test_vapour_fraction_agrees_with_humid_air_equations():
    """f·p_s/p against HAPropsSI above freezing, where both mean saturation over liquid water."""
    worst = 0.0
    for temperature in np.linspace(0.5, 95.0, 20):
        for pressure in PRESSURES_Pa:
            if saturation_pressure_Pa(temperature) > 0.9 * pressure:
                continue
            theirs = HAPropsSI("psi_w", "T", temperature + 273.15, "P", pressure, "R", 0.6)
            worst = max(worst, abs(vapour_fraction(temperature, pressure, 0.6) / theirs - 1.0))
    print(f"vapour fraction, worst relative deviation: {worst:.1e}")
    assert worst < 5e-4


@pytest.mark.parametrize(("T", "eta_uPa_s", "lam_mW_mK"), [(100.0, 7.09559, 9.35902), (300.0, 18.5230, 26.3529)])
def test_dilute_air_gives_the_published_check_values(T, eta_uPa_s, lam_mW_mK):
    """Lemmon and Jacobsen, Int. J. Thermophys. 25 (2004) 21–69, table V, zero density."""
    eta, lam = dry_air_transport(T)
    assert 1e6 * eta == pytest.approx(eta_uPa_s, abs=6e-5)
    assert 1e3 * lam == pytest.approx(lam_mW_mK, abs=6e-5)

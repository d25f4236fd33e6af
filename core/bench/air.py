"""Properties of dry and moist air from temperature, pressure and humidity, in plain `math`.

Measured against CoolProp 8 (`PropsSI` for dry air, `HAPropsSI` for moist air) over the whole stated range, in
tests/outside/test_air_against_coolprop.py; the worst deviations are in the docstring of `air_properties`."""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, isfinite, log, sqrt

from core.errors import OutOfRange

ZERO_CELSIUS_K = 273.15
GAS_CONSTANT_J_molK = 8.314472  # CODATA 2006, the value in CIPM-2007
DRY_AIR_MOLAR_MASS_kg_mol = 0.02896546  # CIPM-2007, with 400 µmol/mol of carbon dioxide
WATER_MOLAR_MASS_kg_mol = 0.01801528  # CIPM-2007

TEMPERATURE_RANGE_C = (-10.0, 120.0)
PRESSURE_RANGE_Pa = (60e3, 105e3)

Powers = tuple[tuple[float, float], ...]

# Second virial coefficients as Σ a (T/100 K)^b [cm³/mol].
AIR_AIR_VIRIAL: Powers = ((34.9568, 0.0), (-66.8772, -1.0), (-210.141, -2.0), (92.4746, -3.0))
AIR_WATER_VIRIAL: Powers = ((66.5687, -0.237), (-238.834, -1.048), (-176.755, -3.183))
WATER_WATER_VIRIAL: Powers = ((344.04, -0.5), (-758.26, -0.8), (-24219.0, -3.35), (-3978200.0, -8.3))


@dataclass(frozen=True, slots=True)
class Air:
    """Properties of air at one state; the fields of `air --json`."""

    density_kg_m3: float
    viscosity_Pa_s: float
    kinematic_viscosity_m2_s: float
    conductivity_W_mK: float
    heat_capacity_J_kgK: float
    prandtl: float


def saturation_pressure_Pa(temperature_C: float) -> float:
    """Saturation pressure of water vapour over liquid water, [Pa].

    ln(p_s/p_c) = (T_c/T) Σ a_i θ^n_i with θ = 1 − T/T_c.

    Parameters
    ----------
    temperature_C : temperature [°C]

    Notes
    -----
    Valid 0.01–374 °C within 0.03 % (Wagner and Pruß); below 0 °C it is continued over supercooled water, which is
    how hygrometers state relative humidity there (WMO No. 8).

    References
    ----------
    Wagner and Pruß, J. Phys. Chem. Ref. Data 31 (2002) 387–535, equation 2.5.
    """
    T = temperature_C + ZERO_CELSIUS_K
    theta = 1.0 - T / 647.096
    root = sqrt(theta)
    high = -15.9618719 + 1.80122502 * theta * theta * theta * root
    terms = -7.85951783 + 1.84408259 * root + theta * theta * (-11.7866497 + 22.6807411 * root + theta * high)
    return 22.064e6 * exp(647.096 / T * theta * terms)


def vapour_fraction(temperature_C: float, pressure_Pa: float, relative_humidity: float) -> float:
    """Mole fraction of water vapour in air, x_v = φ f p_s / p, [-].

    The enhancement factor f is that of CIPM-2007, its excess over 1 multiplied by 1 − (p_s/p)², so that it ends at
    1 where the vapour alone bears the pressure; f is then within 3e-4 of CoolProp's up to there.

    Parameters
    ----------
    temperature_C : temperature at which the humidity was read [°C]
    pressure_Pa : absolute pressure [Pa]
    relative_humidity : relative humidity over liquid water, 0 to 1 [-]

    Raises
    ------
    OutOfRange : the vapour alone would exceed the pressure

    References
    ----------
    Picard et al., Metrologia 45 (2008) 149–155, A1.1–A1.2 (fitted there for 15–27 °C and 60–110 kPa).
    """
    if relative_humidity == 0.0:
        return 0.0
    saturation = saturation_pressure_Pa(temperature_C)
    excess = 6.2e-4 + 3.14e-8 * pressure_Pa + 5.6e-7 * temperature_C * temperature_C
    share = saturation / pressure_Pa
    fraction = relative_humidity * share * (1.0 + excess * max(0.0, 1.0 - share * share))
    if fraction > 1.0:
        raise OutOfRange(
            f"Air at {temperature_C:g} °C and {pressure_Pa:g} Pa cannot have a relative humidity of "
            f"{relative_humidity:g}: the vapour alone would exceed the pressure; give at most "
            f"{pressure_Pa / saturation:.3f}."
        )
    return fraction


def _virial(powers: Powers, hundreds: float) -> tuple[float, float]:
    """B and T² d²B/dT² of a sum of powers at T = 100 K · `hundreds`, both [m³/mol]."""
    value = curvature = 0.0
    for a, b in powers:
        term = a * hundreds**b
        value += term
        curvature += b * (b - 1.0) * term
    return value * 1e-6, curvature * 1e-6


def _einstein(u: float) -> float:
    """Einstein's heat-capacity function u² e^u / (e^u − 1)², [-]."""
    e = exp(-u)
    return u * u * e / ((1.0 - e) * (1.0 - e))


def _dilute_viscosity_uPa_s(temperature_K: float) -> float:
    x = log(temperature_K / 103.3)
    collision = exp(0.431 + x * (-0.4623 + x * (0.08406 + x * (0.005341 - 0.00331 * x))))
    return 0.0266958 * sqrt(28.9586 * temperature_K) / (0.360**2 * collision)


def dry_air_transport(temperature_K: float, density_mol_m3: float = 0.0) -> tuple[float, float]:
    """Viscosity [Pa·s] and thermal conductivity [W/(m·K)] of dry air: dilute part plus leading residual terms.

    η = η°(T) + η^r(τ, δ), λ = λ°(T) + λ^r(τ, δ), τ = 132.6312 K / T, δ = ρ / (10 447.7 mol/m³).

    Parameters
    ----------
    temperature_K : temperature [K]
    density_mol_m3 : molar density [mol/m³]

    Notes
    -----
    Stated uncertainties 1 % (η) and 2 % (λ). Two of five residual terms of η and two of six of λ are kept, and the
    critical enhancement of λ is left out: up to 105 kPa that changes η by 2e-8 and λ by 2e-7 at most.

    References
    ----------
    Lemmon and Jacobsen, Int. J. Thermophys. 25 (2004) 21–69, equations 1–6.
    """
    dilute = _dilute_viscosity_uPa_s(temperature_K)
    tau = 132.6312 / temperature_K
    delta = density_mol_m3 / 10447.7
    eta = dilute + delta * (10.72 * tau**0.2 - 8.876 * tau**0.6 * exp(-delta))
    lam = 1.308 * dilute + 1.405 * tau**-1.1 - 1.036 * tau**-0.3 + delta * (8.743 * tau**0.1 + 14.76 * delta)
    return 1e-6 * eta, 1e-3 * lam


def vapour_viscosity_Pa_s(temperature_K: float) -> float:
    """Viscosity of dilute water vapour, [Pa·s]; stated uncertainty 2 %.

    Parameters
    ----------
    temperature_K : temperature [K]

    References
    ----------
    IAPWS R12-08 (2008), Viscosity of Ordinary Water Substance, equation 11, table 1.
    """
    t = 647.096 / temperature_K
    return 1e-4 / sqrt(t) / (1.67752 + t * (2.20462 + t * (0.6366564 - 0.241605 * t)))


def vapour_conductivity_W_mK(temperature_K: float) -> float:
    """Thermal conductivity of dilute water vapour, [W/(m·K)]; stated uncertainty 2 %.

    Parameters
    ----------
    temperature_K : temperature [K]

    References
    ----------
    IAPWS R15-11 (2011), Thermal Conductivity of Ordinary Water Substance, equation 16, table 1.
    """
    t = 647.096 / temperature_K
    return 1e-3 / (
        sqrt(t) * (2.443221e-3 + t * (1.323095e-2 + t * (6.770357e-3 + t * (-3.454586e-3 + 4.096266e-4 * t))))
    )


def _checked(name: str, value: float, low: float, high: float, unit: str) -> None:
    if not (isfinite(value) and low <= value <= high):
        raise OutOfRange(
            f"Air properties hold for a {name} of {low:g} to {high:g}{unit}, not {value:g}{unit}; "
            "check the value and its unit."
        )


def air_properties(
    temperature_C: float,
    pressure_Pa: float,
    relative_humidity: float = 0.0,
    humidity_at_C: float | None = None,
) -> Air:
    """Density, viscosity, conductivity, heat capacity and Prandtl number of dry or moist air.

    ρ = p (x_a M_a + x_v M_v) / (Z R T), Z = 1 + B p / (R T), B = x_a² B_aa + 2 x_a x_v B_av + x_v² B_vv;
    η by Wilke, λ by Wassiljewa with Wilke's factors, c_p = Σ x_i c_p,i° − p T d²B/dT².

    Parameters
    ----------
    temperature_C : temperature at which the properties are wanted, −10 to 120 [°C]
    pressure_Pa : absolute pressure, 60e3 to 105e3 [Pa]
    relative_humidity : relative humidity over liquid water, 0 to 1 [-]
    humidity_at_C : temperature at which that humidity was read; `temperature_C` if left out. Air that is warmed
        beside a hot body keeps its vapour, not its relative humidity [°C]

    Returns
    -------
    `Air`, all SI

    Raises
    ------
    OutOfRange : an input outside its range; more vapour than the air can hold at either temperature

    Notes
    -----
    Largest relative deviation measured over −10…120 °C and 60…105 kPa: ρ, c_p from CoolProp 8, dry and humid;
    η, λ of moist air from the same mixture rule on CoolProp's pure components (the rule itself is good to about
    2 %, Wilke 1950). x_v is the mole fraction of vapour; 0.1 is saturation at 46 °C and 101 kPa.

    ========  ========  =========  ===========================
    property  dry       x_v ≤ 0.1  0.1 < x_v, up to saturation
    ========  ========  =========  ===========================
    ρ         0.0015 %  0.005 %    0.06 %
    η         0.0001 %  0.005 %    0.02 % (dilute), 0.7 % at boiling
    λ         0.0001 %  0.01 %     0.04 % (dilute), 1.4 % at boiling
    c_p       0.01 %    0.03 %     1.2 %
    Pr        0.01 %    0.03 %     1.2 %
    ========  ========  =========  ===========================

    The vapour's own η and λ are those at zero density, hence the difference beside boiling water. The equations
    claim 1 % (η) and 2 % (λ) against experiment. About 15 µs a call, 7 µs when dry.

    References
    ----------
    Picard et al., Metrologia 45 (2008) 149–155: density, molar masses. Its own Z is fitted for 15–27 °C and
    60–110 kPa; the density here agrees there within 4e-6, and the virial Z holds beyond.
    Hyland and Wexler, ASHRAE Trans. 89 (1983) 500–519: B_aa. Harvey and Huang, Int. J. Thermophys. 28 (2007)
    556–565: B_av. Harvey and Lemmon, J. Phys. Chem. Ref. Data 33 (2004) 369–376: B_vv.
    Lemmon et al., J. Phys. Chem. Ref. Data 29 (2000) 331–385, equation 24: ideal-gas heat capacity of air.
    Wagner and Pruß, J. Phys. Chem. Ref. Data 31 (2002) 387–535, table 6.1: that of water vapour.
    Wilke, J. Chem. Phys. 18 (1950) 517–519; as used for moist air by Tsilingiris, Energy Convers. Manag. 49 (2008)
    1098–1110.
    """
    _checked("temperature", temperature_C, *TEMPERATURE_RANGE_C, " °C")
    _checked("pressure", pressure_Pa, *PRESSURE_RANGE_Pa, " Pa")
    _checked("relative humidity", relative_humidity, 0.0, 1.0, "")
    read_at_C = temperature_C if humidity_at_C is None else humidity_at_C
    _checked("temperature of the humidity reading", read_at_C, *TEMPERATURE_RANGE_C, " °C")
    x = vapour_fraction(read_at_C, pressure_Pa, relative_humidity)
    if x > 0.0 and temperature_C < read_at_C and x > vapour_fraction(temperature_C, pressure_Pa, 1.0):
        raise OutOfRange(
            f"Air with a relative humidity of {relative_humidity:g} at {read_at_C:g} °C condenses when cooled to "
            f"{temperature_C:g} °C; its properties as a gas are not defined there."
        )
    return _mixture(temperature_C + ZERO_CELSIUS_K, pressure_Pa, x)


def _mixture(T: float, p: float, x: float) -> Air:
    """Properties of air at T [K], p [Pa] with a mole fraction x of water vapour [-]."""
    dry = 1.0 - x
    hundreds = T / 100.0
    B, curvature = _virial(AIR_AIR_VIRIAL, hundreds)
    capacity = _dry_air_ideal_heat_capacity(T)
    if x > 0.0:
        B_av, curvature_av = _virial(AIR_WATER_VIRIAL, hundreds)
        B_vv, curvature_vv = _virial(WATER_WATER_VIRIAL, hundreds)
        B = dry * dry * B + 2.0 * dry * x * B_av + x * x * B_vv
        curvature = dry * dry * curvature + 2.0 * dry * x * curvature_av + x * x * curvature_vv
        capacity = dry * capacity + x * _vapour_ideal_heat_capacity(T)
    capacity -= p * curvature / T
    molar_mass = dry * DRY_AIR_MOLAR_MASS_kg_mol + x * WATER_MOLAR_MASS_kg_mol
    ideal = p / (GAS_CONSTANT_J_molK * T)
    density_mol = ideal / (1.0 + B * ideal)
    density = density_mol * molar_mass
    eta, lam = _transport(T, density_mol * dry, x)
    heat_capacity = capacity / molar_mass
    return Air(density, eta, eta / density, lam, heat_capacity, eta * heat_capacity / lam)


def _transport(T: float, air_density_mol_m3: float, x: float) -> tuple[float, float]:
    """Viscosity [Pa·s] and conductivity [W/(m·K)] of air at T [K] with a mole fraction x of water vapour [-].

    η = Σ x_i η_i / Σ_j x_j Φ_ij (Wilke 1950), and λ with the same Φ (Wassiljewa; Mason and Saxena 1958)."""
    eta_a, lam_a = dry_air_transport(T, air_density_mol_m3)
    if x == 0.0:
        return eta_a, lam_a
    eta_v, lam_v = vapour_viscosity_Pa_s(T), vapour_conductivity_W_mK(T)
    M = DRY_AIR_MOLAR_MASS_kg_mol / WATER_MOLAR_MASS_kg_mol
    ratio = sqrt(eta_a / eta_v)
    phi_av = (1.0 + ratio * M**-0.25) ** 2 / sqrt(8.0 * (1.0 + M))
    phi_va = (1.0 + M**0.25 / ratio) ** 2 / sqrt(8.0 * (1.0 + 1.0 / M))
    share_a = (1.0 - x) / (1.0 - x + x * phi_av)
    share_v = x / (x + (1.0 - x) * phi_va)
    return share_a * eta_a + share_v * eta_v, share_a * lam_a + share_v * lam_v


def _dry_air_ideal_heat_capacity(T: float) -> float:
    """Molar ideal-gas heat capacity of dry air, [J/(mol·K)] (Lemmon et al. 2000, equation 24).

    The term for the dissociation of oxygen is left out: below 400 K it is under 1e-9 of the whole."""
    return GAS_CONSTANT_J_molK * (
        3.490888032
        + T * (2.395525583e-6 + T * (7.172111248e-9 - 3.115413101e-13 * T))
        + 0.223806688 / (T * sqrt(T))
        + 0.791309509 * _einstein(3364.011 / T)
        + 0.212236768 * _einstein(2242.45 / T)
    )


def _vapour_ideal_heat_capacity(T: float) -> float:
    """Molar ideal-gas heat capacity of water vapour, [J/(mol·K)] (Wagner and Pruß 2002, table 6.1, 130–2000 K)."""
    t = 647.096 / T
    return GAS_CONSTANT_J_molK * (
        4.00632
        + 0.012436 * _einstein(1.28728967 * t)
        + 0.97315 * _einstein(3.53734222 * t)
        + 1.27950 * _einstein(7.74073708 * t)
        + 0.96956 * _einstein(9.24437796 * t)
        + 0.24873 * _einstein(27.5075105 * t)
    )

"""Dimensionless numbers, as one-line functions of SI quantities."""

from __future__ import annotations

GRAVITY_m_s2 = 9.80665  # standard acceleration, CGPM 1901


def film_temperature_C(surface_C: float, air_C: float) -> float:
    """Film temperature, the mean of surface and undisturbed air, [°C].

    Parameters
    ----------
    surface_C, air_C : temperatures [°C]
    """
    return 0.5 * (surface_C + air_C)


def reynolds(velocity_m_s: float, length_m: float, kinematic_viscosity_m2_s: float) -> float:
    """Reynolds number V L / ν, [-].

    Parameters
    ----------
    velocity_m_s : velocity [m/s]
    length_m : characteristic length [m]
    kinematic_viscosity_m2_s : kinematic viscosity [m²/s]
    """
    return velocity_m_s * length_m / kinematic_viscosity_m2_s


def nusselt(h_W_m2K: float, length_m: float, conductivity_W_mK: float) -> float:
    """Nusselt number h L / λ with the conductivity of the fluid, [-].

    Parameters
    ----------
    h_W_m2K : heat-transfer coefficient [W/(m²·K)]
    length_m : characteristic length [m]
    conductivity_W_mK : conductivity of the fluid [W/(m·K)]
    """
    return h_W_m2K * length_m / conductivity_W_mK


def biot(h_W_m2K: float, half_thickness_m: float, conductivity_W_mK: float) -> float:
    """Biot number h L / λ with the conductivity of the solid, [-].

    Parameters
    ----------
    h_W_m2K : heat-transfer coefficient, all losses together [W/(m²·K)]
    half_thickness_m : radius, or half the thickness [m]
    conductivity_W_mK : conductivity of the solid [W/(m·K)]
    """
    return h_W_m2K * half_thickness_m / conductivity_W_mK


def grashof(
    surface_C: float,
    air_C: float,
    length_m: float,
    kinematic_viscosity_m2_s: float,
) -> float:
    """Grashof number g β |T_s − T∞| L³ / ν² of an ideal gas, β = 1/T at film temperature, [-].

    Parameters
    ----------
    surface_C, air_C : temperatures [°C]
    length_m : characteristic length [m]
    kinematic_viscosity_m2_s : kinematic viscosity at film temperature [m²/s]
    """
    expansion_1_K = 1.0 / (film_temperature_C(surface_C, air_C) + 273.15)
    return GRAVITY_m_s2 * expansion_1_K * abs(surface_C - air_C) * length_m**3 / kinematic_viscosity_m2_s**2


def rayleigh(grashof_number: float, prandtl: float) -> float:
    """Rayleigh number Gr Pr, [-].

    Parameters
    ----------
    grashof_number, prandtl : Grashof and Prandtl number at film temperature [-]
    """
    return grashof_number * prandtl


def richardson(grashof_number: float, reynolds_number: float) -> float:
    """Richardson number Gr / Re², both with the same length, [-].

    Far below 1 the flow is forced, far above 1 it is natural (Incropera et al., section 9.9).

    Parameters
    ----------
    grashof_number, reynolds_number : Grashof and Reynolds number [-]
    """
    return grashof_number / (reynolds_number * reynolds_number)

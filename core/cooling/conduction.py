"""Conduction inside the body: how much slower it cools than one of infinite conductivity, and its early modes.

Plane wall, long cylinder and sphere with one coefficient on their faces, started at one temperature, are sums of
eigenmodes C_n φ_n(x) exp(−ζ_n² α t/L²); a short cylinder and a block are products of them (Carslaw and Jaeger,
Conduction of Heat in Solids, 2nd ed. 1959, ch. 1.15, 3.11, 7.7, 9.4; Incropera et al., 6th ed. 2007, ch. 5.5–5.8).

After the early modes have died the body cools as a lumped one whose conductance is multiplied by
(ζ₁²/L² summed over the factors)·k V/(h A) < 1, at the centre as at the surface. The Bessel functions are means
of cosines (Abramowitz and Stegun 9.1.21): the trapezoidal rule on a full period converges faster than any power,
so that 40 points give them to rounding for the arguments met here."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from core.bench.setup import Body

Array = NDArray[np.float64]
Kind = Literal["wall", "cylinder", "sphere"]

MODES = 6
ROUNDS = 12  # Newton steps, halvings where one would leave the bracket
ROUNDS_FIRST = 4
STEP = 1e-3  # of ln coefficient, for a difference
CLOSING = 1.3  # rate of the mode that stands for those left out, over that of the last one followed
POINTS = 40
_ANGLES = pi * (np.arange(POINTS) + 0.5) / POINTS
_SINES = np.sin(_ANGLES)
_FIRST = {"wall": (1.0, 2.467), "cylinder": (2.0, 2.892), "sphere": (3.0, 3.290)}
"""ζ₁² = first·Bi/(1 + Bi/limit) has the right limits for small and large Bi: a start for Newton's steps."""
_J0_ZEROS = np.array([2.404825557695773, 5.520078110286311, 8.653727912911012, 11.791534439014281,
                      14.930917708487785, 18.071063967910922])  # fmt: skip
_J1_ZEROS = np.array([0.0, 3.831705970207512, 7.015586669815619, 10.173468135062722, 13.323691936314223,
                      16.470630050877633])  # fmt: skip


@dataclass(frozen=True, slots=True)
class Factor:
    """One direction of conduction: its kind, half thickness or radius [m], the sensor's place (0 to 1) in it."""

    kind: Kind
    half_m: float
    place: float


@dataclass(frozen=True, slots=True)
class Modes:
    """What conduction does for coefficients of shape (sets,).

    `share` of the lumped conductance at `whole_W_m2K`, which goes with that coefficient to the power `exponent`
    about there; `first`, the amplitude of the lasting mode at the sensor; the excess of the exposed faces (`face`)
    and of the whole body (`mean`) over that at the sensor, the latter to the power `flattens` of the coefficient;
    each of shape (sets,). Then the early modes beside the lasting one: relative `amplitude` and extra `rate_s`
    [1/s], shape (modes, sets). The last one stands for all that are left out, so that the body is at one temperature
    at time 0."""

    share: Array
    whole_W_m2K: Array
    exponent: Array
    first: Array
    face: Array
    mean: Array
    flattens: Array
    amplitude: Array
    rate_s: Array


def factors_of(body: Body) -> tuple[Factor, ...]:
    """The directions in which heat flows inside a body, by its shape and its exposed faces.

    A face that the air does not sweep is taken as insulated. With one end exposed, a positive offset of the
    thermometer lies towards that end."""
    surface = 1.0 if body.position == "surface" else 0.0
    if body.shape == "sphere":
        return (Factor("sphere", (body.diameter_m or 0.0) / 2, surface),)
    length = (body.length_m if body.shape == "cylinder" else body.side_c_m) or 0.0
    across: tuple[Factor, ...]
    if body.shape == "cylinder":
        across = (Factor("cylinder", (body.diameter_m or 0.0) / 2, surface),)
    else:
        across = (
            Factor("wall", (body.side_a_m or 0.0) / 2, surface),
            Factor("wall", (body.side_b_m or 0.0) / 2, 0.0),
        )
    if body.exposed == "all":
        return (*across, Factor("wall", length / 2, min(2 * body.axial_offset_m / length, 1.0)))
    if body.exposed == "side+end":
        return (*across, Factor("wall", length, min(0.5 + body.axial_offset_m / length, 1.0)))
    return across


def bessel(order: int, x: Array) -> Array:
    """Bessel function of the first kind, order 0 or 1, for 0 ≤ x ≤ 20; error below 1e-14."""
    result: Array = np.cos(order * _ANGLES - x[..., None] * _SINES).sum(axis=-1) / POINTS
    return result


def _condition(kind: Kind, zeta: Array, biot: Array) -> tuple[Array, Array]:
    """A function of ζ that is zero at the eigenvalues, and its derivative."""
    if kind == "wall":
        sine, cosine = np.sin(zeta), np.cos(zeta)
        return zeta * sine - biot * cosine, (1.0 + biot) * sine + zeta * cosine
    if kind == "sphere":
        sine, cosine = np.sin(zeta), np.cos(zeta)
        return zeta * cosine - (1.0 - biot) * sine, biot * cosine - zeta * sine
    zero, one = bessel(0, zeta), bessel(1, zeta)
    return zeta * one - biot * zero, zeta * zero + biot * one


def eigenvalues(kind: Kind, biot: Array, count: int) -> Array:
    """The first eigenvalues for Biot numbers (on half thickness or radius) of shape (sets,); (count, sets)."""
    n = np.arange(count)[:, None]
    if kind == "wall":
        low, high = n * pi, (n + 0.5) * pi
    elif kind == "sphere":
        low, high = n * pi, (n + 1.0) * pi
    else:
        low, high = _J1_ZEROS[:count, None], _J0_ZEROS[:count, None]
    low = low + np.zeros(len(biot))
    high = high + np.zeros(len(biot))
    sign = np.where(np.arange(count) % 2 == 0, 1.0, -1.0)[:, None]
    if kind == "sphere":
        sign = -sign
    zeta = (low + high) / 2.0
    first, limit = _FIRST[kind]
    zeta[0] = np.sqrt(first * biot / (1.0 + biot / limit))
    for _ in range(ROUNDS if count > 1 else ROUNDS_FIRST):
        value, slope = _condition(kind, zeta, biot)
        above = value * sign > 0.0
        high = np.where(above, zeta, high)
        low = np.where(above, low, zeta)
        newton = zeta - value / np.where(slope == 0.0, 1.0, slope)
        zeta = np.where((newton >= low) & (newton <= high), newton, (low + high) / 2.0)
    return zeta


def amplitudes(kind: Kind, zeta: Array, place: float) -> Array:
    """C_n φ_n at a place (0 centre, 1 surface), same shape as the eigenvalues."""
    x = zeta * place
    if kind == "wall":
        return 4.0 * np.sin(zeta) / (2.0 * zeta + np.sin(2.0 * zeta)) * np.cos(x)
    if kind == "sphere":
        first = 4.0 * (np.sin(zeta) - zeta * np.cos(zeta)) / (2.0 * zeta - np.sin(2.0 * zeta))
        return first * np.sinc(x / pi)
    zero, one = bessel(0, zeta), bessel(1, zeta)
    return 2.0 / zeta * one / (zero**2 + one**2) * bessel(0, x)


def _mean_over_place(kind: Kind, zeta: Array, place: float) -> Array:
    """Mean of the lasting mode over the volume, over its value at a place."""
    x = zeta * place
    if kind == "wall":
        wall: Array = np.sinc(zeta / pi) / np.cos(x)
        return wall
    if kind == "sphere":
        ball: Array = 3.0 * (np.sin(zeta) - zeta * np.cos(zeta)) / zeta**3 / np.sinc(x / pi)
        return ball
    return 2.0 * bessel(1, zeta) / zeta / bessel(0, x)


def _steepness(kind: Kind, zeta: Array) -> Array:
    """dζ₁²/dBi, by differentiating the condition of the eigenvalues."""
    if kind == "cylinder":
        zero, one = bessel(0, zeta), bessel(1, zeta)
        return 2.0 * zero**2 / (zero**2 + one**2)
    sine, cosine = np.sin(zeta), np.cos(zeta)
    along, across = (cosine, sine * cosine) if kind == "wall" else (sine, -sine * cosine)
    steep: Array = 2.0 * zeta * along**2 / (zeta + across)
    return steep


def modes_of(
    factors: tuple[Factor, ...],
    coefficient_W_m2K: Array,
    conductivity_W_mK: float,
    diffusivity_m2_s: float,
    area_per_volume_1_m: float,
    count: int = MODES,
) -> Modes:
    """Conduction for whole coefficients (radiation and stem included) of shape (sets,).

    Parameters
    ----------
    factors : directions of conduction
    coefficient_W_m2K : whole coefficient at the faces [W/(m²·K)], shape (sets,)
    conductivity_W_mK : of the body [W/(m·K)]
    diffusivity_m2_s : of the body [m²/s]
    area_per_volume_1_m : exposed area over volume [1/m]
    count : modes of each direction; 1 leaves the early modes out
    """
    amplitude = np.ones((1, len(coefficient_W_m2K)))
    rate = np.zeros((1, len(coefficient_W_m2K)))
    grows = np.zeros(len(coefficient_W_m2K))
    mean, flatter = np.ones((2, len(coefficient_W_m2K)))
    for factor in factors:
        biot = coefficient_W_m2K * factor.half_m / conductivity_W_mK
        zeta = eigenvalues(factor.kind, biot, count)
        steep = _steepness(factor.kind, zeta[0]) * biot
        grows += steep / factor.half_m**2
        mean *= _mean_over_place(factor.kind, zeta[0], factor.place)
        flatter = flatter * _mean_over_place(factor.kind, zeta[0] + STEP * steep / (2.0 * zeta[0]), factor.place)
        one = amplitudes(factor.kind, zeta, factor.place)
        own = zeta**2 / factor.half_m**2
        amplitude = (amplitude[:, None, :] * one[None, :, :]).reshape(-1, len(coefficient_W_m2K))
        rate = (rate[:, None, :] + own[None, :, :]).reshape(-1, len(coefficient_W_m2K))
    share = rate[0] * conductivity_W_mK / (coefficient_W_m2K * area_per_volume_1_m)
    order = 1 + np.argsort(rate[1:, 0])[: 2 * count]
    early, extra = amplitude[order] / amplitude[0], (rate[order] - rate[0]) * diffusivity_m2_s
    if count > 1:
        early = np.vstack([early, 1.0 / amplitude[0] - 1.0 - early.sum(axis=0)])
        extra = np.vstack([extra, CLOSING * extra[-1]])
    return Modes(
        share=share,
        whole_W_m2K=coefficient_W_m2K,
        exponent=grows / rate[0],
        first=amplitude[0],
        face=share * mean,
        mean=mean,
        flattens=np.log(flatter / mean) / STEP,
        amplitude=early,
        rate_s=extra,
    )

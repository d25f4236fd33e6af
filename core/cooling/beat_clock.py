"""The display's clock on a beat that it does not divide: one phase for the whole run.

The renewal before beat b comes d = (b − φ) mod R earlier. Beat by beat d wanders, but one phase φ fixes it for all
beats, so that each reading tells the temperature at a known moment, not anywhere within a refresh. φ is a nuisance,
even over one refresh. The refresh of the set-up is taken as exact here, which no set-up is beyond doubt: the
posterior with a clock is therefore weighed against the one without by how well each foretold the readings (their
marginal likelihoods, even odds beforehand), and the two are mixed by these weights."""

from __future__ import annotations

from math import log, pi

import numpy as np
from numpy.typing import NDArray

from core.cooling.features import Features
from core.cooling.likelihood import Evidence
from core.cooling.observation import STRAY_BINS, moment_probability

Array = NDArray[np.float64]


def wanders(evidence: Evidence) -> bool:
    """Whether there is a phase to be found: beats that the refresh does not divide."""
    return evidence.mode == "beat" and evidence.blur.refresh_s > 0.0 and not evidence.blur.commensurate


def phase_log_likelihood(
    evidence: Evidence, features: Features, shift: Array, phase_s: Array, window_s: float
) -> Array:
    """Log-likelihood of the readings on a beat, shape (sets,), prior of the phase included.

    Parameters
    ----------
    evidence, features : of the run, around a point of linearisation
    shift : parameter shifts from that point, shape (sets, 3)
    phase_s : of the renewals [s], shape (sets,), within half a refresh of `window_s`
    window_s : middle of the refresh over which phases are counted [s]
    """
    refresh, rows = evidence.blur.refresh_s, evidence.rows
    newest, oldest = features.at(shift)
    late = np.mod(evidence.bins.time_s[rows][:, None] - phase_s, refresh) / refresh
    straight = np.abs(features.rate_K_s) * refresh / np.maximum(features.value[1] - features.value[0], 1e-12)
    share = late * (straight[:, None] + (1.0 - straight[:, None]) * late)
    then = newest + (oldest - newest) * share
    good = moment_probability(then, evidence.bins, rows, evidence.blur)
    faulty = evidence.faulty()[:, None]
    logs = np.log((1.0 - faulty) * good + faulty / STRAY_BINS + 1e-300)
    place = (features.start_C + shift @ features.start_slope - evidence.start_C) / evidence.start_u_K
    total = np.sum(logs[evidence.counts[rows]], axis=0) - 0.5 * place**2 - log(refresh)
    result: Array = np.where(np.abs(phase_s - window_s) <= refresh / 2.0, total, -np.inf)
    return result


def middle_phase(phase_s: Array, weights: Array, refresh_s: float) -> tuple[float, float]:
    """Circular mean of weighted phases [s] and their variance about it [s²]."""
    turn = np.sum(weights * np.exp(2j * pi * phase_s / refresh_s))
    middle = float(np.angle(turn)) / (2.0 * pi) * refresh_s
    off = np.mod(phase_s - middle + refresh_s / 2.0, refresh_s) - refresh_s / 2.0
    return middle, float(weights @ off**2)

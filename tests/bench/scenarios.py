"""The benches on which the fit is held against what the readings can tell at best."""

from dataclasses import dataclass, replace

import numpy as np

from core.bench.readings import Readings
from core.bench.setup import Body, Flow, Recording, Setup, Surrounding, Thermometer
from core.cooling.clock import EDGE_REL, EDGE_s
from core.cooling.simulator import Hand, Truth, planned_s, simulate

AIR_C = 23.0
END_C = 33.0
ROD = Body("cylinder", diameter_m=0.016, length_m=0.11, material="brass", emissivity=0.05)
DARK = replace(ROD, emissivity=0.85)
HELD = replace(ROD, stem_loss_W_K=0.02)
PLASTIC = Body("cylinder", diameter_m=0.03, length_m=0.15, density_kg_m3=1400.0, heat_capacity_J_kgK=1200.0,
               conductivity_W_mK=2.0, emissivity=0.0)  # fmt: skip
BALL = Body("sphere", diameter_m=0.04, density_kg_m3=1400.0, heat_capacity_J_kgK=1200.0, conductivity_W_mK=0.4,
            emissivity=0.0)  # fmt: skip


@dataclass(frozen=True)
class Scenario:
    """A bench with its true coefficient; every run starts at another temperature, display phase and air error, and
    the display renews itself as unsteadily as the fit takes it to."""

    name: str
    setup: Setup
    h_W_m2K: float = 90.0

    def truth(self, seed: int) -> Truth:
        """One run's truth."""
        rng = np.random.default_rng((seed, 77))
        start = 90.0 + self.setup.thermometer.resolution_K * rng.uniform(-0.5, 0.5)
        offset = self.setup.air.temperature_u_K * rng.normal()
        end = END_C - max(3.0 * self.setup.thermometer.resolution_K, 1.0)
        unsteady_s = np.hypot(EDGE_s, EDGE_REL * self.setup.thermometer.refresh_s)
        return Truth(
            self.setup, self.h_W_m2K, start + offset, end, thermometer_offset_K=-offset, unsteady_s=float(unsteady_s)
        )

    def run(self, seed: int, hand: Hand | None = None) -> Readings:
        """One run's readings: the person stops at the first number that is no higher than the end."""
        whole = simulate(self.truth(seed), seed, hand)
        stop = next(k for k, shown in enumerate(whole.reading_C) if shown <= END_C) + 1
        return Readings(whole.time_s[:stop], whole.reading_C[:stop])

    def noted(self, readings: Readings, seed: int) -> Setup:
        """The set-up as the person has it after that run: the air measured when it ended."""
        air = self.setup.air
        if air.temperature_end_C is None:
            return self.setup
        gone = readings.time_s[-1] / planned_s(self.truth(seed))
        end = air.temperature_C + (air.temperature_end_C - air.temperature_C) * gone
        return replace(self.setup, air=replace(air, temperature_end_C=end))


def _bench(name, body=ROD, h=90.0, air_end=None, **rest):
    meter = {key: rest[key] for key in ("resolution_K", "refresh_s", "rounding", "noise_K", "lag_s") if key in rest}
    hand = {key: rest[key] for key in ("mode", "tap_lag_s", "tap_jitter_s") if key in rest}
    setup = Setup(
        body,
        Thermometer(**{"resolution_K": 1.0, "accuracy_K": 0.0, **meter}),
        Recording(**{"mode": "change", **hand}),
        Surrounding(AIR_C, temperature_end_C=air_end),
        Flow(velocity_m_s=8.0),
    )
    return Scenario(name, setup, h)


SCENARIOS = (
    _bench("1 °C, 0.3 s", refresh_s=0.3),
    _bench("1 °C, 0.5 s", refresh_s=0.5),
    _bench("1 °C, 1 s, jitter 0.15 s", refresh_s=1.0, tap_jitter_s=0.15),
    _bench("1 °C, 2.5 s", refresh_s=2.5),
    _bench("1 °C down, 0.7 s, lag 0.25 s", refresh_s=0.7, rounding="down", tap_lag_s=0.25),
    _bench("0.5 °C, 0.7 s", resolution_K=0.5, refresh_s=0.7),
    _bench("0.1 °C, 1 s (steps skipped)", resolution_K=0.1, refresh_s=1.0),
    _bench("dark, 1 °C, 0.5 s", DARK, 40.0, refresh_s=0.5),
    _bench("stem, 1 °C, 0.5 s", HELD, refresh_s=0.5),
    _bench("air drifts 0.8 K, 1 °C, 0.5 s", air_end=23.8, refresh_s=0.5),
    _bench("sensor lag 2 s, 1 °C, 0.5 s", refresh_s=0.5, lag_s=2.0),
    _bench("Bi 0.3, 0.1 °C, 0.7 s", PLASTIC, 40.0, resolution_K=0.1, refresh_s=0.7),
    _bench("Bi 2, 1 °C, 0.7 s", BALL, 40.0, refresh_s=0.7),
    _bench("beat 0.1 °C, 0.7 s", mode="beat", resolution_K=0.1, refresh_s=0.7),
    _bench("beat 0.1 °C, 0.5 s, noise 0.05", mode="beat", resolution_K=0.1, refresh_s=0.5, noise_K=0.05),
    _bench("beat 0.5 °C, 0.3 s", mode="beat", resolution_K=0.5, refresh_s=0.3),
    _bench("beat 1 °C down, 0.5 s", mode="beat", refresh_s=0.5, rounding="down"),
    _bench("beat 1 °C, 0.7 s", mode="beat", refresh_s=0.7),
)
"""Change taps where the name does not begin with beat; tap jitter 0.05 s unless it is named."""

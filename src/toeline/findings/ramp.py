"""The ramp test: a canal in steady flow is given more water in a ramp, no gate moves, and all of it has to come out.

Contractor & Schuurmans 1993 (J. Irrig. Drain. Eng. 119(4), abstract read) recommend it, with mass conservation, for any
canal model. What is looked at, and the tolerances, are choices of this project.
"""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.closure import TAKEN_FROM_POOLS, volume_passed

DRIFT_TOLERANCE = 0.01
VOLUME_TOLERANCE = 0.005
PASSED_TOLERANCE = 0.01
RETURN_TOLERANCE = 0.01
"""All four (choices) as shares: of the ramp, of the volume taken up, of the ramp, of the rise at the tail."""


@dataclass(frozen=True)
class RampPassage:
    """A ramp of inflow on its way through the canal. Discharges [m³/s], volumes [m³], times [s].

    `inflow` and `outflow` are those before and at the end; `taken` by how much deliveries, escapes and losses grew.
    `stored` is the volume that the pools took up, `balance` inflow less all that left, added up over the output steps.
    `drift` is the largest change of outflow before the ramp; `fall_back` the largest fall of the outflow from what it
    had already reached, an overshoot or a swing. `half_passed` counts from when half of the inflow's rise had come in
    to when half of the outflow's rise had gone out. From head to tail a small fast wave needs `fast_wave`, a slow wave
    as on uniform flow `slow_wave`.
    """

    inflow: tuple[float, float]
    outflow: tuple[float, float]
    taken: float
    stored: float
    balance: float
    drift: float
    fall_back: float
    half_passed: float
    fast_wave: float
    slow_wave: float

    @property
    def rise(self) -> float:
        """The ramp [m³/s]."""
        return self.inflow[1] - self.inflow[0]

    @property
    def passed_share(self) -> float:
        """How much of the ramp leaves the canal at the end, at the tail and elsewhere, as a share of it."""
        return (self.outflow[1] - self.outflow[0] + self.taken) / self.rise

    @property
    def volume_gap_share(self) -> float:
        """What the discharges leave unexplained of the volume taken up, as a share of it."""
        return abs(self.stored - self.balance) / max(abs(self.stored), 1.0)

    @property
    def fall_back_share(self) -> float:
        """The fall back as a share of the rise at the tail."""
        return self.fall_back / max(abs(self.outflow[1] - self.outflow[0]), 1e-9)

    @property
    def drift_share(self) -> float:
        """The drift as a share of the ramp."""
        return self.drift / self.rise

    @property
    def volume_lag(self) -> float:
        """Volume taken up over the ramp [s]: how long the canal keeps the new water on the mean."""
        return self.stored / self.rise

    @property
    def is_passed(self) -> bool:
        """Whether every number is within its stated tolerance."""
        return (
            self.drift_share <= DRIFT_TOLERANCE
            and self.volume_gap_share <= VOLUME_TOLERANCE
            and abs(self.passed_share - 1.0) <= PASSED_TOLERANCE
            and self.fall_back_share <= RETURN_TOLERANCE
        )


def ramp_passage(run: xr.Dataset, begins: float, fast_wave: float, slow_wave: float) -> RampPassage:
    """Read a run in which the inflow rises from `begins` [s after the start] on; wave times [s] are passed through."""
    times = run["time"].values
    seconds = (times - times[0]) / np.timedelta64(1, "s")
    inflow, outflow, storage = (run[f"canal_{name}"].values for name in ("inflow", "outflow", "storage"))
    taken = run["pool_losses"].values.sum(axis=1)
    for discharge in TAKEN_FROM_POOLS.values():
        if discharge in run:
            taken = taken + run[discharge].values.sum(axis=1)
    before = seconds <= begins
    after = outflow[~before]
    return RampPassage(
        inflow=(float(inflow[0]), float(inflow[-1])),
        outflow=(float(outflow[0]), float(outflow[-1])),
        taken=float(taken[-1] - taken[0]),
        stored=float(storage[-1] - storage[0]),
        balance=float(volume_passed(inflow - outflow - taken, times)[-1]),
        drift=float(np.abs(outflow[before] - outflow[0]).max()),
        fall_back=float((np.maximum.accumulate(after) - after).max(initial=0.0)),
        half_passed=_half_time(outflow, seconds) - _half_time(inflow, seconds),
        fast_wave=fast_wave,
        slow_wave=slow_wave,
    )


def _half_time(series: np.ndarray, seconds: np.ndarray) -> float:
    """When a series has first done half of its whole change [s]; NaN where it does not change."""
    share = (series - series[0]) / (series[-1] - series[0]) if series[-1] != series[0] else np.zeros(series.size)
    row = int(np.argmax(share >= 0.5))
    if row == 0:
        return float("nan")
    return float(np.interp(0.5, share[row - 1 : row + 1], seconds[row - 1 : row + 1]))

"""How well the deliveries met what was asked: Molden & Gates, J. Irrig. Drain. Eng. 116(6), 1990, and volumes.

The measures take discharges or volumes along time and place, NaN where nothing is asked for (an orifice, a weir). What
is not asked for cannot be met or missed: a sample without demand is left out of every measure, and so is a place
without any. A measure that nothing is left for is None.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.series import hours_of_rows, names
from toeline.results.dataset import in_parts, values_at

FULL_SUPPLY_FROM = 0.95
"""Share of the demand from which a tail-end delivery counts as adequate (choice)."""

SHORTFALL_FROM = 0.001
"""m³/s that a delivery may lack unnoticed: the litre per second to which discharges are shown (choice)."""

_NEEDED = ("demand", "delivery")
DEVIATION = "the standard deviation is that of the population, not of a sample"


def adequacy(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_A, the mean of min(delivered/required, 1) over time and place."""
    return _mean_of(_adequate(_ratio(delivered, required)))


def efficiency(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_F, the mean of min(required/delivered, 1) over time and place; 1 where nothing was delivered."""
    return _mean_of(_efficient(_ratio(delivered, required)))


def dependability(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_D, the mean over places of the coefficient of variation over time of delivered/required."""
    return _mean_of(variation(_ratio(delivered, required), along=0))


def equity(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_E, the mean over time of the coefficient of variation over places of delivered/required."""
    return _mean_of(variation(_ratio(delivered, required), along=1))


def variation(ratios: np.ndarray, along: int) -> np.ndarray:
    """Coefficient of variation along an axis, with the standard deviation of the population.

    NaN where fewer than two values are there, or where they are all 0.
    """
    is_there = np.isfinite(ratios)
    count = is_there.sum(axis=along)
    mean = np.where(is_there, ratios, 0.0).sum(axis=along) / np.maximum(count, 1)
    deviation = np.where(is_there, ratios - np.expand_dims(mean, along), 0.0)
    spread = np.sqrt((deviation**2).sum(axis=along) / np.maximum(count, 1))
    is_defined = (count > 1) & (mean > 0.0)
    return np.where(is_defined, spread / np.where(is_defined, mean, 1.0), np.nan)


@dataclass(frozen=True)
class _Offtake:
    """One offtake over the run: how many samples have a demand, and what was asked for, given and missed then [m³]."""

    name: str
    chainage: float
    samples: int
    asked: float
    given: float
    missed: float


class _Mean:
    """The mean of what is finite in arrays that come one after the other."""

    def __init__(self) -> None:
        self._total, self._count = 0.0, 0

    def add(self, values: np.ndarray) -> None:
        found = values[np.isfinite(values)]
        self._total += float(found.sum())
        self._count += found.size

    @property
    def value(self) -> float | None:
        return self._total / self._count if self._count else None


def delivery_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """Measures of the whole canal, then of every offtake with a demand; each output step is one sample."""
    means = {name: _Mean() for name in ("adequacy", "efficiency", "dependability", "equity")}
    offtakes: list[_Offtake] = []
    for part in in_parts(run, "offtake", *_NEEDED):
        ratio = _ratio(part["delivery"].values, part["demand"].values)
        means["adequacy"].add(_adequate(ratio))
        means["efficiency"].add(_efficient(ratio))
        means["dependability"].add(variation(ratio, along=0))
        offtakes += _offtakes(part)
    if not any(offtake.samples for offtake in offtakes):
        return
    for block in in_parts(run, "time", *_NEEDED):
        means["equity"].add(variation(_ratio(block["delivery"].values, block["demand"].values), along=1))
    note = _sampling(offtakes, run.sizes["time"])
    for name, mean in means.items():
        is_spread = name in ("dependability", "equity")
        if (value := mean.value) is not None:
            words = f"{note}; {DEVIATION}" if is_spread else note
            yield Indicator(name, "", value, "1", "lower" if is_spread else "higher", words)
    yield from _volume_indicators(offtakes)
    yield from _tail_end_indicators(run, offtakes)


def _ratio(delivered: np.ndarray, required: np.ndarray) -> np.ndarray:
    """Delivered over required, NaN where nothing is asked for."""
    is_asked = np.nan_to_num(required) > 0.0
    return np.where(is_asked, delivered / np.where(is_asked, required, 1.0), np.nan)


def _adequate(ratio: np.ndarray) -> np.ndarray:
    return np.minimum(ratio, 1.0)


def _efficient(ratio: np.ndarray) -> np.ndarray:
    return 1.0 / np.maximum(ratio, 1.0)


def _mean_of(values: np.ndarray) -> float | None:
    mean = _Mean()
    mean.add(values)
    return mean.value


def _offtakes(run: xr.Dataset) -> list[_Offtake]:
    """Each output step stands for the time beside it."""
    demand, delivery = run["demand"].values, run["delivery"].values
    is_asked, seconds = np.nan_to_num(demand) > 0.0, hours_of_rows(run["time"].values) * 3600.0
    asked = np.where(is_asked, demand, 0.0).T @ seconds
    given = np.where(is_asked, delivery, 0.0).T @ seconds
    lacking = np.where(is_asked, demand - delivery, 0.0)
    missed = np.where(lacking > SHORTFALL_FROM, lacking, 0.0).T @ seconds
    samples, chainages = is_asked.sum(axis=0), run["offtake_chainage"].values
    columns = (column.tolist() for column in (chainages, samples, asked, given, missed))
    return [_Offtake(*facts) for facts in zip(names(run["offtake"]), *columns, strict=True)]


def _sampling(offtakes: Sequence[_Offtake], steps: int) -> str:
    asking = sum(offtake.samples > 0 for offtake in offtakes)
    samples = sum(offtake.samples for offtake in offtakes)
    note = f"samples: {samples}, output steps: {steps}, offtakes with a demand: {asking}; every sample counts once"
    if samples < steps * asking:
        note += f"; left out, being without demand then: {steps * asking - samples}"
    if asking < len(offtakes):
        note += f"; offtakes left out, having no demand: {len(offtakes) - asking}"
    return note


def _volume_indicators(offtakes: Sequence[_Offtake]) -> Iterator[Indicator]:
    """Delivered over asked, in volume while something was asked."""
    asked, given, missed = (
        float(np.sum(volumes))
        for volumes in zip(*((offtake.asked, offtake.given, offtake.missed) for offtake in offtakes), strict=True)
    )
    if not asked > 0.0:
        return
    ratio, note = "delivery performance ratio", "volume delivered over volume asked for; 1 is the wish"
    yield Indicator(ratio, "", given / asked, "1", "higher", note)
    yield Indicator("volume not delivered", "", missed, "m3", "lower")
    for offtake in offtakes:
        if offtake.asked > 0.0:
            yield Indicator(ratio, offtake.name, offtake.given / offtake.asked, "1", "higher", note)
            yield Indicator("volume not delivered", offtake.name, offtake.missed, "m3", "lower")


def _tail_end_indicators(run: xr.Dataset, offtakes: Sequence[_Offtake]) -> Iterator[Indicator]:
    last = max((offtake for offtake in offtakes if offtake.samples), key=lambda offtake: offtake.chainage)
    place = names(run["offtake"]).index(last.name)
    ratio = _ratio(values_at(run, "delivery", place), values_at(run, "demand", place))
    share = float((ratio[np.isfinite(ratio)] >= FULL_SUPPLY_FROM).mean())
    note = f"share of its samples in which the last offtake got at least {FULL_SUPPLY_FROM:.0%} of its demand"
    yield Indicator("tail-end supply ratio", last.name, share, "1", "higher", note)

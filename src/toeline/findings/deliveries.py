"""How well the deliveries met what was asked: Molden & Gates, J. Irrig. Drain. Eng. 116(6), 1990, and volumes.

The measures take discharges or volumes along time and place, NaN where nothing is asked for (an orifice, a weir). What
is not asked for cannot be met or missed: a sample without demand is left out of every measure, and so is a place
without any. A measure that nothing is left for is None.
"""

from collections.abc import Callable, Iterator

import numpy as np
import xarray as xr

from toeline.findings.indicator import Better, Indicator
from toeline.findings.series import hours_of_rows, names

FULL_SUPPLY_FROM = 0.95
"""Share of the demand from which a tail-end delivery counts as adequate (choice)."""

SHORTFALL_FROM = 0.001
"""m³/s that a delivery may lack unnoticed: the litre per second to which discharges are shown (choice)."""

DEVIATION = "the standard deviation is that of the population, not of a sample"


def adequacy(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_A, the mean of min(delivered/required, 1) over time and place."""
    return _mean(np.minimum(_ratio(delivered, required), 1.0))


def efficiency(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_F, the mean of min(required/delivered, 1) over time and place; 1 where nothing was delivered."""
    return _mean(1.0 / np.maximum(_ratio(delivered, required), 1.0))


def dependability(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_D, the mean over places of the coefficient of variation over time of delivered/required."""
    return _mean(variation(_ratio(delivered, required), along=0))


def equity(delivered: np.ndarray, required: np.ndarray) -> float | None:
    """P_E, the mean over time of the coefficient of variation over places of delivered/required."""
    return _mean(variation(_ratio(delivered, required), along=1))


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


def delivery_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """Measures of the whole canal, then of every offtake with a demand; each output step is one sample."""
    demand, delivery = run["demand"].values, run["delivery"].values
    is_asked = np.nan_to_num(demand) > 0.0
    if not is_asked.any():
        return
    note = _sampling(is_asked)
    measures: tuple[tuple[str, Callable[[np.ndarray, np.ndarray], float | None], Better, str], ...] = (
        ("adequacy", adequacy, "higher", note),
        ("efficiency", efficiency, "higher", note),
        ("dependability", dependability, "lower", f"{note}; {DEVIATION}"),
        ("equity", equity, "lower", f"{note}; {DEVIATION}"),
    )
    for name, measure, better, words in measures:
        if (value := measure(delivery, demand)) is not None:
            yield Indicator(name, "", value, "1", better, words)
    yield from _volume_indicators(run, is_asked)
    yield from _tail_end_indicators(run, is_asked)


def _ratio(delivered: np.ndarray, required: np.ndarray) -> np.ndarray:
    """Delivered over required, NaN where nothing is asked for."""
    is_asked = np.nan_to_num(required) > 0.0
    return np.where(is_asked, delivered / np.where(is_asked, required, 1.0), np.nan)


def _mean(values: np.ndarray) -> float | None:
    found = values[np.isfinite(values)]
    return float(found.mean()) if found.size else None


def _sampling(is_asked: np.ndarray) -> str:
    steps, offtakes = is_asked.shape
    asking = int(is_asked.any(axis=0).sum())
    samples = int(is_asked.sum())
    note = f"samples: {samples}, output steps: {steps}, offtakes with a demand: {asking}; every sample counts once"
    if samples < steps * asking:
        note += f"; left out, being without demand then: {steps * asking - samples}"
    if asking < offtakes:
        note += f"; offtakes left out, having no demand: {offtakes - asking}"
    return note


def _volume_indicators(run: xr.Dataset, is_asked: np.ndarray) -> Iterator[Indicator]:
    """Delivered over asked, in volume while something was asked; each output step stands for the time beside it."""
    seconds = hours_of_rows(run["time"].values) * 3600.0
    asked = np.where(is_asked, run["demand"].values, 0.0).T @ seconds
    given = np.where(is_asked, run["delivery"].values, 0.0).T @ seconds
    lacking = np.where(is_asked, run["demand"].values - run["delivery"].values, 0.0)
    missed = np.where(lacking > SHORTFALL_FROM, lacking, 0.0).T @ seconds
    if not asked.sum() > 0.0:
        return
    ratio, note = "delivery performance ratio", "volume delivered over volume asked for; 1 is the wish"
    yield Indicator(ratio, "", float(given.sum() / asked.sum()), "1", "higher", note)
    yield Indicator("volume not delivered", "", float(missed.sum()), "m3", "lower")
    for offtake, name in enumerate(names(run["offtake"])):
        if asked[offtake] > 0.0:
            yield Indicator(ratio, name, float(given[offtake] / asked[offtake]), "1", "higher", note)
            yield Indicator("volume not delivered", name, float(missed[offtake]), "m3", "lower")


def _tail_end_indicators(run: xr.Dataset, is_asked: np.ndarray) -> Iterator[Indicator]:
    asking = np.flatnonzero(is_asked.any(axis=0))
    last = int(asking[np.argmax(run["offtake_chainage"].values[asking])])
    asked = is_asked[:, last]
    ratio = run["delivery"].values[asked, last] / run["demand"].values[asked, last]
    share = float((ratio >= FULL_SUPPLY_FROM).mean())
    note = f"share of its samples in which the last offtake got at least {FULL_SUPPLY_FROM:.0%} of its demand"
    yield Indicator("tail-end supply ratio", names(run["offtake"])[last], share, "1", "higher", note)

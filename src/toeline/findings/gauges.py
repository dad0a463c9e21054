"""Staff gauges over a run: what was to be read on them."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, least, meanings, names
from toeline.results.dataset import values_at


@dataclass(frozen=True)
class GaugeReadings:
    """One gauge: where it stands, its reading at the start and its extremes [m above its zero]."""

    gauge: str
    place: str
    first: float
    least: Extreme
    greatest: Extreme


def gauge_readings(run: xr.Dataset) -> list[GaugeReadings]:
    """Every gauge of a run."""
    return [_of_gauge(run, place) for place in range(run.sizes["gauge"])]


def _of_gauge(run: xr.Dataset, place: int) -> GaugeReadings:
    times, readings = run["time"].values, values_at(run, "gauge_reading", place)
    return GaugeReadings(
        gauge=names(run["gauge"])[place],
        place=_place(run.isel(gauge=place)),
        first=float(readings[0]) if times.size else np.nan,
        least=least(readings, times),
        greatest=greatest(readings, times),
    )


def _place(gauge: xr.Dataset) -> str:
    """Where a gauge stands, in words."""
    gate = str(gauge["gauge_gate"].item())
    if not gate:
        return str(gauge["gauge_pool"].item())
    return f"{meanings(gauge['gauge_side'])[int(gauge['gauge_side'])]} of {gate}"

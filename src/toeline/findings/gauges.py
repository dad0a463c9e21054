"""Staff gauges over a run: what was to be read on them."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, least, meanings, names


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
    times = run["time"].values
    readings = run["gauge_reading"].values
    return [
        GaugeReadings(
            gauge=gauge,
            place=_place(run.isel(gauge=k)),
            first=float(readings[0, k]) if times.size else np.nan,
            least=least(readings[:, k], times),
            greatest=greatest(readings[:, k], times),
        )
        for k, gauge in enumerate(names(run["gauge"]))
    ]


def _place(gauge: xr.Dataset) -> str:
    """Where a gauge stands, in words."""
    gate = str(gauge["gauge_gate"].item())
    if not gate:
        return str(gauge["gauge_pool"].item())
    return f"{meanings(gauge['gauge_side'])[int(gauge['gauge_side'])]} of {gate}"

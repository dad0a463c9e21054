"""Escapes that spill: when first, for how long, how much."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, names
from toeline.findings.spells import Spell, spells

LEAST_SPILL = 1e-4
"""Discharge [m³/s] up to which the edge of a crest is said to be dry (choice)."""


@dataclass(frozen=True)
class EscapeSpill:
    """What flowed over one escape: `spills` in time order, `volume` over the run [m³], greatest discharge [m³/s]."""

    escape: str
    pool: str
    spills: tuple[Spell, ...]
    volume: float
    greatest: Extreme


def escape_spills(run: xr.Dataset) -> list[EscapeSpill]:
    """Every escape of a run, also those over which nothing flowed."""
    times = run["time"].values
    return [
        EscapeSpill(
            escape=escape,
            pool=str(run["escape_pool"].values[place]),
            spills=tuple(spells(discharge > LEAST_SPILL, times, LEAST_SPILL - discharge)),
            volume=float(volume[-1] - volume[0]) if times.size else 0.0,
            greatest=greatest(discharge, times),
        )
        for place, escape in enumerate(names(run["escape"]))
        for discharge, volume in [_series(run, place)]
    ]


def _series(run: xr.Dataset, place: int) -> tuple[np.ndarray, np.ndarray]:
    return run["escape_discharge"].values[:, place], run["escape_volume"].values[:, place]

"""Escapes that spill: when first, for how long, how much."""

from dataclasses import dataclass

import xarray as xr

from toeline.findings.series import Extreme, greatest, names
from toeline.findings.spells import Spell, spells
from toeline.results.dataset import values_at

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
    return [_of_escape(run, place) for place in range(run.sizes["escape"])]


def _of_escape(run: xr.Dataset, place: int) -> EscapeSpill:
    times = run["time"].values
    discharge, volume = (values_at(run, f"escape_{what}", place) for what in ("discharge", "volume"))
    return EscapeSpill(
        escape=names(run["escape"])[place],
        pool=str(run["escape_pool"].values[place]),
        spills=tuple(spells(discharge > LEAST_SPILL, times, LEAST_SPILL - discharge)),
        volume=float(volume[-1] - volume[0]) if times.size else 0.0,
        greatest=greatest(discharge, times),
    )

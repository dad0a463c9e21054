"""Gates whose bays move apart: how unevenly they stood open."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, names


@dataclass(frozen=True)
class UnevenBays:
    """Greatest difference of opening between two neighbouring bays of a gate [m], and the numbers of the two."""

    gate: str
    bays: tuple[int, int]
    difference: Extreme


def uneven_bays(run: xr.Dataset) -> list[UnevenBays]:
    """Every gate of a run whose bays move apart, with one bay or more beside another."""
    gates = run["bay_gate"].values
    return [_of_gate(run, gate) for gate in names(run["gate"]) if (gates == gate).sum() > 1 and run.sizes["time"]]


def _of_gate(run: xr.Dataset, gate: str) -> UnevenBays:
    bays = run.isel(bay=run["bay_gate"].values == gate)
    steps = np.abs(np.diff(bays["bay_opening"].values, axis=1))
    left = int(np.argmax(steps.max(axis=0)))
    return UnevenBays(gate, (left + 1, left + 2), greatest(steps[:, left], run["time"].values))

"""Limits of the owner that can be watched on the gauges beside a gate."""

import json
from collections.abc import Collection, Iterator
from dataclasses import dataclass
from typing import Any

import xarray as xr

from toeline.findings.gate_orders import SIDES, gauge_beside

CHANGES, LEVELS = ("fall", "rise"), ("above", "below")
SEEN_FROM = {"upstream": "lower end", "downstream": "upper end"}
"""The end of the pool beside a gate that stands at it, by side of the gate."""


@dataclass(frozen=True)
class LimitBeside:
    """A limit at the gates of some sides of a pool, all of which may watch it.

    `kind` is fall or rise (`limit` [m] in `window` [s]), or above or below (`limit` [m] as read on `gauge`, above the
    datum where that is "").
    """

    kind: str
    places: tuple[tuple[str, str], ...]
    limit: float
    window: float
    gauge: str
    source: str


def limits_beside(run: xr.Dataset, gates: Collection[str]) -> list[LimitBeside]:
    """The limits of levels in the pools beside the gates, in the order of the canal file."""
    places = {
        (gate, side): str(pool)
        for side in SIDES
        for gate, pool in zip(run["gate"].values.tolist(), run[f"gate_{side}_pool"].values.tolist(), strict=True)
        if gate in gates
    }
    return [found for entry in json.loads(run.attrs.get("limits", "[]")) for found in _found(run, entry, places)]


def _found(run: xr.Dataset, entry: dict[str, Any], places: dict[tuple[str, str], str]) -> Iterator[LimitBeside]:
    beside = tuple(place for place, pool in places.items() if pool in entry["places"])
    if entry["kind"] in CHANGES and beside:
        yield LimitBeside(entry["kind"], beside, entry["limit"], entry["window"], "", entry["source"])
    if entry["kind"] in LEVELS and entry["measured_from"] == "datum":
        for gate, side in (place for place in beside if SEEN_FROM[place[1]] == entry["at"]):
            gauge, zero = gauge_beside(run, gate, side)
            yield LimitBeside(entry["kind"], ((gate, side),), entry["limit"] - zero, 0.0, gauge, entry["source"])

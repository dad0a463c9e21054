"""How much each gate was moved, and how restless its flow was."""

from collections.abc import Iterator, Sequence

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.limits import avoided_openings
from toeline.findings.moves import moves_begun
from toeline.findings.series import is_any, names
from toeline.results.dataset import in_parts, values_at

SMALLEST_MOVE = 1e-9
"""Change of opening [m] below which an order moved nothing."""


_COUNTED_APART = {("flow", "near_modular_limit"), ("jump", "drowned")}
"""States whose hours have an indicator of their own."""


def integrated_change(values: np.ndarray) -> float:
    """Σ|Δ| − |last − first|: what a series changed beyond what it had to.

    IAW of openings and IAQ of discharges (Clemmens et al. 1998, from memory). 0 where all changes go one way.
    """
    return float(np.abs(np.diff(values)).sum() - abs(values[-1] - values[0])) if values.size else 0.0


def travel(values: np.ndarray) -> float:
    """Σ|Δ|, the way an opening has gone in all."""
    return float(np.abs(np.diff(values)).sum())


def seconds_avoided(openings: np.ndarray, times: np.ndarray, bands: Sequence[Sequence[float]]) -> np.ndarray:
    """For how long in each output step [s] an opening was inside bands [m], edges left out.

    The leaf is taken to move evenly from step to step, so that a band which it only passes counts for as long as that
    takes.
    """
    start, end = openings[:-1], openings[1:]
    low, high, way = np.minimum(start, end), np.maximum(start, end), np.abs(end - start)
    share = np.zeros(start.size)
    for lower, upper in bands:
        passed = np.maximum(np.minimum(high, upper) - np.maximum(low, lower), 0.0)
        is_held = (low > lower) & (low < upper)
        share += np.where(way > SMALLEST_MOVE, passed / np.where(way > 0.0, way, 1.0), is_held)
    return share * _step_seconds(times)


def seconds_near_modular_limit(run: xr.Dataset, gate: str) -> np.ndarray:
    """For how long in each output step [s] a gate was near the modular limit: half of it for each end that was."""
    column = names(run["gate"]).index(gate)
    is_near = is_any(run["gate_flow_state"].isel(gate=column), "near_modular_limit").astype(float)
    return 0.5 * (is_near[:-1] + is_near[1:]) * _step_seconds(run["time"].values)


def _step_seconds(times: np.ndarray) -> np.ndarray:
    seconds: np.ndarray = np.diff(times) / np.timedelta64(1, "s")
    return seconds


def limit_crossings(is_free: np.ndarray, is_drowned: np.ndarray) -> int:
    """How often a gate went from free to drowned or back.

    Between the two lies a band near the modular limit, neither here nor there: only a passage through all of it counts.
    A gate that was closed or clear of water in between has begun anew.
    """
    side = np.where(is_free, 1, np.where(is_drowned, -1, 0))
    known = side[side != 0]
    return int((known[1:] != known[:-1]).sum())


def gate_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """Moves and travel, crossings of the modular limit, and the hours of both hazards, gate by gate."""
    for part in in_parts(run, "gate", "gate_opening", "gate_discharge", "gate_flow_state"):
        for column, jumps in enumerate(gate_jumps(part)):
            yield from _movement_indicators(part, jumps.gate, column)
            yield from _doubt_indicators(part, jumps, column)
            yield from _hour_indicators(jumps)


def _movement_indicators(run: xr.Dataset, gate: str, column: int) -> Iterator[Indicator]:
    openings, discharges = run["gate_opening"].values[:, column], run["gate_discharge"].values[:, column]
    leaves, beyond = _leaf_openings(run, gate, openings), "beyond the way from first to last value"
    restless = float(np.mean([integrated_change(leaf) for leaf in leaves]))
    yield Indicator("gate moves", gate, moves_begun(run, gate).size, "count", "lower")
    yield Indicator("gate travel", gate, float(np.mean([travel(leaf) for leaf in leaves])), "m", "lower")
    yield Indicator("integrated absolute gate movement", gate, restless, "m", "lower", beyond)
    change = integrated_change(discharges)
    yield Indicator("integrated absolute discharge change", gate, change, "m3 s-1", "lower", beyond)
    if bands := avoided_openings(run).get(gate):
        hours = float(seconds_avoided(openings, run["time"].values, bands).sum()) / 3600.0
        yield Indicator("hours at avoided openings", gate, hours, "h", "lower", "passing counts too")


def _leaf_openings(run: xr.Dataset, gate: str, openings: np.ndarray) -> list[np.ndarray]:
    """Openings [m] of every bay that moves apart, else of the gate."""
    bays = [place for place, name in enumerate(names(run["bay_gate"])) if name == gate]
    return [values_at(run, "bay_opening", bay) for bay in bays] or [openings]


def _doubt_indicators(run: xr.Dataset, jumps: GateJumps, column: int) -> Iterator[Indicator]:
    states = run["gate_flow_state"].isel(gate=column)
    crossings = limit_crossings(is_any(states, "free"), is_any(states, "drowned"))
    hours, note = jumps.flow_state_hours["near_modular_limit"], "the discharge of the gate is poorly known there"
    yield Indicator("modular-limit crossings", jumps.gate, crossings, "count", "lower")
    yield Indicator("hours near the modular limit", jumps.gate, hours, "h", "lower", note)


def _hour_indicators(jumps: GateJumps) -> Iterator[Indicator]:
    name = jumps.gate
    yield Indicator("hours with a jump beyond protection", name, jumps.beyond_protection_hours, "h", "lower")
    yield Indicator("hours with a drowned roller", name, jumps.roller_hours, "h", "lower",
                    "no hour is safe, with a roller or without")  # fmt: skip
    if np.isfinite(jumps.protection_margin.value):
        yield Indicator("least protection margin", name, jumps.protection_margin.value, "m", "higher")
    for kind, hours in (("flow", jumps.flow_state_hours), ("jump", jumps.jump_state_hours)):
        for state, value in hours.items():
            if value and (kind, state) not in _COUNTED_APART:
                yield Indicator(f"hours of {kind}: {state.replace('_', ' ')}", name, value, "h", "none")

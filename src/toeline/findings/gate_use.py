"""How much each gate was moved, and how restless its flow was."""

from collections.abc import Iterator, Sequence

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.limits import avoided_openings
from toeline.findings.series import is_any, names

SMALLEST_MOVE = 1e-9
"""Change of opening [m] below which an order moved nothing."""


def integrated_change(values: np.ndarray) -> float:
    """Σ|Δ| − |last − first|: what a series changed beyond what it had to.

    IAW of openings and IAQ of discharges (Clemmens et al. 1998, from memory). 0 where all changes go one way.
    """
    return float(np.abs(np.diff(values)).sum() - abs(values[-1] - values[0])) if values.size else 0.0


def travel(values: np.ndarray) -> float:
    """Σ|Δ|, the way an opening has gone in all."""
    return float(np.abs(np.diff(values)).sum())


def moves(run: xr.Dataset, gate: str) -> np.ndarray:
    """When a gate began to move (datetime64), order by order; orders that moved nothing are left out."""
    change = np.abs(run["order_opening_after"].values - run["order_opening_before"].values)
    is_refused = is_any(run["order_status"], "refused")
    is_move = (run["order_gate"].values == gate) & ~is_refused & (change > SMALLEST_MOVE)
    return np.sort(run["order_time"].values[is_move])


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
    """Moves, travel, crossings and the hours of both hazards, gate by gate."""
    openings, discharges = run["gate_opening"].values, run["gate_discharge"].values
    times, bands = run["time"].values, avoided_openings(run)
    is_free, is_drowned = is_any(run["gate_flow_state"], "free"), is_any(run["gate_flow_state"], "drowned")
    jumps = gate_jumps(run)
    for gate, name in enumerate(names(run["gate"])):
        yield Indicator("gate moves", name, moves(run, name).size, "count", "lower")
        yield Indicator("gate travel", name, travel(openings[:, gate]), "m", "lower")
        yield Indicator("integrated gate travel", name, integrated_change(openings[:, gate]), "m", "lower",
                        "travel beyond that from first to last opening")  # fmt: skip
        yield Indicator("integrated discharge change", name, integrated_change(discharges[:, gate]), "m3 s-1", "lower",
                        "changes beyond that from first to last discharge")  # fmt: skip
        crossings = limit_crossings(is_free[:, gate], is_drowned[:, gate])
        yield Indicator("modular-limit crossings", name, crossings, "count", "lower")
        near = jumps[gate].flow_state_hours["near_modular_limit"]
        yield Indicator("hours near the modular limit", name, near, "h", "lower", "its discharge is poorly known there")
        if name in bands:
            avoided = seconds_avoided(openings[:, gate], times, bands[name]).sum() / 3600.0
            yield Indicator("hours at avoided openings", name, float(avoided), "h", "lower", "passing counts too")
        yield from _hour_indicators(jumps[gate])


def _hour_indicators(jumps: GateJumps) -> Iterator[Indicator]:
    name = jumps.gate
    yield Indicator("hours with a jump beyond protection", name, jumps.beyond_protection_hours, "h", "lower")
    yield Indicator("hours with a drowned roller", name, jumps.roller_hours, "h", "lower",
                    "no hour is safe, with a roller or without")  # fmt: skip
    if np.isfinite(jumps.protection_margin.value):
        yield Indicator("least protection margin", name, jumps.protection_margin.value, "m", "higher")
    for kind, hours in (("flow", jumps.flow_state_hours), ("jump", jumps.jump_state_hours)):
        for state, value in hours.items():
            if value:
                yield Indicator(f"hours of {kind}: {state.replace('_', ' ')}", name, value, "h", "none")

"""The numbers that a browser draws the canal from: values of the file, in the units shown, none changed by thinning."""

import json
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import xarray as xr

from toeline.findings.series import meanings, names
from toeline.report.order_words import order_words
from toeline.report.page.looks import MARKERS
from toeline.report.page.moments import Moments, nearest_rows
from toeline.report.run_clock import RunClock
from toeline.report.style import ORDER_STATUSES, PAPER, shown_factor
from toeline.results.dataset import local_time, rows_at
from toeline.units import Dimension, Display

GATE_SERIES: dict[str, tuple[str, Dimension]] = {
    "opening": ("gate_opening", "length"),
    "discharge": ("gate_discharge", "discharge"),
    "headwater": ("gate_headwater_level", "length"),
    "tailwater": ("gate_tailwater_level", "length"),
    "modular_limit": ("gate_modular_limit_level", "length"),
    "jet_depth": ("jet_depth", "length"),
    "roller_depth": ("roller_depth", "length"),
    "toe": ("jump_toe_distance", "length"),
    "end": ("jump_end_distance", "length"),
    "tailwater_margin": ("tailwater_margin", "length"),
    "protection_margin": ("protection_margin", "length"),
}
"""Series of the gates by their name on the page, with the variable of the file and what it measures."""

MOST_SERIES_VALUES = 80_000
"""How many values one series of all gates may hold (choice); of more output steps some are left out, evenly."""


@dataclass(frozen=True)
class RunArrays:
    """All that moves in one run, at the output steps and long profiles that are kept, in the units shown.

    elapsed          since the start of the run, of every step [ms]
    series           by name, along (step, gate), flattened
    rows             the step that is shown at every moment
    profile_elapsed  since the start of the run, of every profile [ms]
    water_level      along (profile, node), flattened
    profiles         the profile that is shown at every moment, the nearest; -1 where there is none
    pools            by pool its first node, the node after its last, and the gate at its head, -1 where there is none
    """

    elapsed: np.ndarray
    series: dict[str, np.ndarray]
    rows: np.ndarray
    profile_elapsed: np.ndarray
    water_level: np.ndarray
    profiles: np.ndarray
    pools: list[tuple[int, int, int]]
    steps_left_out: int


def run_arrays(run: xr.Dataset, moments: Moments, display: Display) -> RunArrays:
    """What a page draws a run from; of a run longer than it can bear, steps between moments are left out evenly."""
    times, profile_times = run["time"].values, run["profile_time"].values
    at_moments = nearest_rows(times, moments.elapsed)
    rows = _kept(times.size, at_moments, MOST_SERIES_VALUES // max(1, run.sizes["gate"]))
    of_profile = _nearest_profiles(times, profile_times, moments.elapsed)
    profiles = np.unique(of_profile[of_profile >= 0])
    return RunArrays(
        elapsed=_milliseconds(times[rows] - times[0]),
        series=_gate_series(run, rows, display),
        rows=np.searchsorted(rows, at_moments).astype(np.int32),
        profile_elapsed=_milliseconds(profile_times[profiles] - times[0]),
        water_level=_shown(rows_at(run, "water_level", profiles), "length", display),
        profiles=np.where(of_profile < 0, -1, np.searchsorted(profiles, of_profile)).astype(np.int32),
        pools=_pools(run),
        steps_left_out=int(times.size - rows.size),
    )


def order_marks(run: xr.Dataset, display: Display) -> dict[str, list[Any]]:
    """The orders of a run, to be marked at the opening that each led to."""
    clock, listed = RunClock(run), names(run["gate"])
    kinds, statuses = meanings(run["order_kind"]), meanings(run["order_status"])
    marks = [ORDER_STATUSES[statuses[int(status)]] for status in run["order_status"].values]
    asked = [
        order_words(kinds[int(kind)], float(value), display)
        for kind, value in zip(run["order_kind"].values, run["order_value"].values, strict=True)
    ]
    return {
        "gate": [listed.index(gate) for gate in names(run["order_gate"])],
        "elapsed": _milliseconds(run["order_time"].values - run["time"].values[0]).tolist(),
        "opening": _shown(run["order_opening_after"].values, "length", display).tolist(),
        "marker": [MARKERS[mark.shape] for mark in marks],
        "colour": [mark.colour for mark in marks],
        "filling": [mark.colour if mark.filled else PAPER for mark in marks],
        "words": [
            f"{clock.at(time)} {words}: {mark.word}"
            for time, words, mark in zip(run["order_time"].values, asked, marks, strict=True)
        ],
    }


def places(run: xr.Dataset, display: Display) -> dict[str, Any]:
    """What does not move: gates with their levels and floors, in the units shown."""
    facts = ("chainage", "sill_level", "floor_level", "max_opening", "apron_end", "protection_end")
    gates = {fact: _shown(run[f"gate_{fact}"].values, "length", display).tolist() for fact in facts}
    return {
        **gates,
        "name": names(run["gate"]),
        "leaf_height": [height / shown_factor("length", display) for height in leaf_heights(run)],
        "bed_above": [_level_above(run, gate) / shown_factor("length", display) for gate in range(run.sizes["gate"])],
        "target": [_target_above(run, pool) / shown_factor("length", display) for pool in _pools_above(run)],
    }


def leaf_heights(run: xr.Dataset) -> list[float]:
    """Heights of the leaves [m]; of a leaf whose height the canal file leaves out, its greatest opening."""
    canal = json.loads(run.attrs["resolved_settings"]).get("canal", {})
    given = {gate["name"]: gate.get("leaf_height") for gate in canal.get("gates", ())}
    openings = zip(names(run["gate"]), run["gate_max_opening"].values.tolist(), strict=True)
    return [given.get(name) or opening for name, opening in openings]


def start_milliseconds(run: xr.Dataset) -> float:
    """The start of a run by its own clock as milliseconds of an axis of times."""
    naive = np.datetime64(local_time(run, run["time"].values[0]).replace(tzinfo=None), "ms")
    return float(naive.astype(np.int64))


def _pools(run: xr.Dataset) -> list[tuple[int, int, int]]:
    below = names(run["gate_downstream_pool"])
    spans = [np.flatnonzero(run["node_pool"].values == pool) for pool in range(run.sizes["pool"])]
    heads = [below.index(pool) if pool in below else -1 for pool in names(run["pool"])]
    return [(int(nodes[0]), int(nodes[-1]) + 1, gate) for nodes, gate in zip(spans, heads, strict=True)]


def _gate_series(run: xr.Dataset, rows: np.ndarray, display: Display) -> dict[str, np.ndarray]:
    series = {
        name: _shown(rows_at(run, variable, rows), dimension, display)
        for name, (variable, dimension) in GATE_SERIES.items()
    }
    flags = {name: rows_at(run, name, rows).astype(np.int8).ravel() for name in ("jump_state", "gate_flow_state")}
    return series | flags | {"settling": _settling_below(run, rows).astype(np.int8).ravel()}


def _settling_below(run: xr.Dataset, rows: np.ndarray) -> np.ndarray:
    """Whether the pool below each gate was settling, along rows and gate; beyond the last pool nothing settles."""
    settling = rows_at(run, "settling", rows) == meanings(run["settling"]).index("settling")
    columns = {name: settling[:, column] for column, name in enumerate(names(run["pool"]))}
    beyond = np.zeros(settling.shape[0], dtype=bool)
    below: np.ndarray = np.stack([columns.get(name, beyond) for name in names(run["gate_downstream_pool"])], axis=1)
    return below


def _kept(count: int, needed: np.ndarray, most: int) -> np.ndarray:
    """Rows spread evenly over `count`, about `most` of them, and all that are needed."""
    stride = -(-count // max(2, most))
    return np.unique(np.concatenate([np.arange(0, count, stride), [count - 1], needed]))


def _nearest_profiles(times: np.ndarray, profile_times: np.ndarray, elapsed: np.ndarray) -> np.ndarray:
    if not profile_times.size:
        return np.full(elapsed.shape, -1, dtype=np.int32)
    return nearest_rows(profile_times, elapsed - (profile_times[0] - times[0]))


def _milliseconds(since: np.ndarray) -> np.ndarray:
    return since / np.timedelta64(1, "ms")


def _shown(values: np.ndarray, dimension: Dimension, display: Display) -> np.ndarray:
    """Values in the units shown, in single precision: it keeps levels below 4,000 m to a quarter of a millimetre."""
    return (values / shown_factor(dimension, display)).astype(np.float32).ravel()


def _pools_above(run: xr.Dataset) -> Sequence[str]:
    return names(run["gate_upstream_pool"])


def _target_above(run: xr.Dataset, pool: str) -> float:
    listed = names(run["pool"])
    return float(run["pool_target_level"].values[listed.index(pool)]) if pool in listed else float("nan")


def _level_above(run: xr.Dataset, gate: int) -> float:
    """Level of the bed just above a gate; of its sill where nothing above it is computed."""
    listed, pool = names(run["pool"]), _pools_above(run)[gate]
    if pool not in listed:
        return float(run["gate_sill_level"].values[gate])
    nodes = np.flatnonzero(run["node_pool"].values == listed.index(pool))
    return float(run["bed_level"].values[nodes[-1]])

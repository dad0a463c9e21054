"""Runs made by hand, quiet but for the values a test sets."""

from collections.abc import Mapping
from datetime import UTC, datetime

import numpy as np
import pytest
import xarray as xr

from toeline.results.dataset import DatasetSink
from toeline.results.provenance import COMPLETE, run_attributes
from toeline.results.variables import GROWING_DIMENSIONS, Variable, fixed, growing

START = datetime(2031, 5, 4, tzinfo=UTC)
ATTRIBUTES = run_attributes(
    title="A quiet day",
    canal="Quillmere main canal",
    plan=None,
    canal_text="",
    day_text="",
    settings={},
    input_hash="0" * 64,
    surface_names=["apron", "riprap", "lining"],
    units_for_display="metric",
    zone=None,
    start=START,
    version="0.1.0",
    created=START,
)
LABELS = {
    "gate": ["Orchard check", "Mill check"],
    "gate_upstream_pool": ["Orchard pool", "Mill pool"],
    "gate_downstream_pool": ["Mill pool", "tail"],
    "bay": ["Mill check, bay 1", "Mill check, bay 2", "Mill check, bay 3"],
    "bay_gate": ["Mill check"] * 3,
    "pool": ["Orchard pool", "Mill pool"],
    "offtake": ["North lateral"],
    "offtake_pool": ["Orchard pool"],
    "escape": ["Storm escape"],
    "escape_pool": ["Mill pool"],
    "gauge": ["Mill gauge"],
    "gauge_gate": ["Mill check"],
    "gauge_pool": ["Mill pool"],
}


def at(minutes: float) -> np.datetime64:
    """So many minutes after the start."""
    return np.datetime64(START.replace(tzinfo=None), "ns") + np.timedelta64(round(minutes * 60e9), "ns")


def run_by_hand(
    minutes,
    profile_minutes=(),
    *,
    values: Mapping[str, object],
    nodes: int = 4,
    outcome: str = COMPLETE,
) -> xr.Dataset:
    """A run with output at the given minutes. `values` are by variable name and are spread over its dimensions.

    Without a value flags are 0, numbers missing, volumes and levels 0.
    """
    sizes = {
        "time": len(minutes),
        "profile_time": len(profile_minutes),
        "order": np.size(values.get("order_time", ())),
        "gate": 2,
        "bay": 3,
        "pool": 2,
        "offtake": 1,
        "escape": 1,
        "gauge": 1,
        "node": nodes,
    }
    given = {name: np.asarray(value) for name, value in values.items()} | {
        "time": np.array(minutes, dtype=int) * 60_000,
        "profile_time": np.array(profile_minutes, dtype=int) * 60_000,
    }
    sink = DatasetSink({v.name: column(v, sizes, given) for v in fixed()}, ATTRIBUTES, START)
    sink.write({v.name: column(v, sizes, given) for d in GROWING_DIMENSIONS for v in growing(d)})
    sink.close(outcome)
    return sink.dataset


def column(variable: Variable, sizes: Mapping[str, int], given: Mapping[str, np.ndarray]) -> np.ndarray:
    shape = tuple(sizes[dimension] for dimension in variable.dimensions)
    if variable.name in given:
        return np.broadcast_to(given[variable.name], shape)
    if variable.dtype == "text":
        return np.array(LABELS.get(variable.name, [""] * shape[0]), dtype=object)
    quiet = np.nan if variable.dtype == "f4" or variable.name == "velocity_limit" else 0
    return np.full(shape, quiet)


@pytest.fixture(name="at")
def at_fixture():
    return at


@pytest.fixture(name="run_by_hand")
def run_by_hand_fixture():
    return run_by_hand

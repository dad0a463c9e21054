"""An invented morning of two gates, quiet unless a test says otherwise."""

from collections.abc import Callable
from datetime import datetime, timedelta, timezone

import numpy as np
import pytest
import xarray as xr

from toeline.results.dataset import DatasetSink
from toeline.results.provenance import run_attributes
from toeline.results.variables import VARIABLES, Variable
from toeline.units import Display, UnitSystem

START = datetime(2031, 5, 4, 6, tzinfo=timezone(timedelta(hours=2)))
STEP_MS = 300_000
SIZES = {
    "gate": 2, "bay": 2, "pool": 2, "offtake": 1, "escape": 1, "gauge": 1, "node": 4, "time": 49, "profile_time": 5,
    "order": 0,
}  # fmt: skip
LABELS = {
    "gate": ["Middle check", "Last check"],
    "bay": ["Last check, bay 1", "Last check, bay 2"],
    "bay_gate": ["Last check", "Last check"],
    "pool": ["Upper pool", "Lower pool"],
    "offtake": ["East lateral"],
    "gate_upstream_pool": ["Upper pool", "Lower pool"],
    "gate_downstream_pool": ["Lower pool", "tail"],
    "offtake_pool": ["Lower pool"],
    "escape": ["Storm escape"],
    "escape_pool": ["Upper pool"],
    "gauge": ["Staff 3"],
    "gauge_pool": ["Lower pool"],
}
DROWNED_FLOW, DROWNED_JUMP = 3, 1
QUIET = {
    "protection_margin": 0.30,
    "tailwater_margin": 0.10,
    "jump_end_distance": 9.0,
    "jump_state": DROWNED_JUMP,
    "gate_flow_state": DROWNED_FLOW,
    "pool_roughness_factor": 1.0,
    "gauge_reading": 1.25,
}


def quiet(variable: Variable, sizes: dict[str, int]) -> np.ndarray:
    shape = tuple(sizes[dimension] for dimension in variable.dimensions)
    if variable.name in LABELS:
        return np.array(LABELS[variable.name], dtype=object)
    if variable.name in ("time", "profile_time"):
        return np.arange(shape[0], dtype=np.int64) * STEP_MS * (12 if variable.name == "profile_time" else 1)
    if variable.dtype == "text":
        return np.full(shape, "", dtype=object)
    return np.full(shape, QUIET.get(variable.name, 0.0))


@pytest.fixture
def invented_run() -> Callable[..., xr.Dataset]:
    """Build the run with some variables given, and some global attributes."""

    def build(outcome: str = "complete", attributes: dict[str, str] | None = None, **given: np.ndarray) -> xr.Dataset:
        sizes = SIZES | {"order": len(given.get("order_time", ()))}
        values = {v.name: given.get(v.name, quiet(v, sizes)) for v in VARIABLES.values() if not v.is_state}
        growing = {name for name, variable in VARIABLES.items() if variable.grows}
        about = run_attributes(
            title="A short morning", canal="Alder branch", plan="raise", canal_text="", day_text="", settings={},
            input_hash="0" * 64, surface_names=["bed"], units_for_display="metric", zone=None, start=START,
            version="0.1.0", created=START,
        )  # fmt: skip
        sink = DatasetSink({n: v for n, v in values.items() if n not in growing}, about | (attributes or {}), START)
        sink.write({name: value for name, value in values.items() if name in growing})
        sink.close(outcome)
        return sink.dataset

    return build


@pytest.fixture
def metric() -> Display:
    return Display(UnitSystem.metric)


@pytest.fixture
def ordered_run(invented_run) -> Callable[..., xr.Dataset]:
    """Build the run with orders to the Middle check, one every quarter of an hour from 06:30 on, each of 0.06 m.

    The level above it rises by 1 mm a minute from 51.40 m; that below stands at 50.60 m. A turn is 5 mm.
    """

    def build(count: int = 2, **given: object) -> xr.Dataset:
        minutes = 30.0 + 15.0 * np.arange(count)
        openings = 0.30 + 0.06 * np.arange(count + 1)
        level = 51.40 + 0.005 * np.arange(SIZES["time"])
        values = {
            "order_time": 60.0 * minutes,
            "order_completed": 60.0 * minutes + 90.0,
            "order_gate": np.full(count, "Middle check", object),
            "order_source": np.full(count, "schedule", object),
            "order_kind": np.zeros(count),
            "order_value": openings[1:],
            "order_opening_before": openings[:-1],
            "order_opening_after": openings[1:],
            "order_status": np.zeros(count),
            "order_reason": np.full(count, "", object),
            "gate_headwater_level": np.stack([level, level], axis=1),
            "gate_tailwater_level": np.full((SIZES["time"], 2), 50.60),
            "settling": np.ones((SIZES["time"], 2)),
            "pool_wave_round_trip": np.array([600.0, 300.0]),
            "gate_protection_end": np.array([23.0, 0.0]),
            "gate_turn": np.array([0.005, np.nan]),
            "gate_scale_mark": np.full(2, np.nan),
            "gate_gatekeeper": np.array(["Upper beat", "Lower beat"], object),
        }
        return invented_run(**values | given)

    return build

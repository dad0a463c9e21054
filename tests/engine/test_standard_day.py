"""Accuracy in time on the standard day: 10 pools of 4 km, 20 gate moves, 2 inflow steps."""

import numpy as np
import pytest
from tests.canals import scenario_of, standard_day

from toeline import simulate


@pytest.fixture(scope="module")
def levels(tmp_path_factory):
    """Levels of the day by tolerance [m]."""
    folder = tmp_path_factory.mktemp("standard_day")
    return {tolerance: _levels(folder, tolerance) for tolerance in (1e-7, 3e-4, 3e-3)}


def _levels(folder, tolerance: float) -> np.ndarray:
    run = simulate(scenario_of(folder, *standard_day(level_tolerance=tolerance)))
    assert run.sizes["node"] >= 410
    assert run.sizes["order"] == 20
    names = ("pool_head_level", "pool_tail_level", "water_level")
    return np.concatenate([run[name].values.astype(float).ravel() for name in names])


def worst(levels, tolerance: float) -> float:
    return float(np.max(np.abs(levels[tolerance] - levels[1e-7])))


def test_worst_level_error_at_the_default_tolerance(levels):
    assert worst(levels, 3e-3) <= 2e-3


def test_error_falls_threefold_for_a_tenfold_tighter_tolerance(levels):
    assert worst(levels, 3e-4) <= worst(levels, 3e-3) / 3.0

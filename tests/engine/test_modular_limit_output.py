"""The modular limit that goes to the file, against the rating of the gate and against the state of the flow."""

from pathlib import Path

import numpy as np
import pytest
import xarray as xr

from toeline import load_canal, load_scenario, simulate
from toeline.network.rating import rating_table
from toeline.results.variables import FLOW_STATES

DAY = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"


@pytest.fixture(scope="module")
def run() -> xr.Dataset:
    return simulate(load_scenario(DAY, plan="early", overrides=['period.length="10 h"']))


@pytest.mark.parametrize("gate", ["Head gate", "Mill check", "Lower check"])
@pytest.mark.parametrize("row", [0, 367, 600])
def test_it_is_that_of_the_rating_at_the_same_headwater_and_opening(gate, row, run):
    here = run.sel(gate=gate).isel(time=row)
    (rated,) = rating_table(
        load_canal(DAY.with_name("canal.toml")), gate, [float(here["gate_headwater_level"])],
        [float(here["gate_tailwater_level"])], [float(here["gate_opening"])],
    )  # fmt: skip
    assert float(here["gate_modular_limit_level"]) == pytest.approx(rated.modular_limit_level, abs=1e-5)


def test_the_flow_is_free_below_it_and_drowned_above(run):
    above = (run["gate_tailwater_level"] - run["gate_modular_limit_level"]).values
    states = run["gate_flow_state"].values
    assert np.all(above[states == FLOW_STATES.index("free")] < 0.0)
    assert np.all(above[states == FLOW_STATES.index("drowned")] > 0.0)
    assert (states == FLOW_STATES.index("free")).any()
    assert (states == FLOW_STATES.index("drowned")).any()


def test_a_closed_gate_has_none():
    run = simulate(
        load_scenario(DAY.with_name("filling_from_dry.toml"), plan="in_one_step", overrides=['period.length="1 h"'])
    )
    closed = run["gate_flow_state"].values == FLOW_STATES.index("closed")
    assert closed.any()
    assert np.isnan(run["gate_modular_limit_level"].values[closed]).all()

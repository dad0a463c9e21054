"""No day, however violent, breaks a run or its ledger."""

import numpy as np
import pytest
from tests.invariants.violent_days import write_day

import toeline
from toeline.errors import ScenarioError

DAYS = 240
IN_ONE_TEST = 12


@pytest.mark.parametrize("first", range(0, DAYS, IN_ONE_TEST))
def test_violent_days_run_to_their_end(tmp_path, first):
    for seed in range(first, first + IN_ONE_TEST):
        run = simulate_day(tmp_path, seed)
        assert run.attrs["outcome"] == "complete", seed
        for name in ("water_level", "discharge", "pool_tail_level", "gate_discharge", "pool_volume", "delivery"):
            assert np.isfinite(run[name].values).all(), (seed, name)
        moved = float(run.canal_inflow_volume[-1]) + float(run.canal_storage[0])
        assert np.abs(run.balance_residual.values).max() <= 1e-9 * max(moved, 1.0), seed


def simulate_day(folder, seed):
    """Run a random day: half of them with local inertia, from targets where they can be held, else from dry."""
    inertial, start = bool(seed % 2), "dry" if seed % 4 > 1 else "steady"
    try:
        return toeline.simulate(toeline.load_scenario(write_day(folder, seed, inertial, start)))
    except ScenarioError:
        return toeline.simulate(toeline.load_scenario(write_day(folder, seed, inertial, "dry")))

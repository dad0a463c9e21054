"""A pool that is shut off and drained, and filled again."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate

DRY = 0.03
"""Depth [m] below which a node counts as dry."""


@pytest.fixture(scope="module", params=[False, True], ids=["quasi-steady", "local inertia"])
def run(request, tmp_path_factory):
    """The upper gate shut from 2 h to 30 h while the lower pool drains over a free overfall."""
    slope_down = [{"length": 18.0, "section": "basin", "surface": "apron"}]
    canal = stepped_canal(2, 1000.0, floor=slope_down, slope=5e-4, gate={"hoist_speed": "0.5 m/min"})
    canal["tail"] = {"kind": "free overfall", "floor_level": 0.0}
    orders = [order("+2 h", "G0", opening=0.0), order("+2 h", "G1", opening=2.0), order("+30 h", "G0", opening=0.5)]
    inflow = {"shape": "steps", "values": [["+0 h", 8.0], ["+2 h", 0.0], ["+29 h", 8.0]]}
    period = {"local_inertia": request.param}
    made = day(inflow, length="48 h", period=period, orders=orders)
    return simulate(scenario_of(tmp_path_factory.mktemp("drying"), canal, made))


def depth(run):
    return (run.water_level - run.bed_level).isel(node=run.node_pool.values == 1)


def at(hours):
    """Profile at so many hours."""
    return int(hours * 6)


def test_pool_runs_dry(run):
    assert depth(run)[at(29)].max() < DRY


def test_nothing_flows_where_nothing_is_left(run):
    assert np.abs(run.discharge.isel(node=run.node_pool.values == 1)[at(29)]).max() < 1e-3


def test_no_level_below_the_bed(run):
    assert (run.water_level >= run.bed_level).all()


def test_pool_fills_again(run):
    assert depth(run)[at(47)].min() > 0.2
    assert run.discharge[at(47), -1] == pytest.approx(8.0, abs=0.1)


def test_every_number_is_finite(run):
    for name in ("water_level", "discharge", "velocity", "pool_volume", "gate_discharge", "gate_tailwater_level"):
        assert np.isfinite(run[name]).all(), name


def test_ledger_closes_while_dry(run):
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]

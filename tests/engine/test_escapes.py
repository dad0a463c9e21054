"""Side weirs along a pool: what they let out, free and drowned."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate

CREST = 2.95  # 2 cm above the level of the steady pool beside it
CUT = [order("01:00", "G1", opening=0.05)]


def escape(**keys):
    return {"name": "E0", "pool": "P1", "chainage": 1480.0, "crest_level": CREST, "length": 6.0, **keys}


def run_of(folder, *escapes, orders=CUT, length="4 h"):
    canal = stepped_canal(3, 1500.0, escapes=list(escapes), gauges=[gauge_at_crest()])
    return simulate(scenario_of(folder, canal, day(8.0, orders=orders, length=length)))


def gauge_at_crest():
    """Reads the head over the crest at the node that the water leaves: the last of the pool."""
    return {"name": "head", "gate": "G1", "side": "upstream", "zero_level": CREST}


def test_escape_spills_by_its_law_once_the_water_is_over_its_crest(tmp_path):
    run = run_of(tmp_path, escape(chainage=1500.0))
    head = np.maximum(run.gauge_reading.values[:, 0], 0.0)
    assert run.escape_discharge[0, 0] == 0.0
    assert run.escape_discharge[-1, 0] > 1.0
    assert run.escape_discharge.values[:, 0] == pytest.approx(1.7 * 6.0 * head**1.5, abs=5e-3)


def test_drowned_escape_passes_the_share_of_villemonte(tmp_path):
    """(1 − (h₂/h₁)^1.5)^0.385 with the outside level 0.20 m over the crest; hand value beside the run's own head."""
    run = run_of(tmp_path, escape(chainage=1500.0, outside_level=CREST + 0.20), length="12 h")
    head = float(run.gauge_reading[-1, 0])
    by_hand = 1.7 * 6.0 * head**1.5 * (1.0 - (0.20 / head) ** 1.5) ** 0.385
    assert head > 0.25
    assert run.escape_discharge[-1, 0] == pytest.approx(by_hand, rel=1e-3)


def test_nothing_comes_in_over_a_crest_below_the_level_outside(tmp_path):
    run = run_of(tmp_path, escape(outside_level=5.0), length="1 h", orders=[])
    assert not run.escape_discharge.any()
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6


def test_ledger_closes_pool_by_pool_with_two_escapes(tmp_path):
    drowned = escape(name="E1", pool="P0", crest_level=3.42, outside_level=3.45, length=20.0)
    run = run_of(tmp_path, escape(coefficient=1.9), drowned, length="12 h")
    assert run.escape_volume[-1].min() > 0.0
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]
    spilled = np.array([0.0, 0.0, 0.0])
    spilled[[1, 0]] = run.escape_volume[-1]
    stored = run.pool_volume[-1] - run.pool_volume[0]
    passed = run.pool_inflow_volume[-1] - run.pool_outflow_volume[-1]
    assert np.abs(passed - spilled - stored).max() <= 1e-9 * run.canal_inflow_volume[-1]


def test_escape_keeps_the_water_lower_than_without_it(tmp_path):
    with_escape, without = run_of(tmp_path, escape()), run_of(tmp_path)
    assert with_escape.pool_tail_level[-1, 1] < without.pool_tail_level[-1, 1] - 0.1

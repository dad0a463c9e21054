"""A roughness factor is Manning's n times the factor, changed at midnight."""

import numpy as np
import pytest
from tests.canals import day, scenario_of, stepped_canal, trapezoid

from toeline import simulate

SETTLED = {"openings": {"G0": 0.45, "G1": 0.45}, "state": "steady"}


def run_of(folder, roughness=0.016, inflow=8.0, period=None, length="3 h", **tables):
    canal = stepped_canal(2, 1500.0, **tables)
    canal["sections"] = {"basin": {**canal["sections"]["basin"], "roughness": roughness}}
    canal["sections"]["canal"] = trapezoid(6.0, 1.5, roughness)
    return simulate(scenario_of(folder, canal, day(inflow, length=length, start=SETTLED, period=period)))


def test_factor_equals_a_rougher_section(tmp_path):
    pulse = [["00:00", 8.0], ["01:00", 9.0], ["02:00", 8.0]]
    by_factor = run_of(tmp_path, inflow=pulse, roughness_calendar=[{"from": "05-01", "factor": 1.25}])
    by_section = run_of(tmp_path, roughness=0.016 * 1.25, inflow=pulse)
    assert np.abs(by_factor.water_level - by_section.water_level).max() <= 1e-9
    assert np.abs(by_factor.pool_roughness_factor - 1.25).max() <= 1e-6


def test_factor_holds_in_its_own_pools_alone(tmp_path):
    run = run_of(tmp_path, roughness_calendar=[{"from": "05-01", "factor": 2.0, "pools": ["P0"]}])
    clean = run_of(tmp_path)
    assert run.pool_head_level[0, 0] > clean.pool_head_level[0, 0] + 0.02
    assert run.pool_head_level[0, 1] == pytest.approx(float(clean.pool_head_level[0, 1]), abs=1e-9)


def test_weed_cut_at_midnight_lowers_the_water_and_loses_none(tmp_path):
    calendar = [{"from": "05-01", "factor": 2.0}, {"from": "05-05", "factor": 1.0, "note": "weed cut"}]
    run = run_of(tmp_path, length="72 h", roughness_calendar=calendar)
    hours = (run.time - run.time[0]).values / np.timedelta64(1, "h")
    factor, level = run.pool_roughness_factor[:, 0].values, run.pool_head_level[:, 0].values
    assert set(factor[hours < 24.0]) == {2.0}
    assert set(factor[hours >= 24.0]) == {1.0}
    assert np.abs(level[hours <= 24.0] - level[0]).max() <= 1e-6
    assert level[-1] == pytest.approx(float(run_of(tmp_path).pool_head_level[0, 0]), abs=1e-4)
    assert run.settling[:, 0].values[hours == 24.0] == [1]
    assert not run.settling[:, 0].values[hours < 24.0].any()
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]

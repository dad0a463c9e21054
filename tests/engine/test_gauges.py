"""Staff gauges read the levels above their zeros."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate

GAUGES = [
    {"name": "above", "gate": "G0", "side": "upstream", "zero_level": 1.0},
    {"name": "below", "gate": "G0", "side": "downstream", "zero_level": 0.8},
    {"name": "beyond", "gate": "G1", "side": "downstream", "zero_level": 2.0},
    {"name": "middle", "pool": "P1", "chainage": 777.0, "zero_level": 0.25},
]


def run_of(folder, **tables):
    canal = stepped_canal(2, 1500.0, gauges=GAUGES)
    return simulate(scenario_of(folder, canal, day(8.0, length="2 h", **tables)))


def test_gauges_beside_gates_are_their_levels_less_the_zeros(tmp_path):
    run = run_of(tmp_path, orders=[order("00:30", "G0", by=0.1)])
    expected = {
        "above": run.gate_headwater_level.sel(gate="G0") - 1.0,
        "below": run.gate_tailwater_level.sel(gate="G0") - 0.8,
        "beyond": run.gate_tailwater_level.sel(gate="G1") - 2.0,
    }
    for name, reading in expected.items():
        assert np.abs(run.gauge_reading.sel(gauge=name) - reading).max() <= 1e-12, name


def test_gauge_below_its_zero_reads_negative(tmp_path):
    assert run_of(tmp_path).gauge_reading.sel(gauge="beyond")[0] == pytest.approx(1.5 - 2.0)


def test_gauge_along_a_pool_reads_between_the_nodes_beside_it(tmp_path):
    run = run_of(tmp_path)
    level = np.interp(1500.0 + 777.0, run.chainage, run.water_level[0])
    assert run.gauge_reading.sel(gauge="middle")[0] == pytest.approx(level - 0.25, abs=1e-9)
    assert run.gauge_chainage.values.tolist() == [1500.0, 1500.0, 3000.0, 2277.0]
    assert run.gauge_pool.values.tolist() == ["P0", "P1", "tail", "P1"]


def test_gauge_in_a_dry_pool_has_no_reading(tmp_path):
    run = run_of(tmp_path, start={"state": "dry"})
    assert run.gauge_reading.sel(gauge=["above", "middle"])[0].isnull().all()


def test_gauge_above_a_head_gate_reads_the_reservoir(tmp_path):
    canal = stepped_canal(1, 1000.0, gauges=[{"name": "R", "gate": "H", "side": "upstream", "zero_level": 1.5}])
    head = {"bays": 1, "bay_width": 3.0, "sill_level": 1.0, "max_opening": 1.5, "kind": "vertical"}
    canal["gates"].insert(0, {"name": "H", "upstream": "head", "downstream": "P0", **head})
    canal["head"] = {"kind": "reservoir", "level": 4.0}
    start = {"state": "steady", "openings": {"H": 0.4, "G0": 0.5}}
    run = simulate(scenario_of(tmp_path, canal, day(length="1 h", start=start)))
    assert run.gauge_reading.values == pytest.approx(2.5)
    assert (run.gauge_pool.values[0], run.gauge_chainage.values[0]) == ("head", 0.0)
    assert np.abs(run.water_level - run.water_level[0]).max() <= 1e-6

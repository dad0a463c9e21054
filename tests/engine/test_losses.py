"""Seepage, evaporation and rain along a canal."""

import numpy as np
import pytest
from tests.canals import day, prismatic_canal, rectangle, scenario_of, stepped_canal

from toeline import simulate

DAY = 86_400.0
LEVEL = {"kind": "level", "level": 2.0}


def still_pool(folder, canal_losses=None, day_losses=None, length="6 h", **tables):
    """A level rectangular pool 1 km long and 5 m wide, 2 m deep, with little inflow."""
    canal = prismatic_canal(rectangle(5.0), 1000.0, 0.0, LEVEL, **tables)
    if canal_losses:
        canal["losses"] = canal_losses
    weather = {"losses": day_losses} if day_losses else {}
    return simulate(scenario_of(folder, canal, day(0.1, length=length, **weather)))


def test_seepage_is_that_of_the_wetted_area(tmp_path):
    """9 m of wetted perimeter over 1 km at 400 mm/day: 3600 m³ a day."""
    run = still_pool(tmp_path, {"seepage": "400 mm/day"})
    assert run.pool_losses[0, 0] == pytest.approx(3600.0 / DAY, rel=1e-4)
    assert run.pool_loss_volume[-1, 0] == pytest.approx(900.0, rel=1e-3)


def test_surface_gives_its_own_seepage(tmp_path):
    surfaces = {"lining": {"protected": False, "seepage": "40 mm/day"}, "earth": {"protected": False}}
    canal = prismatic_canal(rectangle(5.0), 1000.0, 0.0, LEVEL, surfaces=surfaces, losses={"seepage": "400 mm/day"})
    lined, earth = ({"length": 500.0, "section": "canal", "surface": name} for name in ("lining", "earth"))
    canal["pools"][0]["stretches"] = [lined, earth]
    run = simulate(scenario_of(tmp_path, canal, day(0.1, length="1 h")))
    assert run.pool_losses[0, 0] == pytest.approx((360.0 + 3600.0) / 2.0 / DAY, rel=1e-4)


def test_rain_and_evaporation_of_the_day_go_before_those_of_the_canal(tmp_path):
    """5 m of surface over 1 km: 8 mm/day are 40 m³ a day, 24 mm/h are 2880."""
    rain = [["00:00", 0.0], ["02:00", "24 mm/h"], ["03:00", 0.0]]
    run = still_pool(tmp_path, {"evaporation": "8 mm/day", "rain": "50 mm/day"}, {"rain": rain})
    rates = run.pool_losses[:, 0]
    assert rates[30] == pytest.approx(40.0 / DAY, rel=1e-4)
    assert rates[150] == pytest.approx((40.0 - 2880.0) / DAY, rel=1e-4)
    assert run.pool_loss_volume[-1, 0] == pytest.approx(10.0 - 120.0, rel=1e-3)


def test_seepage_of_the_day_goes_before_that_of_canal_and_surface(tmp_path):
    """9 m of wetted perimeter over 1 km at 50 mm/day: 450 m³ a day, whatever lies on the bed."""
    surfaces = {"lining": {"protected": False, "seepage": "40 mm/day"}}
    measured = {"seepage": {"P0": "50 mm/day"}}
    run = still_pool(tmp_path, {"seepage": "400 mm/day"}, measured, surfaces=surfaces)
    assert run.pool_losses[0, 0] == pytest.approx(450.0 / DAY, rel=1e-4)
    assert run.pool_loss_volume[-1, 0] == pytest.approx(112.5, rel=1e-3)


def test_pools_that_the_day_does_not_name_seep_as_the_canal_says(tmp_path):
    canal = stepped_canal(2, 1500.0, losses={"seepage": "400 mm/day"})
    plain = simulate(scenario_of(tmp_path, canal, day(8.0, length="1 h")))
    relined = simulate(scenario_of(tmp_path, canal, day(8.0, length="1 h", losses={"seepage": {"P1": 0.0}})))
    assert relined.pool_losses[0].values == pytest.approx([float(plain.pool_losses[0, 0]), 0.0], rel=1e-3)


def test_canal_gives_the_weather_where_the_day_does_not(tmp_path):
    run = still_pool(tmp_path, {"evaporation": "8 mm/day", "rain": "2 mm/day"})
    assert run.pool_losses[0, 0] == pytest.approx(30.0 / DAY, rel=1e-4)


def test_canal_that_runs_dry_stops_losing_and_closes_its_ledger(tmp_path):
    """A metre of water a day seeps out of 15 cm: the pool dries within hours."""
    canal = prismatic_canal(rectangle(5.0), 1000.0, 0.0, {"kind": "rating", "rating": [[3.0, 0.0], [4.0, 1.0]]})
    canal["losses"] = {"seepage": "2 m/day"}
    series = {"shape": "steps", "values": [["00:00", 0.5], ["01:00", 0.0]]}
    run = simulate(scenario_of(tmp_path, canal, day(series, length="24 h", start={"state": "dry"})))
    depth = run.water_level[-1].values
    assert run.pool_losses[60:, 0].max() > 0.05
    assert 0.0 <= run.pool_losses[-1, 0] < 1e-3
    assert 0.015 < depth.min() <= depth.max() < 0.06
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]


def test_rain_on_a_dry_canal_is_not_counted(tmp_path):
    canal = stepped_canal(2, 1500.0, losses={"rain": "50 mm/day"})
    run = simulate(scenario_of(tmp_path, canal, day(0.0, length="2 h", start={"state": "dry"})))
    assert not run.pool_losses.any()

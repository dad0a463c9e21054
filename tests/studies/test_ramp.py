"""The ramp test of whole canals, against hydraulics worked out apart from the program."""

import math
from dataclasses import replace

import pytest
from scipy.optimize import brentq
from tests.canals import day, prismatic_canal, scenario_of, stepped_canal, trapezoid

from toeline import simulate
from toeline.errors import UsageError
from toeline.studies.ramp import SHARE, ramp_test

WIDTH, SIDE_SLOPE, ROUGHNESS, SLOPE, DEPTH = 7.0, 1.5, 0.02, 1e-4, 1.7
"""Section of the first pools of ASCE test canal 2 (Clemmens et al. 1998), flowing uniformly at 1.7 m."""
CELERITY = 0.81855
"""m/s of a slow wave on that flow, V·(5/3 − (2A/3TP)·dP/dy); derived, and checked apart from the program."""
LENGTH = 40_000.0


def area(depth: float) -> float:
    return (WIDTH + SIDE_SLOPE * depth) * depth


def uniform_discharge(depth: float) -> float:
    perimeter = WIDTH + 2.0 * depth * math.hypot(1.0, SIDE_SLOPE)
    return area(depth) ** (5.0 / 3.0) / perimeter ** (2.0 / 3.0) / ROUGHNESS * math.sqrt(SLOPE)


def ramp_of(scenario):
    return ramp_test(scenario, simulate(scenario))


@pytest.fixture(scope="module")
def uniform(tmp_path_factory):
    """The passage of a ramp along 40 km of uniform flow."""
    canal = prismatic_canal(
        trapezoid(WIDTH, SIDE_SLOPE, ROUGHNESS), LENGTH, SLOPE, {"kind": "normal depth", "slope": SLOPE}
    )
    made = day(uniform_discharge(DEPTH), length="2 h", period={"spacing": 500.0})
    return ramp_of(scenario_of(tmp_path_factory.mktemp("uniform"), canal, made))


def test_all_of_the_ramp_passes_a_uniform_canal(uniform):
    assert uniform.is_passed
    assert uniform.rise == pytest.approx(SHARE * uniform_discharge(DEPTH), rel=1e-6)
    assert uniform.outflow[1] - uniform.outflow[0] == pytest.approx(uniform.rise, rel=0.01)


def test_slow_wave_time_is_that_of_the_published_celerity(uniform):
    assert uniform.slow_wave == pytest.approx(LENGTH / CELERITY, rel=1e-3)


def test_fast_wave_time_is_that_of_a_small_gravity_wave(uniform):
    celerity = math.sqrt(9.80665 * area(DEPTH) / (WIDTH + 2.0 * SIDE_SLOPE * DEPTH))
    assert uniform.fast_wave == pytest.approx(LENGTH / (celerity + uniform_discharge(DEPTH) / area(DEPTH)), rel=1e-3)


def test_volume_taken_up_is_that_between_both_uniform_flows(uniform):
    discharge = (1.0 + SHARE) * uniform_discharge(DEPTH)
    after = brentq(lambda depth: uniform_discharge(depth) - discharge, DEPTH, 2.0 * DEPTH)
    assert uniform.stored == pytest.approx(LENGTH * (area(after) - area(DEPTH)), rel=2e-3)


def test_half_of_the_rise_needs_about_the_time_of_a_slow_wave(uniform):
    """The wave spreads, so that half of it is out somewhat before L/c."""
    assert 0.8 < uniform.half_passed / (LENGTH / CELERITY) < 1.0


def test_a_ramp_passes_gates_and_what_offtakes_take_counts(tmp_path):
    take = {
        "name": "T0",
        "pool": "P1",
        "chainage": 500.0,
        "kind": "orifice",
        "sill_level": 0.5,
        "width": 0.6,
        "opening": 0.3,
    }
    canal = stepped_canal(2, 800.0, offtakes=[take])
    found = ramp_of(scenario_of(tmp_path, canal, day(8.0, length="1 h")))
    assert found.is_passed
    assert found.inflow == pytest.approx((8.0, 8.8))
    assert found.taken > 0.001
    assert found.outflow[1] - found.outflow[0] == pytest.approx(0.8 - found.taken, rel=0.01)


def test_orders_and_series_of_the_day_are_left_out(tmp_path):
    orders = [{"at": "00:10", "gate": "G0", "opening": 0.1}]
    series = {"shape": "lines", "values": [["00:00", 8.0], ["01:00", 2.0]]}
    canal = stepped_canal(2, 800.0)
    busy = ramp_of(scenario_of(tmp_path, canal, day(series, length="1 h", orders=orders)))
    quiet = ramp_of(scenario_of(tmp_path, canal, day(8.0, length="1 h"), name="quiet"))
    assert replace(busy, half_passed=0.0) == replace(quiet, half_passed=0.0)


def test_a_reservoir_is_raised(tmp_path):
    canal = stepped_canal(2, 800.0, head={"kind": "reservoir", "level": 4.2})
    canal["gates"].insert(
        0, {**canal["gates"][0], "name": "H", "upstream": "head", "downstream": "P0", "sill_level": 1.0}
    )
    start = {"state": "steady", "openings": "to hold targets", "inflow": 8.0}
    found = ramp_of(scenario_of(tmp_path, canal, day(length="1 h", start=start)))
    assert found.is_passed
    assert found.inflow[0] == pytest.approx(8.0)
    assert 0.0 < found.rise < SHARE * 8.0


def test_a_day_that_starts_dry_is_tested_on_its_mean_inflow(tmp_path):
    made = day(3.0, length="6 h", start={"state": "dry", "openings": {"G0": 0.5}})
    found = ramp_of(scenario_of(tmp_path, stepped_canal(1, 800.0), made))
    assert found.is_passed
    assert found.inflow == pytest.approx((3.0, 3.3))


def test_a_canal_that_lets_nothing_out_has_no_ramp(tmp_path):
    take = {"name": "T0", "pool": "P0", "chainage": 700.0, "kind": "demand", "sill_level": 0.5}
    made = day(2.0, length="1 h", deliveries={"T0": 2.0}, start={"state": "steady", "openings": "to hold targets"})
    with pytest.raises(UsageError, match="no water passes the tail"):
        ramp_of(scenario_of(tmp_path, stepped_canal(1, 800.0, offtakes=[take]), made))

"""Lead times of pools against an independent integration, and where there are none."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad, solve_ivp
from tests.canals import prismatic_canal, rectangle, trapezoid

from toeline.constants import GRAVITY
from toeline.hydraulics import cross_section
from toeline.network.build import network_of
from toeline.network.lead_times import pool_times, response
from toeline.scenario.schema.canal import Canal

LENGTH, SLOPE, ROUGHNESS, WIDTH, SIDE, HELD = 7000.0, 0.0001, 0.020, 7.0, 1.5, 2.1


def area(depth):
    return depth * (WIDTH + SIDE * depth)


def steady_volume(discharge: float) -> float:
    """Volume of the pool by the differential equation of its surface, from the lower end up (scipy)."""

    def slope_of_depth(_, depth):
        a = area(depth)
        perimeter = WIDTH + 2.0 * depth * np.sqrt(1.0 + SIDE**2)
        friction = (discharge * ROUGHNESS) ** 2 * perimeter ** (4.0 / 3.0) / a ** (10.0 / 3.0)
        froude_squared = discharge**2 * (WIDTH + 2.0 * SIDE * depth) / (GRAVITY * a**3)
        return (SLOPE - friction) / (1.0 - froude_squared)

    depths = solve_ivp(slope_of_depth, (LENGTH, 0.0), [HELD], dense_output=True, rtol=1e-9, atol=1e-9).sol
    return quad(lambda x: area(depths(x)[0]), 0.0, LENGTH, epsrel=1e-9)[0]


def times_at(discharge: float, section: dict, slope: float = SLOPE, **tables):
    canal = prismatic_canal(section, LENGTH, slope, {"kind": "level", "level": HELD}, **tables)
    canal["pools"][0]["target_level"] = HELD
    network = network_of(Canal.model_validate(canal), 100.0)
    return pool_times(network, np.full(network.node_count, HELD), np.full(network.node_count + 1, discharge))


@pytest.mark.parametrize("discharge", [2.7, 11.0])
def test_lead_time_by_volume_is_the_change_of_volume_for_a_change_of_flow(discharge):
    found = times_at(discharge, trapezoid(WIDTH, SIDE, ROUGHNESS)).volume[0]
    expected = (steady_volume(1.01 * discharge) - steady_volume(0.99 * discharge)) / (0.02 * discharge)
    assert found == pytest.approx(expected, rel=0.005)


def test_water_that_stands_has_no_lead_time():
    times = times_at(0.0, trapezoid(WIDTH, SIDE, ROUGHNESS))
    assert np.isnan([times.wave[0], times.volume[0], times.area[0]]).all()


def test_flow_that_is_not_calm_has_no_lead_time():
    times = times_at(90.0, trapezoid(WIDTH, SIDE, ROUGHNESS))
    assert np.isnan([times.wave[0], times.volume[0]]).all()


def test_a_level_bed_is_all_backed_up():
    # hardly any friction: one depth all along, so the delay is L/(V + C) and the area that of the surface
    discharge, depth, width = 4.0, 2.0, 5.0
    found = response(cross_section.rectangle(width), 1e-5, 0.0, 1000.0, depth, discharge)
    speed = discharge / (width * depth) + np.sqrt(GRAVITY * depth)
    assert found.delay == pytest.approx(1000.0 / speed, rel=1e-6)
    assert found.area == pytest.approx(1000.0 * width, rel=1e-3)


def test_an_adverse_bed_is_all_backed_up():
    times = times_at(3.0, rectangle(WIDTH, ROUGHNESS), slope=-1e-5)
    assert times.wave[0] > 0.0
    assert times.area[0] == pytest.approx(LENGTH * WIDTH, rel=0.1)


@given(
    slope=st.floats(-1e-3, 1e-2), depth=st.floats(-0.5, 6.0), discharge=st.floats(-5.0, 200.0),
    length=st.floats(1.0, 50_000.0), side=st.floats(0.0, 3.0),
)  # fmt: skip
def test_a_pool_answers_with_numbers_or_with_none_at_all(slope, depth, discharge, length, side):
    found = response(cross_section.trapezoid(3.0, side), ROUGHNESS, slope, length, depth, discharge)
    assert np.isnan(found).all() or (np.isfinite(found).all() and min(found) > 0.0)

"""Friction, normal depth and the kinematic wave."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from toeline.hydraulics import status
from toeline.hydraulics.cross_section import area, circle, rectangle, surveyed, trapezoid, triangle
from toeline.hydraulics.uniform_flow import conveyance, friction_slope, kinematic_celerity, normal_depth

SECTIONS = {
    "rectangle": rectangle(3.0),
    "trapezoid": trapezoid(2.0, 1.5),
    "triangle": triangle(2.0),
    "trapezoid with a top": trapezoid(2.0, 1.5, 1.0),
    "surveyed": surveyed([0, 1, 3, 4, 5, 7, 8], [2.5, 0.4, 0.4, 1.5, 0.0, 0.0, 2.5]),
}
ROUGHNESS, SLOPE = 0.015, 4e-4


@pytest.fixture(params=SECTIONS.values(), ids=SECTIONS.keys())
def section(request):
    return request.param


@pytest.mark.parametrize("discharge", [1e-3, 0.1, 1.0, 8.0])
def test_normal_depth_carries_the_discharge(section, discharge):
    depth, flag = normal_depth(section, ROUGHNESS, SLOPE, discharge)
    by_bisection = brentq(
        lambda y: conveyance(section, ROUGHNESS, y) * math.sqrt(SLOPE) - discharge, 1e-6, 20.0, xtol=1e-14
    )
    assert flag == status.OK
    assert depth == pytest.approx(by_bisection, rel=1e-9)
    assert friction_slope(section, ROUGHNESS, discharge, depth) == pytest.approx(SLOPE, rel=1e-9)


def _full_discharge(diameter):
    """The most that a circle carries part full, at 0.94 of its diameter."""
    depths = np.linspace(0.90, 0.97, 701) * diameter
    return max(conveyance(circle(diameter), ROUGHNESS, depth) for depth in depths) * math.sqrt(SLOPE)


@pytest.mark.parametrize("diameter", [0.2, 0.5, 1.0, 3.0])
@pytest.mark.parametrize("share", [0.02, 0.3, 0.8, 0.93, 0.99])
def test_lowest_normal_depth_of_a_circle(diameter, share):
    depth, flag = normal_depth(circle(diameter), ROUGHNESS, SLOPE, share * _full_discharge(diameter))
    assert flag == status.OK
    assert depth < 0.94 * diameter
    assert conveyance(circle(diameter), ROUGHNESS, depth) * math.sqrt(SLOPE) == pytest.approx(
        share * _full_discharge(diameter), rel=1e-9
    )


@pytest.mark.parametrize("diameter", [0.2, 1.0, 3.0])
@pytest.mark.parametrize("share", [1.001, 1.5, 10.0])
def test_no_normal_depth_beyond_what_a_circle_carries(diameter, share):
    depth, flag = normal_depth(circle(diameter), ROUGHNESS, SLOPE, share * _full_discharge(diameter))
    assert flag == status.NO_SOLUTION
    assert math.isnan(depth)


@pytest.mark.parametrize(("slope", "discharge"), [(0.0, 1.0), (-1e-3, 1.0), (1e-3, 0.0), (1e-3, -1.0)])
def test_no_normal_depth_without_slope_or_discharge(section, slope, discharge):
    depth, flag = normal_depth(section, ROUGHNESS, slope, discharge)
    assert flag == status.NO_SOLUTION
    assert math.isnan(depth)


def test_friction_opposes_the_flow(section):
    forward, backward = (friction_slope(section, ROUGHNESS, q, 0.8) for q in (2.0, -2.0))
    assert forward > 0.0
    assert backward == -forward
    assert friction_slope(section, ROUGHNESS, 0.0, 0.8) == 0.0


def test_friction_of_a_dry_section(section):
    assert conveyance(section, ROUGHNESS, 0.0) == 0.0
    assert friction_slope(section, ROUGHNESS, 0.0, 0.0) == 0.0
    assert friction_slope(section, ROUGHNESS, 1.0, 0.0) == math.inf
    assert friction_slope(section, ROUGHNESS, -1.0, 0.0) == -math.inf


def test_manning_formula():
    """V = R^(2/3)·√S/n: 2 m wide, 1 m deep, R = 0.5 m."""
    velocity = 0.5 ** (2.0 / 3.0) * math.sqrt(SLOPE) / ROUGHNESS
    assert conveyance(rectangle(2.0), ROUGHNESS, 1.0) * math.sqrt(SLOPE) == pytest.approx(2.0 * velocity, rel=1e-12)


@pytest.mark.parametrize("depth", [0.1, 0.6, 2.0])
def test_celerity_is_the_derivative_of_the_discharge_to_the_area(section, depth):
    nudge = 1e-6
    discharges = [conveyance(section, ROUGHNESS, depth + s * nudge) * math.sqrt(SLOPE) for s in (-1, 0, 1)]
    areas = [area(section, depth + s * nudge) for s in (-1, 1)]
    slope = (discharges[2] - discharges[0]) / (areas[1] - areas[0])
    assert kinematic_celerity(section, discharges[1], depth) == pytest.approx(slope, rel=1e-6)


@given(st.floats(1.0, 30.0), st.floats(0.0, 4.0), st.floats(0.008, 0.06), st.floats(1e-5, 0.05), st.floats(1e-4, 100.0))
def test_any_trapezoid(bottom, side, roughness, slope, discharge):
    section = trapezoid(bottom, side)
    depth, flag = normal_depth(section, roughness, slope, discharge)
    assert flag == status.OK
    assert conveyance(section, roughness, depth) * math.sqrt(slope) == pytest.approx(discharge, rel=1e-8)

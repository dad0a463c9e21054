"""Specific energy, critical depth and the supercritical depth of an energy."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq, minimize_scalar

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import (
    critical_depth,
    froude_number,
    specific_energy,
    specific_force,
    supercritical_depth,
)
from toeline.hydraulics.cross_section import circle, rectangle, surveyed, trapezoid, triangle

SECTIONS = {
    "rectangle": rectangle(3.0),
    "trapezoid": trapezoid(2.0, 1.5),
    "triangle": triangle(2.0),
    "trapezoid with a top": trapezoid(2.0, 1.5, 1.0),
    "circle": circle(2.0),
    "surveyed": surveyed([0, 0, 4, 4.5, 6, 7.5, 8, 12, 12], [3, 1.2, 1.0, 0.3, 0, 0.2, 1.1, 1.3, 2.6]),
    "uneven flow": trapezoid(2.0, 1.5, alpha=1.15, beta=1.05),
}


@pytest.fixture(params=SECTIONS.values(), ids=SECTIONS.keys())
def section(request):
    return request.param


@pytest.mark.parametrize("discharge", [1e-4, 0.02, 0.7, 4.0])
def test_critical_depth_has_the_least_energy(section, discharge):
    depth, flag = critical_depth(section, discharge)
    best = minimize_scalar(
        lambda y: specific_energy(section, discharge, y), bounds=(0.2 * depth, 3.0 * depth), options={"xatol": 1e-9}
    )
    assert flag == status.OK
    assert froude_number(section, discharge, depth) == pytest.approx(1.0, rel=1e-9)
    assert specific_energy(section, discharge, depth) == pytest.approx(best.fun, rel=1e-12)


def test_critical_depth_in_closed_form():
    """y_c³ = q²/g in a rectangle, y_c⁵ = 2Q²/(gz²) in a triangle (Chow 1959, ch. 4)."""
    assert critical_depth(rectangle(4.0), 8.0)[0] == pytest.approx((4.0 / GRAVITY) ** (1.0 / 3.0), rel=1e-12)
    assert critical_depth(triangle(2.0), 8.0)[0] == pytest.approx((2.0 * 64.0 / (GRAVITY * 4.0)) ** 0.2, rel=1e-12)


def test_no_discharge_has_no_critical_depth(section):
    assert critical_depth(section, 0.0) == (0.0, status.OK)


def test_direction_does_not_matter(section):
    assert critical_depth(section, -2.0) == critical_depth(section, 2.0)
    assert froude_number(section, -2.0, 1.0) == froude_number(section, 2.0, 1.0)


@pytest.mark.parametrize("discharge", [9.0, 13.0, 17.0, 25.0])
def test_critical_depth_of_a_nearly_full_circle(discharge):
    """Towards the crown the width closes and any discharge has its critical depth below the crown or in the slot."""
    depth, flag = critical_depth(circle(2.0), discharge)
    assert flag == status.OK
    assert froude_number(circle(2.0), discharge, depth) == pytest.approx(1.0, rel=1e-6)


@pytest.mark.parametrize("discharge", [5.0, 7.0, 9.0, 11.0, 13.0, 20.0])
def test_critical_depth_beside_wide_benches(discharge):
    """Where the width leaps at a bench there may be more than one; any of them is critical."""
    section = surveyed([0, 0, 12, 13, 15, 16, 28, 28], [3, 1.05, 1.0, 0, 0, 1.0, 1.05, 3])
    depth, flag = critical_depth(section, discharge)
    assert flag == status.OK
    assert froude_number(section, discharge, depth) == pytest.approx(1.0, rel=1e-6)


@pytest.mark.parametrize("discharge", [0.02, 0.7, 4.0])
@pytest.mark.parametrize("surplus", [1e-6, 1e-3, 0.1, 3.0])
def test_supercritical_depth_has_the_energy(section, discharge, surplus):
    critical, _ = critical_depth(section, discharge)
    energy = (1.0 + surplus) * specific_energy(section, discharge, critical)
    depth, flag = supercritical_depth(section, discharge, energy)
    by_bisection = brentq(
        lambda y: specific_energy(section, discharge, y) - energy, 1e-4 * critical, critical, xtol=1e-14
    )
    assert flag == status.OK
    assert specific_energy(section, discharge, depth) == pytest.approx(energy, rel=1e-10)
    assert depth == pytest.approx(by_bisection, rel=1e-6)


def test_too_little_energy_for_any_depth(section):
    critical, _ = critical_depth(section, 0.7)
    energy = 0.99 * specific_energy(section, 0.7, critical)
    assert supercritical_depth(section, 0.7, energy) == (critical, status.NO_SOLUTION)


def test_least_force_is_at_critical_depth():
    section, discharge = trapezoid(2.0, 1.5), 5.0
    best = minimize_scalar(lambda y: specific_force(section, discharge, y), bounds=(0.1, 3.0), options={"xatol": 1e-9})
    assert critical_depth(section, discharge)[0] == pytest.approx(best.x, abs=1e-6)


def test_nothing_at_no_depth(section):
    for quantity in (froude_number, specific_energy, specific_force):
        assert math.isinf(quantity(section, 1.0, 0.0))


@given(st.floats(0.1, 30.0), st.floats(0.0, 4.0), st.floats(1e-6, 1e3))
def test_any_trapezoid(bottom, slope, discharge):
    section = trapezoid(bottom, slope)
    depth, flag = critical_depth(section, discharge)
    assert flag == status.OK
    assert froude_number(section, discharge, depth) == pytest.approx(1.0, rel=1e-8)

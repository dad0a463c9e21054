"""Invariants of the free jump."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import critical_depth, froude_number, specific_energy, specific_force
from toeline.hydraulics.cross_section import area, circle, rectangle, surveyed, top_width, trapezoid
from toeline.hydraulics.hydraulic_jump import (
    LENGTH_GOOD,
    LENGTH_NOT_DEFINED,
    LENGTH_POORLY_KNOWN,
    energy_loss,
    jump_length_in_section,
    sequent_depth,
    subcritical_depth_of_force,
)

SECTIONS = {
    "rectangle": rectangle(3.0),
    "trapezoid": trapezoid(2.0, 1.5),
    "triangle": trapezoid(0.0, 2.0),
    "trapezoid with a top": trapezoid(2.0, 1.5, 0.8),
    "circle": circle(4.0),
    "surveyed": surveyed([0, 1.5, 2, 4, 4.3, 6], [2.5, 0.2, 0.0, 0.1, 0.3, 2.8]),
    "uneven flow": rectangle(3.0, alpha=1.1, beta=1.1),
}
sections = st.sampled_from(list(SECTIONS.values()))


def _discharge(section, depth, froude):
    flow_area = area(section, depth)
    return froude * flow_area * math.sqrt(GRAVITY * flow_area / (section[6] * top_width(section, depth)))


@given(sections, st.floats(0.02, 0.35), st.floats(1.02, 12.0))
def test_momentum_closes_and_energy_falls(section, toe, froude):
    discharge = _discharge(section, toe, froude)
    sequent, flag = sequent_depth(section, discharge, toe)
    assert flag == status.OK
    assert toe < critical_depth(section, discharge)[0] < sequent
    assert specific_force(section, discharge, sequent) == pytest.approx(
        specific_force(section, discharge, toe), rel=1e-9
    )
    assert energy_loss(section, discharge, toe, sequent) > 0.0


@given(sections, st.floats(0.05, 0.35), st.floats(1.05, 8.0))
def test_sequent_of_the_sequent(section, toe, froude):
    discharge = _discharge(section, toe, froude)
    sequent, _ = sequent_depth(section, discharge, toe)
    back, flag = sequent_depth(section, discharge, sequent)
    assert flag == status.OK
    assert back == pytest.approx(toe, rel=1e-7)


@given(st.floats(0.5, 20.0), st.floats(0.01, 2.0), st.floats(1.001, 15.0))
def test_rectangle_by_belanger(width, toe, froude):
    section = rectangle(width)
    discharge = _discharge(section, toe, froude)
    sequent, _ = sequent_depth(section, discharge, toe)
    assert sequent == pytest.approx(toe / 2.0 * (math.sqrt(1.0 + 8.0 * froude**2) - 1.0), rel=1e-7)
    by_depths = (sequent - toe) ** 3 / (4.0 * sequent * toe)
    loss = energy_loss(section, discharge, toe, sequent)
    assert loss == pytest.approx(by_depths, rel=1e-6, abs=1e-9 * specific_energy(section, discharge, toe))


@pytest.mark.parametrize("section", SECTIONS.values(), ids=SECTIONS.keys())
def test_weak_jumps_vanish(section):
    """y₂/y₁ → 1 and ΔE → 0 as Fr₁ → 1."""
    for surplus in (1e-2, 1e-3, 1e-4):
        discharge = _discharge(section, 0.3, 1.0 + surplus)
        sequent, flag = sequent_depth(section, discharge, 0.3)
        assert flag == status.OK
        assert sequent / 0.3 - 1.0 < 2.0 * surplus
        assert 0.0 <= energy_loss(section, discharge, 0.3, sequent) < 10.0 * surplus**3 + 1e-12


def test_critical_flow_has_no_other_depth():
    section, discharge = rectangle(3.0), 5.0
    critical, _ = critical_depth(section, discharge)
    assert sequent_depth(section, discharge, critical) == (critical, status.NO_SOLUTION)


@given(sections, st.floats(0.05, 0.35), st.floats(1.01, 8.0))
def test_depth_of_a_force(section, toe, froude):
    discharge = _discharge(section, toe, froude)
    force = specific_force(section, discharge, toe)
    depth, flag = subcritical_depth_of_force(section, discharge, force)
    assert flag == status.OK
    assert froude_number(section, discharge, depth) < 1.0
    assert specific_force(section, discharge, depth) == pytest.approx(force, rel=1e-9)


def test_too_little_force_for_any_depth():
    section, discharge = trapezoid(2.0, 1.5), 5.0
    critical, _ = critical_depth(section, discharge)
    force = 0.99 * specific_force(section, discharge, critical)
    assert subcritical_depth_of_force(section, discharge, force) == (critical, status.NO_SOLUTION)


def test_uneven_flow_keeps_its_own_momentum():
    """With α ≠ β the least force is not at the depth of least energy; jumps clear of critical flow still close."""
    section = trapezoid(2.0, 1.5, alpha=1.15, beta=1.05)
    discharge = _discharge(section, 0.2, 3.0)
    sequent, flag = sequent_depth(section, discharge, 0.2)
    assert flag == status.OK
    assert specific_force(section, discharge, sequent) == pytest.approx(
        specific_force(section, discharge, 0.2), rel=1e-9
    )


def test_length_by_section():
    assert jump_length_in_section(rectangle(3.0), 0.2, 4.0, 1.0) == (5.8, LENGTH_GOOD)
    assert jump_length_in_section(trapezoid(3.0, 1.5), 0.2, 4.0, 1.0)[1] == LENGTH_POORLY_KNOWN
    assert jump_length_in_section(circle(3.0), 0.2, 4.0, 1.0)[1] == LENGTH_NOT_DEFINED
    assert jump_length_in_section(surveyed([0, 0, 3, 3], [2, 0, 0, 2]), 0.2, 4.0, 1.0)[1] == LENGTH_NOT_DEFINED


def test_no_length_above_the_top_of_a_section():
    assert jump_length_in_section(rectangle(3.0, top_depth=0.9), 0.2, 4.0, 1.0)[1] == LENGTH_NOT_DEFINED
    assert jump_length_in_section(rectangle(3.0, top_depth=1.1), 0.2, 4.0, 1.0)[1] == LENGTH_GOOD

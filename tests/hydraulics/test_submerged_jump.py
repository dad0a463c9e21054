"""The roller that lies on a drowned jet."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import specific_force
from toeline.hydraulics.cross_section import rectangle, static_moment, trapezoid
from toeline.hydraulics.hydraulic_jump import subcritical_depth_of_force
from toeline.hydraulics.submerged_jump import jet_force, roller_depth, roller_length

sections = st.sampled_from([rectangle(3.0), rectangle(5.0), trapezoid(3.0, 1.5), rectangle(3.0, beta=1.1)])


@given(sections, st.floats(0.05, 0.5), st.floats(1.2, 10.0), st.floats(0.001, 2.0))
def test_momentum_closes_over_the_roller(section, jet, froude, excess):
    """The roller stands between jet and tailwater, and the force of jet and dead water is that of the tail."""
    discharge = 3.0 * froude * math.sqrt(GRAVITY * jet**3)
    limit, _ = subcritical_depth_of_force(section, discharge, jet_force(section, discharge, 3.0, jet, jet))
    tail = limit * (1.0 + excess)
    roller, flag = roller_depth(section, discharge, 3.0, jet, tail)
    assert flag == status.OK
    assert jet < roller < tail
    force = jet_force(section, discharge, 3.0, jet, roller)
    assert force == pytest.approx(specific_force(section, discharge, tail), rel=1e-9)


@given(sections, st.floats(0.05, 0.5), st.floats(1.2, 10.0), st.floats(0.3, 0.999))
def test_no_roller_reaches_a_free_jet(section, jet, froude, share):
    discharge = 3.0 * froude * math.sqrt(GRAVITY * jet**3)
    limit, flag = subcritical_depth_of_force(section, discharge, jet_force(section, discharge, 3.0, jet, jet))
    assert flag == status.OK
    tail = jet + share * (limit - jet)
    if specific_force(section, discharge, tail) < jet_force(section, discharge, 3.0, jet, jet):
        assert roller_depth(section, discharge, 3.0, jet, tail) == (jet, status.NO_SOLUTION)


def test_dead_water_beside_a_narrow_jet():
    """Its pressure acts over the whole floor, the jet's momentum over its own width alone."""
    narrow, wide = rectangle(3.0), rectangle(5.0)
    added = static_moment(wide, 0.8) - static_moment(narrow, 0.8)
    assert jet_force(wide, 6.0, 3.0, 0.3, 0.8) - jet_force(narrow, 6.0, 3.0, 0.3, 0.8) == pytest.approx(
        added, rel=1e-12
    )


def test_roller_length_ends_at_the_free_jump():
    assert roller_length(1.2, 0.0) == pytest.approx(6.1 * 1.2)
    assert math.isnan(roller_length(1.2, -0.01))

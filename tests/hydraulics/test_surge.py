"""Moving jumps: continuity and momentum across the front."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import area, rectangle, static_moment, top_width, trapezoid
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds

sections = st.sampled_from([rectangle(4.0), trapezoid(3.0, 1.5), trapezoid(0.0, 2.0), trapezoid(3.0, 1.5, 1.2)])
directions = st.sampled_from([DOWNSTREAM, UPSTREAM])


@given(sections, st.floats(0.5, 4.0), st.floats(0.0, 0.5), st.floats(-0.2, 0.5), directions)
def test_continuity_and_momentum(section, depth, froude, share, direction):
    still = area(section, depth)
    celerity = math.sqrt(GRAVITY * still / top_width(section, depth))
    discharge, change = froude * celerity * still, share * celerity * still
    height, speed, flag = surge_height(section, discharge, depth, change, direction)
    if flag != status.OK or abs(change) < 1e-6 * celerity * still:
        return
    behind = area(section, depth + height)
    ahead_velocity = direction * discharge / still
    behind_velocity = direction * (discharge + change) / behind
    assert speed * (behind - still) == pytest.approx(direction * change, rel=1e-6)
    push = static_moment(section, depth + height) - static_moment(section, depth)
    gain = still / GRAVITY * (speed - ahead_velocity) * (behind_velocity - ahead_velocity)
    assert push == pytest.approx(gain, rel=1e-6, abs=1e-9 * static_moment(section, depth))


@pytest.mark.parametrize(("change", "direction"), [(2.0, DOWNSTREAM), (-2.0, UPSTREAM)])
def test_positive_surges(change, direction):
    """More water sent down, or less let through at the lower end, raises the level."""
    assert surge_height(rectangle(4.0), 6.0, 2.0, change, direction)[0] > 0.0


@pytest.mark.parametrize(("change", "direction"), [(-2.0, DOWNSTREAM), (2.0, UPSTREAM)])
def test_negative_surges(change, direction):
    assert surge_height(rectangle(4.0), 6.0, 2.0, change, direction)[0] < 0.0


@given(sections, st.floats(0.5, 3.0), st.floats(0.0, 0.8), directions, st.sampled_from([-1.0, 1.0]))
def test_small_surges_are_small_waves(section, depth, froude, direction, sign):
    """Δy → ΔQ/(T·(c ± V))."""
    change = sign * 1e-6 * area(section, depth)
    discharge = froude * area(section, depth) * math.sqrt(GRAVITY * area(section, depth) / top_width(section, depth))
    with_flow, against = wave_speeds(section, discharge, depth)
    speed = with_flow if direction == DOWNSTREAM else against
    height, front, flag = surge_height(section, discharge, depth, change, direction)
    assert flag == status.OK
    assert height == pytest.approx(direction * change / (top_width(section, depth) * speed), rel=1e-3)
    assert front == pytest.approx(speed, rel=1e-3)


@given(sections, st.floats(0.5, 3.0), st.floats(0.01, 3.0), st.floats(1.01, 2.0), directions)
def test_larger_changes_send_higher_surges(section, depth, change, factor, direction):
    heights = [surge_height(section, 0.1, depth, direction * c, direction)[0] for c in (change, factor * change)]
    assert heights[1] > heights[0] > 0.0


def test_no_change_sends_no_surge():
    assert surge_height(rectangle(4.0), 6.0, 2.0, 0.0, DOWNSTREAM) == (0.0, 0.0, status.OK)


def test_pool_that_cannot_feed_the_change():
    """The whole depth is the bound."""
    height, speed, flag = surge_height(rectangle(4.0), 0.0, 0.5, 100.0, UPSTREAM)
    assert height == -0.5
    assert math.isnan(speed)
    assert flag == status.NO_SOLUTION


def test_no_bound_is_claimed_for_a_dry_pool():
    """A change sent into a dry pool runs as a bore over the bed: not a surge on standing water."""
    assert surge_height(rectangle(4.0), 0.0, 0.0, 2.0, DOWNSTREAM)[2] != status.OK


def test_waves_in_still_water():
    assert wave_speeds(rectangle(4.0), 0.0, 2.0) == pytest.approx((math.sqrt(2.0 * GRAVITY),) * 2)
    assert wave_speeds(rectangle(4.0), 0.0, 0.0) == (0.0, 0.0)

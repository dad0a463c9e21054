"""Losses of a metre of canal: sums of wetted perimeter and surface, fading as it dries."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.water_losses import loss_per_length


def test_seepage_is_through_the_wetted_perimeter_and_evaporation_from_the_surface():
    section = rectangle(4.0)
    assert loss_per_length(section, 1.5, 1e-6, 0.0)[0] == pytest.approx(1e-6 * 7.0, rel=1e-12)
    assert loss_per_length(section, 1.5, 0.0, 2e-7)[0] == pytest.approx(2e-7 * 4.0, rel=1e-12)
    assert loss_per_length(section, 1.5, 1e-6, -5e-6)[0] == pytest.approx(7e-6 - 20e-6, rel=1e-12)


@given(st.floats(-1.0, 0.02))
def test_dry_canal_loses_nothing(depth):
    assert loss_per_length(trapezoid(4.0, 1.5), depth, 1e-6, 1e-7) == (0.0, 0.0)


@given(st.floats(0.021, 3.0), st.floats(0.0, 1e-5))
def test_slope_is_that_of_a_small_difference_but_for_the_widening_of_the_surface(depth, seepage):
    section, nudge = rectangle(4.0), 1e-6
    before, slope = loss_per_length(section, depth, seepage, 1e-7)
    after, _ = loss_per_length(section, depth + nudge, seepage, 1e-7)
    assert (after - before) / nudge == pytest.approx(slope, rel=1e-3, abs=1e-9)

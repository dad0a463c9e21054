"""Weirs, free, drowned and reversed."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.hydraulics.weir import drowned_weir_factor, side_weir_discharge, weir_discharge

levels = st.floats(-1.0, 4.0)


def test_free_weir():
    assert weir_discharge(1.7, 3.0, 1.0, 1.64, 0.2) == pytest.approx(1.7 * 3.0 * 0.64**1.5, rel=1e-12)
    assert weir_discharge(1.7, 3.0, 1.0, 1.64, -math.inf) == weir_discharge(1.7, 3.0, 1.0, 1.64, 1.0)


def test_no_flow_below_the_crest_or_between_equal_levels():
    assert weir_discharge(1.7, 3.0, 1.0, 1.0, 0.2) == 0.0
    assert weir_discharge(1.7, 3.0, 1.0, 0.5, 0.2) == 0.0
    assert weir_discharge(1.7, 3.0, 1.0, 1.8, 1.8) == 0.0
    assert weir_discharge(1.7, 3.0, math.inf, 1.8, 1.0) == 0.0


@given(levels, levels)
def test_sides_exchanged(upstream, downstream):
    assert weir_discharge(1.7, 3.0, 1.0, upstream, downstream) == -weir_discharge(1.7, 3.0, 1.0, downstream, upstream)


@given(levels, levels, st.floats(0.0, 1.0))
def test_rises_with_the_headwater_and_falls_with_the_tailwater(upstream, downstream, rise):
    base = weir_discharge(1.7, 3.0, 1.0, upstream, downstream)
    assert weir_discharge(1.7, 3.0, 1.0, upstream + rise, downstream) >= base - 1e-12
    assert weir_discharge(1.7, 3.0, 1.0, upstream, downstream + rise) <= base + 1e-12


@given(st.floats(1e-9, 10.0), st.floats(-5.0, 20.0))
def test_share_of_the_free_discharge(upstream_head, downstream_head):
    share = drowned_weir_factor(upstream_head, downstream_head)
    assert 0.0 <= share <= 1.0
    assert (share == 1.0) or downstream_head > 0.0


def test_side_weir_is_a_weir_while_it_falls_freely():
    assert side_weir_discharge(1.7, 8.0, 1.0, 1.3, -math.inf) == weir_discharge(1.7, 8.0, 1.0, 1.3, -math.inf)
    assert side_weir_discharge(1.7, 8.0, 1.0, 1.0, -math.inf) == 0.0


@given(levels, levels)
def test_nothing_comes_back_over_a_side_weir(water, outside):
    assert side_weir_discharge(1.7, 8.0, 1.0, water, outside) >= 0.0
    assert side_weir_discharge(1.7, 8.0, 1.0, min(water, outside), outside) == 0.0


@given(levels, levels, st.floats(1e-6, 1e-4))
def test_side_weir_rises_with_the_water_without_a_leap(water, outside, rise):
    base, more = (side_weir_discharge(1.7, 8.0, 1.0, level, outside) for level in (water, water + rise))
    assert base - 1e-12 <= more <= base + 1000.0 * rise

"""Offtakes fade out before they dry their pool."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics.offtake import (
    DEMAND,
    ORIFICE,
    TAPER_DEPTH,
    WEIR,
    offtake_discharge,
    orifice_discharge,
    taper,
)

SILL = 10.0


def _taken(kind, head, demand=2.0):
    return offtake_discharge(kind, demand, SILL, 1.2, 0.3, 0.6 if kind == ORIFICE else 1.7, SILL + head)


@pytest.mark.parametrize("kind", [DEMAND, ORIFICE, WEIR])
@pytest.mark.parametrize("head", [0.0, -0.4])
def test_nothing_is_taken_at_or_below_the_sill(kind, head):
    assert _taken(kind, head) == 0.0


def test_full_demand_above_the_taper():
    assert _taken(DEMAND, TAPER_DEPTH) == pytest.approx(2.0, rel=1e-12)
    assert _taken(DEMAND, 1.0) == 2.0
    assert _taken(DEMAND, TAPER_DEPTH / 2.0) == pytest.approx(1.0, rel=1e-12)


def test_demand_without_a_sill():
    assert offtake_discharge(DEMAND, 2.0, -math.inf, 0.0, 0.0, 0.0, 10.0) == 2.0


def test_covered_orifice():
    """C·b·a·√(2gh) with the head to the middle of the opening."""
    assert _taken(ORIFICE, 1.15) == pytest.approx(0.6 * 1.2 * 0.3 * math.sqrt(2.0 * GRAVITY * 1.0), rel=1e-12)


def test_weir():
    assert _taken(WEIR, 0.64) == pytest.approx(1.7 * 1.2 * 0.64**1.5, rel=1e-12)


def test_orifice_joins_its_own_sill_flow():
    at = 1.5 * 0.3
    below, above = (orifice_discharge(0.6, 1.2, 0.3, at + nudge) for nudge in (-1e-9, 1e-9))
    assert above == pytest.approx(below, rel=1e-7)


def test_closed_orifice():
    assert offtake_discharge(ORIFICE, 0.0, SILL, 1.2, 0.0, 0.6, SILL + 2.0) == 0.0


@pytest.mark.parametrize("kind", [DEMAND, ORIFICE, WEIR])
def test_continuous_and_rising_with_the_level(kind):
    taken = np.array([_taken(kind, head) for head in np.linspace(-0.1, 1.0, 1101)])
    steps = np.diff(taken)
    assert np.all(steps >= 0.0)
    assert steps.max() < 0.04 * taken.max()


@given(st.floats(-10.0, 10.0))
def test_taper_is_a_share(head):
    assert 0.0 <= taper(head) <= 1.0

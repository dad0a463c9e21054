"""The surge above a gate that is closed in part."""

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.surge import UPSTREAM, surge_height, wave_speeds


@pytest.fixture
def rejection_surge(units):
    """b = 4 m, y₁ = 3 m, Q cut from 25 to 12 m³/s: y₂ = 3.75 m, c = 4.35 m/s. Published (worked example of an open
    course), reproduced. The small-wave estimate ΔQ/(B·(c₀ − V₁)) gives 0.97 m (derived).
    """
    return rectangle(4.0), units(9.81), 25.0, 12.0, 3.0


def test_rejection_surge(rejection_surge):
    section, metric, before, after, depth = rejection_surge
    discharge, change = metric.discharge(before), metric.discharge(after - before)
    height, speed, _ = surge_height(section, discharge, depth, change, UPSTREAM)
    assert depth + height == pytest.approx(3.75, abs=0.006)
    assert metric.discharge_of_source(speed) == pytest.approx(4.35, abs=0.01)


def test_exact_equation_of_a_rectangle(rejection_surge):
    """(V₁ + c)² = g·(y₂/y₁)·(y₁ + y₂)/2 with (V₁ + c)·y₁ = (V₂ + c)·y₂ (from memory, sure: Chow 1959, ch. 18)."""
    section, metric, before, after, depth = rejection_surge
    discharge, change = metric.discharge(before), metric.discharge(after - before)
    height, speed, _ = surge_height(section, discharge, depth, change, UPSTREAM)
    deep = depth + height
    over_ground = discharge / (4.0 * depth) + speed
    assert over_ground**2 == pytest.approx(GRAVITY * deep / depth * (depth + deep) / 2.0, rel=1e-9)
    assert over_ground * depth == pytest.approx(((discharge + change) / (4.0 * deep) + speed) * deep, rel=1e-9)


def test_small_wave_estimate_is_higher(rejection_surge):
    section, metric, before, after, depth = rejection_surge
    discharge, change = metric.discharge(before), metric.discharge(after - before)
    _, against = wave_speeds(section, discharge, depth)
    estimate = -change / (4.0 * against)
    assert estimate == pytest.approx(0.97, abs=0.006)
    assert estimate > surge_height(section, discharge, depth, change, UPSTREAM)[0]

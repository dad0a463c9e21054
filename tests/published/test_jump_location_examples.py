"""Where free jumps stand, worked out in courses and textbooks or derived."""

import math

import numpy as np
import pytest

from toeline.hydraulics.critical_flow import critical_depth, froude_number
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.gradually_varied_flow import REACHED_END
from toeline.hydraulics.hydraulic_jump import sequent_depth
from toeline.hydraulics.uniform_flow import friction_slope, normal_depth

WIDE = 1e7


@pytest.fixture
def maurer_example_5_10(units):
    """b = 3 m, Q = 8 m³/s, n = 0.013, slope 0.018 then 0.0015. Published (Maurer): y_n1 0.498, y_n2 1.180, y_c
    0.898 m; sequent depths 1.476 and 0.666 m; with two steps the toe stands 44.6 m below the break. Converged:
    45.435 m, Fr 1.568 at the toe (recomputed).
    """
    metric = units(9.81)
    return rectangle(3.0), metric.discharge(8.0), metric.roughness(0.013)


def test_depths_of_maurer_example_5_10(maurer_example_5_10):
    section, discharge, roughness = maurer_example_5_10
    steep, _ = normal_depth(section, roughness, 0.018, discharge)
    mild, _ = normal_depth(section, roughness, 0.0015, discharge)
    assert steep == pytest.approx(0.498, abs=6e-4)
    assert mild == pytest.approx(1.180, abs=6e-4)
    assert critical_depth(section, discharge)[0] == pytest.approx(0.898, abs=6e-4)
    assert sequent_depth(section, discharge, steep)[0] == pytest.approx(1.476, abs=6e-4)
    assert sequent_depth(section, discharge, mild)[0] == pytest.approx(0.666, abs=6e-4)


def test_jump_of_maurer_example_5_10(maurer_example_5_10, prismatic, profiles):
    section, discharge, roughness = maurer_example_5_10
    steep, _ = normal_depth(section, roughness, 0.018, discharge)
    mild, _ = normal_depth(section, roughness, 0.0015, discharge)
    jump = profiles.jump(prismatic(section, 200.0, 0.0015, roughness), mild, steep, discharge)
    assert jump.chainage == pytest.approx(45.435, rel=0.005)
    assert jump.chainage == pytest.approx(44.6, rel=0.025)
    assert jump.depth == pytest.approx(0.6656, abs=1e-3)
    assert jump.froude == pytest.approx(1.568, abs=3e-3)
    assert jump.sequent == pytest.approx(mild, rel=1e-12)


@pytest.fixture
def course_jet_after_jaeger(units):
    """q = 1 m³/s on a width of 1 m, walls counted, n = 0.01, level, 0.10 m at the gate. Published (open course
    CE4353, after Jaeger 1957; 31 steps, friction at mid-depth, g = 9.8: 1 % long at first). Exact: 80.124 m to
    0.3506 m, 92.845 m to 0.47 m (recomputed).
    """
    in_print = {
        0.1119: 4.437, 0.1597: 22.202, 0.2074: 39.355, 0.2552: 55.182, 0.3029: 69.046, 0.3506: 80.326, 0.3984: 88.394,
        0.4461: 92.611,
    }  # fmt: skip
    metric = units(9.8)
    return rectangle(1.0), metric.discharge(1.0), metric.roughness(0.01), in_print


def test_course_jet_after_jaeger(course_jet_after_jaeger, prismatic, profiles):
    section, discharge, roughness, in_print = course_jet_after_jaeger
    x, y, _ = profiles.jet_profile(prismatic(section, 120.0, 0.0, roughness), 0.10, discharge)
    for depth, distance in in_print.items():
        assert np.interp(depth, y, x) == pytest.approx(distance, rel=0.012), depth
    assert np.interp(0.3506, y, x) == pytest.approx(80.124, rel=0.002)
    assert x[-1] == pytest.approx(92.845, rel=0.002)
    assert critical_depth(section, discharge)[0] == pytest.approx(0.4673, abs=6e-5)


def test_jet_leaves_a_short_floor(course_jet_after_jaeger, prismatic, profiles):
    """At a brink 80 m away the depth is 0.35 m and the flow still supercritical (published, same course)."""
    section, discharge, roughness, _ = course_jet_after_jaeger
    x, y, end = profiles.jet_profile(prismatic(section, 80.0, 0.0, roughness), 0.10, discharge)
    assert end == REACHED_END
    assert x[-1] == 80.0
    assert y[-1] == pytest.approx(0.35, abs=0.001)


@pytest.fixture
def jet_below_a_small_gate(units):
    """b = 1.545 m, S₀ = 0.00322, n = 0.015, Q = 5 m³/s, gate 0.32 m × C_c 0.67, tailwater 1.39 m. Published
    (unsigned work sheet): y_c 1.02205, Fr₂ 0.6305, y₁ 0.72597 m; at 0.2144 m E = 11.8271 m, S_f = 0.5538. Exact:
    19.478 m to 0.3144 m, 89.354 m to y₁ (recomputed; the sheet's single first step gives 16.905 m).
    """
    metric = units(9.81)
    return rectangle(1.545), metric.discharge(5.0), metric.roughness(0.015), 0.32 * 0.67


def test_depths_below_a_small_gate(jet_below_a_small_gate):
    section, discharge, roughness, jet = jet_below_a_small_gate
    assert jet == pytest.approx(0.2144, abs=1e-12)
    assert critical_depth(section, discharge)[0] == pytest.approx(1.02205, abs=6e-6)
    assert froude_number(section, discharge, 1.39) == pytest.approx(0.6305, abs=6e-5)
    assert sequent_depth(section, discharge, 1.39)[0] == pytest.approx(0.72597, abs=6e-6)
    assert friction_slope(section, roughness, discharge, jet) == pytest.approx(0.5538, abs=6e-5)


def test_jump_below_a_small_gate(jet_below_a_small_gate, prismatic, profiles):
    section, discharge, roughness, jet = jet_below_a_small_gate
    floor = prismatic(section, 150.0, 0.00322, roughness)
    x, y, _ = profiles.jet_profile(floor, jet, discharge)
    assert np.interp(0.3144, y, x) == pytest.approx(19.478, rel=0.005)
    jump = profiles.jump(floor, 1.39, jet, discharge)
    assert jump.chainage == pytest.approx(89.354, rel=0.005)
    assert jump.depth == pytest.approx(0.72597, abs=1e-3)


@pytest.fixture
def wide_level_apron(units):
    """q = 2 m²/s, jet 0.15 m, n = 0.015, level, tailwater 1.80 m. Question published without an answer; toe depth
    0.22386 m, toe 18.782 m away (derived, closed form).
    """
    metric = units(9.81)
    return rectangle(WIDE), WIDE * metric.discharge(2.0), metric.roughness(0.015)


def test_wide_level_apron(wide_level_apron, prismatic, profiles):
    section, discharge, roughness = wide_level_apron
    jump = profiles.jump(prismatic(section, 100.0, 0.0, roughness), 1.80, 0.15, discharge)
    assert jump.depth == pytest.approx(0.22386, abs=2e-4)
    assert jump.chainage == pytest.approx(18.782, rel=0.005)


@pytest.fixture(
    params=[(0, 0.0), (1, 0.7), (5, 3.2), (10, 6.7), (15, 11), (20, 15), (30, 25)], ids=lambda row: f"{row[0]} cm short"
)
def toe_by_shortfall(request):
    """Centimetres of tailwater that fail to the sequent depth, and metres from the contracted section to the toe:
    h₁ = 2.0 m, a = 0.30 m, b = 4 m, level concrete floor, n = 0.015. Derived, printed to the digit that a planner
    can use.
    """
    return request.param


def test_toe_by_shortfall(toe_by_shortfall, prismatic, profiles):
    shortfall, toe_in_print = toe_by_shortfall
    section, jet, head = rectangle(4.0), 0.61 * 0.30, 2.0
    discharge = 4.0 * jet * math.sqrt(2.0 * 9.80665 * head / (1.0 + jet / head))
    sequent, _ = sequent_depth(section, discharge, jet)
    assert discharge == pytest.approx(4.4, abs=0.06)
    assert froude_number(section, discharge, jet) == pytest.approx(4.5, abs=0.05)
    assert sequent == pytest.approx(1.07, abs=0.01)
    floor = prismatic(section, 100.0, 0.0, 0.015)
    jump = profiles.jump(floor, sequent - 0.01 * shortfall - 1e-9, jet, discharge)
    assert jump.chainage == pytest.approx(toe_in_print, abs=0.6 if toe_in_print >= 11 else 0.16)

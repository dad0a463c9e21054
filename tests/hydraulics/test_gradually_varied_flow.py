"""Steady profiles: energy from node to node, drying links, and jets through changing sections."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import critical_depth, specific_energy
from toeline.hydraulics.cross_section import area, circle, geometry, rectangle, surveyed, trapezoid
from toeline.hydraulics.gradually_varied_flow import (
    DRY_DEPTH,
    FULL,
    REACHED_END,
    TURNED_CRITICAL,
    WET_DEPTH,
    channel,
    link_bed,
    link_conveyance,
    link_critical_depth,
    link_force,
    link_geometry,
    subcritical_profile,
    supercritical_profile,
)
from toeline.hydraulics.uniform_flow import conveyance, friction_slope, normal_depth

ROUGHNESS = 0.015


def _march(reach, depth, discharge, start=0.0, points=2000):
    x, y = np.empty(points), np.empty(points)
    count, end = supercritical_profile(reach, 0, reach.nodes.size - 1, start, depth, discharge, x, y)
    return x[:count], y[:count], end


def _backwater(reach, level, discharge, point_loss=0.0):
    levels = np.full(reach.nodes.size, np.nan)
    losses = np.full(reach.nodes.size, float(point_loss))
    flag = subcritical_profile(reach, 0, reach.nodes.size - 1, level, discharge, losses, levels)
    return levels, flag


def _exact(section, slope, discharge, start, stations):
    """dy/dx = (S₀ − S_f)/(1 − Fr²)."""

    def right_side(_, y):
        flow_area, width = geometry(section, y[0])[:2]
        froude_squared = section[6] * discharge**2 * width / (GRAVITY * flow_area**3)
        return [(slope - friction_slope(section, ROUGHNESS, discharge, y[0])) / (1.0 - froude_squared)]

    solved = solve_ivp(right_side, (stations[0], stations[-1]), [start], t_eval=stations, rtol=1e-9, atol=1e-11)
    return solved.y[0]


@pytest.mark.parametrize("section", [rectangle(4.0), trapezoid(4.0, 1.5), trapezoid(4.0, 1.5, alpha=1.1)])
@pytest.mark.parametrize("slope", [0.0, 0.0005, 0.02, -0.001])
def test_jet_against_the_differential_equation(section, slope, prismatic):
    discharge, length = 8.0, 15.0
    reach = prismatic(section, length, slope, ROUGHNESS)
    x, y, end = _march(reach, 0.25, discharge)
    stations = np.linspace(0.0, length, 31)
    assert end == REACHED_END
    assert np.interp(stations, x, y) == pytest.approx(_exact(section, slope, discharge, 0.25, stations), rel=2e-3)


@pytest.mark.parametrize("section", [rectangle(4.0), trapezoid(4.0, 1.5), circle(4.0)])
@pytest.mark.parametrize("slope", [0.0002, 0.001])
def test_backwater_against_the_differential_equation(section, slope, prismatic):
    discharge, length = 6.0, 1000.0
    reach = prismatic(section, length, slope, ROUGHNESS, nodes=41)
    levels, flag = _backwater(reach, 1.9, discharge)
    depths = levels - reach.nodes.bed_level
    upward = _exact(section, slope, discharge, 1.9, reach.nodes.chainage[::-1])
    assert flag == status.OK
    assert depths[::-1] == pytest.approx(upward, abs=2e-4)


def test_backwater_far_from_a_weir_is_uniform(prismatic):
    section = trapezoid(4.0, 1.5)
    normal, _ = normal_depth(section, ROUGHNESS, 0.001, 6.0)
    reach = prismatic(section, 5000.0, 0.001, ROUGHNESS, nodes=201)
    levels, _ = _backwater(reach, 2.0, 6.0)
    assert levels[0] - reach.nodes.bed_level[0] == pytest.approx(normal, abs=1e-6)


def test_friction_uses_the_mean_of_both_conveyances(prismatic):
    """One link: z + V²/2g above = z + V²/2g below + Δx·(Q/K)²."""
    section = trapezoid(3.0, 1.0)
    reach = prismatic(section, 200.0, 0.001, ROUGHNESS)
    levels, _ = _backwater(reach, 1.5, 5.0)
    above, below = levels - reach.nodes.bed_level
    mean = 0.5 * (conveyance(section, ROUGHNESS, above) + conveyance(section, ROUGHNESS, below))
    energies = [specific_energy(section, 5.0, depth) for depth in (above, below)]
    loss = reach.nodes.bed_level[0] + energies[0] - energies[1]
    assert loss == pytest.approx(200.0 * (5.0 / mean) ** 2, abs=1e-12)


@pytest.mark.parametrize(("first", "second"), [(3.0, 6.0), (6.0, 3.0)], ids=["widening", "narrowing"])
def test_loss_of_a_transition(first, second):
    """k·|ΔV²|/2g on top of friction, in a widening and in a narrowing."""
    sections = [rectangle(first), rectangle(second)]
    plain = channel([0.0, 10.0], [0.0, 0.0], sections, ROUGHNESS)
    lossy = channel([0.0, 10.0], [0.0, 0.0], sections, ROUGHNESS, [0.3, 0.0])
    (level, below), _ = _backwater(lossy, 1.5, 6.0)
    friction = (
        10.0
        * (6.0 / (0.5 * sum(conveyance(s, ROUGHNESS, z) for s, z in zip(sections, (level, below), strict=True)))) ** 2
    )
    heads = [(6.0 / area(s, z)) ** 2 / (2.0 * GRAVITY) for s, z in zip(sections, (level, below), strict=True)]
    assert level + heads[0] - below - heads[1] == pytest.approx(friction + 0.3 * abs(heads[0] - heads[1]), abs=1e-12)
    assert level > _backwater(plain, 1.5, 6.0)[0][0]


def test_point_loss(prismatic):
    """k·V²/2g with the mean area of the link."""
    section = rectangle(3.0)
    (level, below), _ = _backwater(prismatic(section, 1e-6, 0.0, ROUGHNESS), 1.5, 6.0, point_loss=0.5)
    mean = 3.0 * 0.5 * (level + below)
    head_lost = specific_energy(section, 6.0, level) - specific_energy(section, 6.0, below)
    assert head_lost == pytest.approx(0.5 * (6.0 / mean) ** 2 / (2.0 * GRAVITY), rel=1e-6)


def test_still_water_is_level(prismatic):
    levels, flag = _backwater(prismatic(trapezoid(3.0, 1.5), 1000.0, 0.001, ROUGHNESS, nodes=11), 2.5, 0.0)
    assert flag == status.OK
    assert levels == pytest.approx(2.5, abs=1e-12)


def test_backwater_stops_where_the_flow_would_be_critical(prismatic):
    """On a steep slope the profile ends; nothing is filled above."""
    reach = prismatic(rectangle(3.0), 400.0, 0.02, ROUGHNESS, nodes=81)
    levels, flag = _backwater(reach, 2.5, 6.0)
    assert flag == status.NO_SOLUTION
    assert np.isnan(levels[0])
    filled = levels[~np.isnan(levels)] - reach.nodes.bed_level[~np.isnan(levels)]
    assert np.all(filled >= critical_depth(rectangle(3.0), 6.0)[0])


def test_jet_turns_critical(prismatic):
    section = rectangle(4.0)
    x, y, end = _march(prismatic(section, 1000.0, 0.0, ROUGHNESS), 0.2, 8.0)
    assert end == TURNED_CRITICAL
    assert y[-1] == pytest.approx(critical_depth(section, 8.0)[0], rel=1e-12)
    assert np.all(np.diff(x) > 0.0)
    assert np.all(np.diff(y) > 0.0)


def test_jet_fills_what_it_is_given(prismatic):
    x, _, end = _march(prismatic(rectangle(4.0), 1000.0, 0.0, ROUGHNESS), 0.2, 8.0, points=5)
    assert end == FULL
    assert x.size == 5


def test_jet_from_inside_the_channel(prismatic):
    reach = prismatic(rectangle(4.0), 20.0, 0.0, ROUGHNESS, nodes=9)
    x, _, end = _march(reach, 0.2, 8.0, start=7.3)
    assert x[0] == 7.3
    assert x[-1] == 20.0
    assert end == REACHED_END


def test_jet_through_a_widening_keeps_its_energy():
    """Without friction and loss E stays; the jet spreads and thins."""
    reach = channel([0.0, 10.0], [0.0, 0.0], [rectangle(3.0), rectangle(5.0)], 1e-9)
    _, y, end = _march(reach, 0.4, 8.0)
    assert end == REACHED_END
    assert specific_energy(rectangle(5.0), 8.0, y[-1]) == pytest.approx(
        specific_energy(rectangle(3.0), 8.0, 0.4), rel=1e-9
    )
    assert y[-1] < 0.4


def test_jet_loses_in_a_transition():
    """k·|ΔV²|/2g however the jet goes: slowed in a narrowing, quickened down a fall."""
    for beds, sections in (([0.0, 0.0], [3.0, 2.8]), ([0.5, 0.0], [3.0, 3.3])):
        shapes = [rectangle(width) for width in sections]
        before = specific_energy(shapes[0], 8.0, 0.4) + beds[0]
        _, y, _ = _march(channel([0.0, 10.0], beds, shapes, 1e-9, [0.2, 0.0]), 0.4, 8.0)
        heads = [
            (8.0 / area(shape, depth)) ** 2 / (2.0 * GRAVITY) for shape, depth in zip(shapes, (0.4, y[-1]), strict=True)
        ]
        lost = before - specific_energy(shapes[1], 8.0, y[-1])
        assert lost == pytest.approx(0.2 * abs(heads[1] - heads[0]), rel=0.01)


def test_jet_chokes_in_a_narrowing():
    reach = channel([0.0, 10.0], [0.0, 0.0], [rectangle(4.0), rectangle(1.0)], ROUGHNESS)
    _, _, end = _march(reach, 0.5, 8.0)
    assert end == TURNED_CRITICAL


def test_energy_never_rises_along_a_jet():
    sections = [rectangle(4.0), rectangle(4.0), trapezoid(4.0, 1.5), trapezoid(4.0, 1.5)]
    chainage, beds = np.array([0.0, 8.0, 18.0, 60.0]), np.array([0.1, 0.1, 0.05, 0.0])
    reach = channel(chainage, beds, sections, ROUGHNESS, [0.0, 0.1, 0.0, 0.0])
    x, y, _ = _march(reach, 0.2, 8.0)
    heads = []
    for station, depth in zip(x, y, strict=True):
        node = min(int(np.searchsorted(chainage, station, side="right")) - 1, 2)
        weight = (station - chainage[node]) / (chainage[node + 1] - chainage[node])
        flow_area = link_geometry(reach, node, weight, depth)[0]
        heads.append(link_bed(reach, node, weight) + depth + (8.0 / flow_area) ** 2 / (2.0 * GRAVITY))
    assert np.all(np.diff(heads) <= 1e-9)


def test_inside_a_link_everything_is_linear():
    one, other = trapezoid(2.0, 1.0, alpha=1.0, beta=1.0), surveyed([0, 0, 3, 3], [2, 0, 0, 2])
    reach = channel([0.0, 10.0], [1.0, 0.0], [one, other], [0.02, 0.01])
    assert link_bed(reach, 0, 0.25) == pytest.approx(0.75)
    here, there = geometry(one, 0.8), geometry(other, 0.8)
    between = link_geometry(reach, 0, 0.25, 0.8)
    assert between[:4] == pytest.approx([0.75 * a + 0.25 * b for a, b in zip(here, there, strict=True)])
    assert between[4] == pytest.approx(0.0175)
    critical = link_critical_depth(reach, 0, 0.25, 3.0)
    flow_area, width = link_geometry(reach, 0, 0.25, critical)[:2]
    assert 9.0 * width == pytest.approx(GRAVITY * flow_area**3, rel=1e-9)
    forces = [link_force(reach, 0, 0.25, 3.0, critical * share) for share in (0.98, 1.0, 1.02)]
    assert forces[1] < min(forces[0], forces[2])


@given(st.floats(0.0, 0.3), st.floats(0.0, 0.3), st.floats(0.1, 5.0), st.floats(0.1, 5.0))
def test_conveyance_of_a_link_lies_between_its_nodes(up, down, k_up, k_down):
    k, _, _ = link_conveyance(k_up, k_down, 1.0, 1.0, up, down)
    assert min(k_up, k_down) - 1e-12 <= k <= max(k_up, k_down) + 1e-12


@given(st.floats(0.0, 0.3), st.floats(0.0, 0.3))
def test_derivatives_of_the_conveyance_of_a_link(up, down):
    """With K = 3y² above and 2y below, away from where the derivative leaps (equal depths, ends of the drying
    range).
    """
    if min(abs(up - down), *(abs(min(up, down) - at) for at in (DRY_DEPTH, WET_DEPTH))) < 1e-4:
        return

    def value(a, b):
        return link_conveyance(3.0 * a * a, 2.0 * b, 6.0 * a, 2.0, a, b)

    _, by_up, by_down = value(up, down)
    nudge = 1e-7
    assert (value(up + nudge, down)[0] - value(up - nudge, down)[0]) / (2 * nudge) == pytest.approx(by_up, abs=1e-5)
    assert (value(up, down + nudge)[0] - value(up, down - nudge)[0]) / (2 * nudge) == pytest.approx(by_down, abs=1e-5)


def test_water_enters_a_dry_node_and_cannot_leave_it():
    assert link_conveyance(5.0, 0.0, 1.0, 1.0, 1.0, 0.0)[0] == 5.0
    assert link_conveyance(0.0, 5.0, 1.0, 1.0, 0.0, 1.0)[0] == 0.0
    assert link_conveyance(4.0, 6.0, 1.0, 1.0, 0.5, 0.1)[0] == 5.0


def test_normal_and_critical_slope_agree(prismatic):
    """On the critical slope the normal depth is critical, and a profile started there stays."""
    section = rectangle(5.0)
    critical, _ = critical_depth(section, 6.0)
    slope = friction_slope(section, ROUGHNESS, 6.0, critical)
    assert normal_depth(section, ROUGHNESS, slope, 6.0)[0] == pytest.approx(critical, rel=1e-9)
    steep = prismatic(section, 100.0, 2.0 * slope, ROUGHNESS)
    normal, _ = normal_depth(section, ROUGHNESS, 2.0 * slope, 6.0)
    _, y, end = _march(steep, normal, 6.0)
    assert end == REACHED_END
    assert y == pytest.approx(normal, rel=1e-6)
    assert math.isclose(y[-1], normal, rel_tol=1e-6)

"""Where the jump stands below a gate, and the margins of tailwater."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import critical_depth, specific_energy, specific_force
from toeline.hydraulics.cross_section import area, circle, rectangle, trapezoid
from toeline.hydraulics.gradually_varied_flow import channel, link_force, supercritical_profile
from toeline.hydraulics.hydraulic_jump import LENGTH_GOOD, LENGTH_NOT_DEFINED, LENGTH_POORLY_KNOWN, sequent_depth
from toeline.hydraulics.jump_location import (
    JUMP_BEYOND_PROTECTION,
    JUMP_ON_APRON,
    JUMP_ON_PROTECTION,
    drowning_depth,
    free_jump,
    jet_on_floor,
    jump_state,
    protection_margin,
    sequent_in_link,
    tail_depth_at,
)
from toeline.hydraulics.underflow_gate import FREE, UnderflowGate, free_jet, gate_flow, modular_limit_depth

WIDTH, ROUGHNESS = 4.0, 0.015
FLOORS = {
    "rectangle": [rectangle(WIDTH)] * 3,
    "wider": [rectangle(6.0)] * 3,
    "trapezoid": [trapezoid(WIDTH, 1.5)] * 3,
    "transition": [rectangle(WIDTH), rectangle(WIDTH), trapezoid(WIDTH, 1.5)],
}


class Site:
    """A gate of 4 m with 2 m of headwater, opening 0.3 m, and 120 m of floor: 12 m level, then a gentle slope."""

    def __init__(self, sections, step=0.0, opening=0.3):
        self.gate = UnderflowGate(WIDTH, step, 0.0, step)
        self.floor = sections[0]
        _, self.thickness, self.discharge, _ = free_jet(self.gate, rectangle(6.0), step + 2.0, opening)
        self.jet = jet_on_floor(self.floor, WIDTH, self.thickness, step, self.discharge)
        self.channel = channel([0.0, 12.0, 120.0], [0.05, 0.05, 0.0], sections, ROUGHNESS)
        x, y = np.empty(400), np.empty(400)
        self.count, self.end = supercritical_profile(self.channel, 0, 2, 0.3, self.jet.full_depth, self.discharge, x, y)
        self.x, self.y = x, y

    def levels(self, depth_at_head):
        """A tailwater level to within a slope of 1 in 10,000."""
        return np.array([0.05, 0.05, 0.05]) + depth_at_head + np.array([0.0, -0.0012, -0.012])

    def jump(self, levels):
        return free_jump(self.channel, 0, 2, levels, self.jet, self.x, self.y, self.count)

    def margin(self, levels, protection_end):
        return protection_margin(self.channel, 0, 2, levels, self.discharge, self.x, self.y, self.count, protection_end)


@pytest.fixture(params=FLOORS.values(), ids=FLOORS.keys())
def site(request):
    return Site(request.param)


@given(st.floats(0.05, 1.0), st.floats(0.0, 2.0), st.floats(1.0, 10.0))
def test_jet_falls_without_loss(thickness, step, froude):
    """y₁ + q²/2gy₁² = h + q²/2gh² + step, on the supercritical side."""
    q = froude * math.sqrt(GRAVITY * thickness**3)
    jet = jet_on_floor(rectangle(WIDTH), WIDTH, thickness, step, WIDTH * q)
    before = thickness + q * q / (2.0 * GRAVITY * thickness**2) + step
    assert jet.depth + q * q / (2.0 * GRAVITY * jet.depth**2) == pytest.approx(before, rel=1e-9)
    assert jet.depth <= thickness * (1.0 + 1e-9)
    assert jet.froude >= froude * (1.0 - 1e-9)


def test_jet_spread_over_a_wider_floor_keeps_its_energy():
    jet = jet_on_floor(trapezoid(6.0, 1.0), WIDTH, 0.2, 0.0, 5.0)
    assert jet.full_depth < jet.depth == 0.2
    assert specific_energy(trapezoid(6.0, 1.0), 5.0, jet.full_depth) == pytest.approx(
        specific_energy(rectangle(WIDTH), 5.0, 0.2), rel=1e-9
    )


@pytest.mark.parametrize("sections", FLOORS.values(), ids=FLOORS.keys())
def test_drowning_depth_is_the_modular_limit_without_a_step(sections):
    """On a floor at the height of the sill the jump drowns where the gate begins to."""
    site = Site(sections)
    limit = modular_limit_depth(site.gate, site.floor, site.thickness, site.discharge)
    assert drowning_depth(site.floor, site.jet) == pytest.approx(limit, rel=1e-9)


def test_jump_drowns_before_a_gate_on_a_step_does():
    """In between the roller lies at the foot of the step, and the gate still flows free."""
    site = Site(FLOORS["rectangle"], step=0.5)
    drowning = drowning_depth(site.floor, site.jet)
    assert specific_force(site.floor, site.discharge, drowning) == pytest.approx(site.jet.force, rel=1e-9)
    assert drowning < modular_limit_depth(site.gate, site.floor, site.thickness, site.discharge)
    assert gate_flow(site.gate, rectangle(6.0), site.floor, 2.5, 1.01 * drowning, 0.3).state == FREE


@pytest.mark.parametrize("shortfall", [0.02, 0.1, 0.2, 0.3])
def test_forces_balance_at_the_toe(site, shortfall):
    levels = site.levels(drowning_depth(site.floor, site.jet) - shortfall)
    jump = site.jump(levels)
    node = 0 if jump.chainage < 12.0 else 1
    stations = site.channel.nodes.chainage
    weight = (jump.chainage - stations[node]) / (stations[node + 1] - stations[node])
    forces = [link_force(site.channel, node, weight, site.discharge, depth) for depth in (jump.depth, jump.sequent)]
    if jump.chainage > site.x[1]:
        assert forces[0] == pytest.approx(forces[1], rel=2e-3)
    assert jump.sequent == pytest.approx(
        np.interp(jump.chainage, stations, levels - site.channel.nodes.bed_level), rel=1e-9
    )
    assert jump.froude > 1.0
    assert jump.energy_loss >= 0.0


def test_toe_moves_down_as_the_tailwater_falls(site):
    drowning = drowning_depth(site.floor, site.jet)
    toes = [site.jump(site.levels(drowning - fall)).chainage for fall in np.linspace(0.01, 0.35, 35)]
    assert np.all(np.diff(toes) > 0.0)


def test_jump_next_to_the_gate(site):
    """At the drowning depth the toe is at the contracted section."""
    jump = site.jump(site.levels(drowning_depth(site.floor, site.jet) - 1e-6))
    assert jump.chainage == pytest.approx(0.3, abs=0.01)


def test_low_tailwater_counts_as_critical(site):
    """A jet that turns critical jumps there even into an empty pool."""
    jump = site.jump(np.array([-5.0, -5.0, -5.0]))
    assert jump.chainage == pytest.approx(site.x[site.count - 1], abs=0.5)


def test_swept_out_of_a_short_channel():
    sections = FLOORS["rectangle"]
    site = Site(sections)
    short = channel([0.0, 2.0, 4.0], [0.05, 0.05, 0.05], sections, ROUGHNESS)
    x, y = np.empty(100), np.empty(100)
    count, _ = supercritical_profile(short, 0, 2, 0.3, site.jet.full_depth, site.discharge, x, y)
    jump = free_jump(short, 0, 2, np.full(3, 0.6), site.jet, x, y, count)
    assert math.isnan(jump.chainage)
    assert jump.length_quality == LENGTH_NOT_DEFINED


@pytest.mark.parametrize("protection_end", [8.0, 12.0, 20.0, 30.0])
@pytest.mark.parametrize("depth", [0.8, 1.0, 1.3])
def test_protection_margin_is_how_far_the_tailwater_can_fall(site, protection_end, depth):
    """Lowered by the margin, the jump ends where the protection does."""
    levels = site.levels(depth)
    margin = site.margin(levels, protection_end)
    if math.isnan(margin):
        return
    jump = site.jump(levels - margin)
    end = jump.chainage + (0.0 if math.isnan(jump.length) else jump.length)
    if jump.chainage > site.x[1]:
        assert end == pytest.approx(protection_end, abs=0.25)


def test_margin_counts_the_tailwater(site):
    """A centimetre more of tailwater is a centimetre more of margin."""
    one, other = (site.margin(site.levels(depth), 20.0) for depth in (1.0, 1.01))
    assert other - one == pytest.approx(0.01, abs=1e-9)


def test_longer_protection_has_more_margin(site):
    """Below the shortest jump's end it is the margin against a jump at the gate."""
    margins = [site.margin(site.levels(1.0), end) for end in (7.0, 10.0, 15.0, 20.0, 25.0)]
    margins = [margin for margin in margins if not math.isnan(margin)]
    assert np.all(np.diff(margins) >= 0.0)
    assert margins[-1] > margins[0]


def test_no_margin_where_the_jet_turns_critical_first(site):
    assert math.isnan(site.margin(site.levels(1.0), 119.0))


def test_sequent_inside_a_link_is_that_of_the_section(site):
    sequent, _ = sequent_depth(site.floor, site.discharge, site.jet.full_depth)
    assert sequent_in_link(site.channel, 0, 0.0, site.discharge, site.jet.full_depth) == pytest.approx(
        sequent, rel=1e-8
    )


def test_tail_depth(site):
    levels = np.array([1.05, 1.05, 1.0])
    assert tail_depth_at(site.channel, levels, 0, 0.5, site.discharge) == pytest.approx(1.0)
    assert tail_depth_at(site.channel, levels, 1, 1.0, site.discharge) == pytest.approx(1.0)
    dry = np.array([-1.0, -1.0, -1.0])
    critical, _ = critical_depth(site.floor, site.discharge)
    assert tail_depth_at(site.channel, dry, 0, 0.0, site.discharge) == pytest.approx(critical, rel=1e-9)


def test_length_of_the_jump_by_its_floor():
    qualities = {"rectangle": LENGTH_GOOD, "wider": LENGTH_GOOD, "trapezoid": LENGTH_POORLY_KNOWN}
    for name, quality in qualities.items():
        site = Site(FLOORS[name])
        assert site.jump(site.levels(drowning_depth(site.floor, site.jet) - 0.05)).length_quality == quality


def test_no_length_in_a_circle():
    site = Site([circle(6.0)] * 3)
    jump = site.jump(site.levels(drowning_depth(site.floor, site.jet) - 0.1))
    assert jump.length_quality == LENGTH_NOT_DEFINED
    assert math.isnan(jump.length)


@pytest.mark.parametrize(
    ("end", "state"),
    [(5.0, JUMP_ON_APRON), (8.0, JUMP_ON_APRON), (8.1, JUMP_ON_PROTECTION), (20.1, JUMP_BEYOND_PROTECTION)],
)
def test_state_by_the_end_of_the_jump(end, state):
    assert jump_state(end, 8.0, 20.0) == state


def test_head_lost_by_the_jump():
    site = Site(FLOORS["rectangle"])
    jump = site.jump(site.levels(drowning_depth(site.floor, site.jet) - 0.1))
    heads = [
        depth + (site.discharge / area(site.floor, depth)) ** 2 / (2.0 * GRAVITY)
        for depth in (jump.depth, jump.sequent)
    ]
    assert jump.energy_loss == pytest.approx(heads[0] - heads[1], rel=1e-12)
    assert jump.energy_loss == pytest.approx(
        (jump.sequent - jump.depth) ** 3 / (4 * jump.depth * jump.sequent), rel=0.01
    )

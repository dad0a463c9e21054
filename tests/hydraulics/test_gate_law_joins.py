"""The gate law has no step where one flow passes into another, so that a stepping solver can follow it."""

from itertools import pairwise

import pytest
from scipy.optimize import brentq

from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.underflow_gate import (
    BLEND,
    CLEAR_OF_WATER,
    FREE,
    LINEAR_HEAD,
    UnderflowGate,
    contraction_coefficient,
    free_jet,
    gate_discharge,
    gate_flow,
    modular_limit_depth,
)

WIDTH, HEADWATER = 4.0, 2.0
NUDGE = 1e-7
STEP_ALLOWED = 1e-3
"""Share of the discharge by which the two sides of a join may differ."""

CASES = {
    "plain": (UnderflowGate(WIDTH, 0.0, 0.0, 0.0), rectangle(6.0), rectangle(WIDTH)),
    "approach as narrow as the gate": (UnderflowGate(WIDTH, 0.0, 0.0, 0.0), rectangle(WIDTH), rectangle(WIDTH)),
    "apron wider than the gate": (UnderflowGate(WIDTH, 0.0, 0.0, 0.0), rectangle(6.0), rectangle(9.0)),
    "tail trapezoid": (UnderflowGate(WIDTH, 0.0, 0.0, 0.0), trapezoid(WIDTH, 1.5), trapezoid(WIDTH, 1.5)),
    "step": (UnderflowGate(WIDTH, 0.0, -0.6, -0.2), rectangle(6.0), rectangle(WIDTH)),
    "step and trapezoid": (UnderflowGate(WIDTH, 0.0, -0.6, 0.0), trapezoid(5.0, 1.0), trapezoid(5.0, 1.0)),
    "radial": (UnderflowGate(WIDTH, 0.0, 0.0, 0.0, radius=3.0, pinion_height=2.4), rectangle(6.0), rectangle(WIDTH)),
    "calibrated": (UnderflowGate(WIDTH, 0.0, -0.3, 0.0, 0.65, discharge_factor=0.93), rectangle(6.0), rectangle(7.0)),
}
OPENINGS = (0.05, 0.2, 0.5, 0.9)


@pytest.fixture(params=CASES.values(), ids=CASES.keys())
def case(request):
    return request.param


def _discharge(case, tail, opening=0.3, headwater=HEADWATER):
    gate, upstream, downstream = case
    return gate_discharge(gate, upstream, downstream, headwater, tail, opening)


def _step(case, tail, **others):
    """Difference over a join in the tailwater, as a share of the free discharge."""
    free = _discharge(case, case[0].floor_level, **others)
    return abs(_discharge(case, tail + NUDGE, **others) - _discharge(case, tail - NUDGE, **others)) / free


@pytest.mark.parametrize("opening", OPENINGS)
@pytest.mark.parametrize("share", [1.0 - BLEND, 1.0 + BLEND])
def test_both_ends_of_the_blend(case, opening, share):
    gate, upstream, downstream = case
    _, jet, free, _ = free_jet(gate, upstream, HEADWATER, opening)
    tail = gate.floor_level + share * modular_limit_depth(gate, downstream, jet, free)
    assert _step(case, min(tail, HEADWATER - LINEAR_HEAD - 2 * NUDGE), opening=opening) < STEP_ALLOWED


@pytest.mark.parametrize("opening", OPENINGS)
def test_last_centimetre_of_head(case, opening):
    assert _step(case, HEADWATER - LINEAR_HEAD, opening=opening) < STEP_ALLOWED


@pytest.mark.parametrize("opening", OPENINGS)
def test_equal_levels(case, opening):
    assert _step(case, HEADWATER, opening=opening) < STEP_ALLOWED
    assert (
        _discharge(case, HEADWATER - NUDGE, opening=opening)
        >= 0.0
        >= _discharge(case, HEADWATER + NUDGE, opening=opening)
    )


@pytest.mark.parametrize("opening", OPENINGS)
def test_tailwater_at_the_sill(case, opening):
    assert _step(case, case[0].sill_level, opening=opening) < STEP_ALLOWED


@pytest.mark.parametrize("tail", [0.0, 1.2, 1.8])
def test_contraction_begins_to_vanish(case, tail):
    """At a = E/2."""
    gate, upstream, _ = case
    joint = brentq(lambda a: 0.5 * free_jet(gate, upstream, HEADWATER, a)[0] - a, 0.5, 1.9)
    below, above = (_discharge(case, tail, opening=joint + nudge) for nudge in (-NUDGE, NUDGE))
    assert above == pytest.approx(below, rel=STEP_ALLOWED)


def test_gate_comes_clear_of_the_water(case):
    """At C_c·a = ⅔E the lip leaves the jet; below it the flow is free, above it critical over the sill."""
    gate, upstream, downstream = case

    def lip_beside_jet(opening):
        _, jet, _, lip = free_jet(gate, upstream, HEADWATER, opening)
        return 1.0 if lip > jet else -1.0

    joint = brentq(lip_beside_jet, 0.5 * HEADWATER, 1.5 * HEADWATER)
    tail = gate.floor_level
    flows = [gate_flow(gate, upstream, downstream, HEADWATER, tail, joint + nudge) for nudge in (-1e-4, 1e-4)]
    assert [flow.state for flow in flows] == [FREE, CLEAR_OF_WATER]
    assert flows[1].discharge == pytest.approx(flows[0].discharge, rel=STEP_ALLOWED)


def test_opening_from_closed(case):
    for tail in (case[0].floor_level, 1.0, 1.9):
        assert _discharge(case, tail, opening=1e-9) == pytest.approx(0.0, abs=1e-6)


def test_headwater_from_the_sill(case):
    assert _discharge(case, case[0].floor_level, headwater=1e-6) == pytest.approx(0.0, abs=1e-6)


def test_radial_lip_passes_the_vertical():
    """At the height of the pinion Toch's fit joins the vertical edge."""
    gate = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, radius=3.0, pinion_height=0.8)
    below, above = (contraction_coefficient(gate, 0.8 + nudge, 10.0) for nudge in (-NUDGE, NUDGE))
    assert above == pytest.approx(below, rel=1e-6)


def test_leaf_begins_to_overtop(case):
    gate, upstream, downstream = case
    low = gate._replace(leaf_height=HEADWATER - 0.3)
    below, above = (gate_discharge(low, upstream, downstream, HEADWATER + nudge, 0.5, 0.3) for nudge in (-NUDGE, NUDGE))
    assert above == pytest.approx(below, rel=STEP_ALLOWED)


def test_clear_gate_drowns(case):
    """A gate clear of water in a pool with room: from critical flow over the sill to drowned, no step in the
    tailwater.
    """
    gate, _, downstream = case
    wide = (gate, rectangle(12.0), downstream)
    tails = [1.0 + 0.002 * k for k in range(495)]
    discharges = [_discharge(wide, tail, opening=2.6) for tail in tails]
    assert all(b <= a * (1.0 + 1e-9) for a, b in pairwise(discharges))
    assert max(a - b for a, b in pairwise(discharges)) < 0.06 * discharges[0]

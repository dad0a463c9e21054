"""Which way the discharge of a gate goes, and how fast, when a level or the opening rises, for any gate up to lip
contact (a = E/2).
"""

from itertools import pairwise

from hypothesis import given
from hypothesis import strategies as st

from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.underflow_gate import (
    SHARP_EDGE_CONTRACTION,
    UnderflowGate,
    discharge_and_slopes,
    gate_discharge,
)

ROUNDING = 1e-9


@st.composite
def sites(draw):
    """A gate and the sections beside it: sharp edged or radial, with and without step, sill hump, wider pools,
    calibration.
    """
    width = draw(st.floats(0.5, 10.0))
    head = draw(st.floats(0.3, 4.0))
    step, hump = draw(st.floats(0.0, 1.0)), draw(st.floats(0.0, 0.5))
    approach = trapezoid(width * draw(st.floats(1.0, 2.0)), draw(st.floats(0.0, 2.0)))
    floor = trapezoid(width * draw(st.floats(1.0, 2.0)), draw(st.floats(0.0, 2.0)))
    radius = draw(st.sampled_from([0.0, 1.3, 2.0])) * head
    gate = UnderflowGate(
        width, 0.0, -step, -hump, SHARP_EDGE_CONTRACTION, radius, 0.8 * radius, draw(st.floats(0.9, 1.1))
    )
    return gate, approach, floor, head


shares = st.floats(0.0, 1.0)


def _opening(head, share):
    return head * (0.02 + 0.48 * share)


def _tail(gate, head, share):
    return min(gate.floor_level + (head - gate.floor_level) * share, head)


@given(sites(), shares, shares, shares)
def test_falls_with_the_tailwater(site, opening, one, other):
    gate, approach, floor, head = site
    low, high = (_tail(gate, head, share) for share in sorted((one, other)))
    q_low, q_high = (gate_discharge(gate, approach, floor, head, tail, _opening(head, opening)) for tail in (low, high))
    assert 0.0 <= q_high <= q_low * (1.0 + ROUNDING)


@given(sites(), shares, shares, shares)
def test_rises_with_the_headwater(site, opening, tail, rise):
    gate, approach, floor, head = site
    levels = (head, head * (1.0 + rise))
    below, above = (
        gate_discharge(gate, approach, floor, level, _tail(gate, head, tail), _opening(head, opening))
        for level in levels
    )
    assert above >= below * (1.0 - ROUNDING)


@given(sites(), shares, shares, shares)
def test_rises_with_the_opening(site, tail, one, other):
    gate, approach, floor, head = site
    small, large = (_opening(head, share) for share in sorted((one, other)))
    q_small, q_large = (gate_discharge(gate, approach, floor, head, _tail(gate, head, tail), a) for a in (small, large))
    assert q_large >= q_small * (1.0 - ROUNDING)


@given(sites(), shares)
def test_free_flow_knows_no_tailwater(site, opening):
    gate, approach, floor, head = site
    at_floor, below = (
        gate_discharge(gate, approach, floor, head, gate.floor_level - d, _opening(head, opening)) for d in (0, 3)
    )
    assert at_floor == below


@given(sites(), st.floats(1e-6, 1.3), shares)
def test_between_nothing_and_free_flow(site, opening, tail):
    """Also where the lip is near the surface or clear of it."""
    gate, approach, floor, head = site
    free = gate_discharge(gate, approach, floor, head, gate.floor_level, opening * head)
    discharge = gate_discharge(gate, approach, floor, head, _tail(gate, head, tail), opening * head)
    assert 0.0 <= discharge <= free * (1.0 + 1e-3)


@given(sites(), st.floats(0.05, 1.3), st.floats(0.001, 0.99))
def test_an_open_gate_under_head_passes_water(site, opening, tail):
    gate, approach, floor, head = site
    assert gate_discharge(gate, approach, floor, head, _tail(gate, head, tail), opening * head) > 0.0


def test_as_narrow_as_its_pools():
    """No pool, sill or floor is wider than the gate: the steepest case for the approach velocity."""
    section, gate = rectangle(3.0), UnderflowGate(3.0, 0.0, 0.0, 0.0)
    discharges = [gate_discharge(gate, section, section, 2.0, 0.01 * k, 0.9) for k in range(200)]
    assert all(b <= a * (1.0 + ROUNDING) for a, b in pairwise(discharges))


@given(sites(), shares, shares)
def test_slopes_are_the_differences_on_one_side_or_between_both(site, opening, tail):
    gate, approach, floor, head = site
    down, opened, step = _tail(gate, head, tail), _opening(head, opening), 1e-6 * head
    passed, by_up, by_down = discharge_and_slopes(gate, approach, floor, head, down, opened)
    assert passed == gate_discharge(gate, approach, floor, head, down, opened)
    for slope, up_share, down_share in ((by_up, 1.0, 0.0), (by_down, 0.0, 1.0)):
        before, after = (
            gate_discharge(
                gate, approach, floor, head + sign * up_share * step, down + sign * down_share * step, opened
            )
            for sign in (-1.0, 1.0)
        )
        sides = (passed - before) / step, (after - passed) / step
        allowed = 1e-3 * (abs(slope) + passed / head) + 2.0 * ROUNDING * passed / step
        assert min(sides) - allowed <= slope <= max(sides) + allowed

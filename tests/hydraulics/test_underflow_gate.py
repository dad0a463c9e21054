"""The gate law: that each of its flows satisfies its own equations, and what it says of itself."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import specific_force
from toeline.hydraulics.cross_section import area, rectangle, trapezoid
from toeline.hydraulics.drowned_gate import jet_width
from toeline.hydraulics.submerged_jump import jet_force
from toeline.hydraulics.underflow_gate import (
    CLEAR_AND_DROWNED,
    CLEAR_OF_WATER,
    CLOSED,
    DROWNED,
    FREE,
    NEAR_MODULAR_LIMIT,
    OVERTOPPED,
    QUALITY_GOOD,
    QUALITY_LIP_NEAR_SURFACE,
    QUALITY_NEAR_LIMIT,
    QUALITY_REVERSE,
    QUALITY_VERY_DROWNED,
    REVERSE,
    UnderflowGate,
    free_jet,
    gate_discharge,
    gate_flow,
    modular_limit_depth,
    opening_for_discharge,
)
from toeline.hydraulics.weir import weir_discharge

WIDTH = 4.0
POOL = rectangle(6.0)
PLAIN = UnderflowGate(WIDTH, 0.0, 0.0, 0.0)
STEPPED = UnderflowGate(WIDTH, 0.0, -0.5, -0.3)
RADIAL = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, radius=3.0, pinion_height=2.4)
CALIBRATED = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, contraction=0.65, discharge_factor=0.93)
GATES = {"plain": PLAIN, "stepped": STEPPED, "radial": RADIAL, "calibrated": CALIBRATED}
FLOORS = {
    "as wide": rectangle(WIDTH),
    "wider": rectangle(7.0),
    "trapezoid": trapezoid(WIDTH, 1.5),
    "β": rectangle(WIDTH, beta=1.08),
}


def _energy_level(gate, headwater, discharge):
    velocity = discharge / area(POOL, headwater - gate.upstream_bed_level)
    return headwater + velocity * velocity / (2.0 * GRAVITY)


@pytest.fixture(params=GATES.values(), ids=GATES.keys())
def gate(request):
    return request.param


@pytest.fixture(params=FLOORS.values(), ids=FLOORS.keys())
def floor(request):
    return request.param


@pytest.mark.parametrize("opening", [0.01, 0.2, 0.5, 0.9])
def test_free_flow_keeps_its_energy(gate, floor, opening):
    """H = h + (Q/(φbh))²/2g over the sill, approach velocity included."""
    flow = gate_flow(gate, POOL, floor, 2.0, gate.floor_level + 0.01, opening)
    velocity = flow.discharge / (gate.discharge_factor * WIDTH * flow.jet_thickness)
    assert flow.state == FREE
    assert flow.discharge == flow.free_discharge
    assert flow.jet_thickness + velocity**2 / (2.0 * GRAVITY) == pytest.approx(
        _energy_level(gate, 2.0, flow.discharge), rel=1e-5
    )
    assert flow.energy_head == pytest.approx(_energy_level(gate, 2.0, flow.discharge), rel=1e-9)


@pytest.mark.parametrize(("opening", "tail"), [(0.1, 1.2), (0.3, 1.75), (0.6, 1.9)])
def test_drowned_flow_keeps_energy_and_momentum(gate, floor, opening, tail):
    flow = gate_flow(gate, POOL, floor, 2.0, tail, opening)
    tail_depth = tail - gate.floor_level
    assert flow.state == DROWNED
    momentum = jet_force(floor, flow.discharge, jet_width(gate), flow.jet_thickness, flow.roller_depth)
    assert momentum == pytest.approx(specific_force(floor, flow.discharge, tail_depth), rel=1e-9)
    velocity = flow.discharge / (gate.discharge_factor * WIDTH * flow.jet_thickness)
    energy = gate.floor_level + flow.roller_depth + velocity**2 / (2.0 * GRAVITY)
    assert energy == pytest.approx(_energy_level(gate, 2.0, flow.discharge), rel=1e-5)
    assert flow.jet_thickness - gate.floor_level < flow.roller_depth < tail_depth


def test_gate_clear_of_water_passes_critical_flow(gate):
    """h = ⅔E and Q = φ·b·h·√(gh)."""
    flow = gate_flow(gate, POOL, FLOORS["as wide"], 1.0, gate.floor_level, 1.4)
    critical = 2.0 / 3.0 * flow.energy_head
    assert flow.state == CLEAR_OF_WATER
    assert flow.discharge == pytest.approx(
        gate.discharge_factor * WIDTH * critical * math.sqrt(GRAVITY * critical), rel=2e-3
    )


@pytest.mark.parametrize("tail", [1.92, 1.96, 1.985])
def test_gate_clear_and_drowned(floor, tail):
    """Water over the sill is the throat; energy and momentum hold there. A raised gate never cuts the flow off."""
    flow = gate_flow(PLAIN, POOL, floor, 2.0, tail, 2.5)
    throat = flow.roller_depth
    velocity = flow.discharge / (WIDTH * throat)
    assert flow.state == CLEAR_AND_DROWNED
    assert 0.0 < flow.discharge <= flow.free_discharge
    assert throat <= tail
    momentum = jet_force(floor, flow.discharge, WIDTH, throat, throat)
    assert momentum == pytest.approx(specific_force(floor, flow.discharge, tail), rel=1e-6)
    assert throat + velocity**2 / (2.0 * GRAVITY) == pytest.approx(_energy_level(PLAIN, 2.0, flow.discharge), rel=0.02)


@pytest.mark.parametrize("tail", [1.7, 1.8, 1.9, 1.95])
def test_raised_gate_passes_more_than_a_dipping_one(tail):
    raised = gate_discharge(PLAIN, POOL, FLOORS["as wide"], 2.0, tail, 2.5)
    assert raised > gate_discharge(PLAIN, POOL, FLOORS["as wide"], 2.0, tail, 1.3)


def test_closed_gate(gate, floor):
    flow = gate_flow(gate, POOL, floor, 2.0, 1.0, 0.0)
    assert flow.discharge == 0.0
    assert flow.state == CLOSED
    assert flow.quality == QUALITY_GOOD


def test_leakage():
    """leakage·√head, counted from the sill where the tailwater is below it; linear over the last centimetre."""
    leaky = PLAIN._replace(leakage=0.02)
    floor = FLOORS["as wide"]
    assert gate_discharge(leaky, POOL, floor, 1.44, 0.0, 0.0) == pytest.approx(0.02 * 1.2, rel=1e-12)
    assert gate_discharge(leaky, POOL, floor, 1.44, -0.5, 0.0) == pytest.approx(0.02 * 1.2, rel=1e-12)
    assert gate_discharge(leaky, POOL, floor, 1.0, 1.25, 0.0) == pytest.approx(-0.02 * 0.5, rel=1e-12)
    assert gate_discharge(leaky, POOL, floor, 1.0, 0.995, 0.0) == pytest.approx(0.02 * 0.1 / 2.0, rel=1e-9)
    assert gate_discharge(leaky, POOL, floor, -0.1, -0.5, 0.0) == 0.0


def test_overtopped_leaf(floor):
    """The weir flow over the leaf is added; a closed gate can overtop too."""
    low = PLAIN._replace(leaf_height=1.2)
    for opening in (0.0, 0.3):
        crest = opening + 1.2
        flow = gate_flow(low, POOL, floor, 2.0, 0.4, opening)
        over = weir_discharge(1.7, WIDTH, crest, 2.0, 0.4)
        assert flow.state == OVERTOPPED
        assert flow.discharge == pytest.approx(gate_discharge(PLAIN, POOL, floor, 2.0, 0.4, opening) + over, rel=1e-12)
        assert flow.discharge - flow.underflow == pytest.approx(over, rel=1e-12)


def test_reverse_flow():
    """The same law with the sides exchanged, signed; between equal pools exactly mirrored."""
    pool = rectangle(5.0)
    forward = gate_flow(PLAIN, pool, pool, 2.0, 1.2, 0.3)
    backward = gate_flow(PLAIN, pool, pool, 1.2, 2.0, 0.3)
    assert backward.discharge == pytest.approx(-forward.discharge, rel=1e-12)
    assert backward.state == REVERSE
    assert backward.quality == QUALITY_REVERSE


@pytest.mark.parametrize("opening", [0.0, 0.3, 1.0, 3.0])
def test_nothing_flows_between_equal_levels(gate, floor, opening):
    assert gate_discharge(gate, POOL, floor, 1.5, 1.5, opening) == 0.0


def test_nothing_flows_from_water_below_the_sill(floor):
    assert gate_discharge(STEPPED, POOL, floor, -0.1, -0.4, 0.3) == 0.0
    assert gate_discharge(STEPPED, POOL, floor, 0.0, -0.4, 0.3) == 0.0


def test_quality():
    floor = FLOORS["as wide"]
    _, jet, free, _ = free_jet(PLAIN, POOL, 2.0, 0.3)
    limit = modular_limit_depth(PLAIN, floor, jet, free)
    assert gate_flow(PLAIN, POOL, floor, 2.0, 0.5, 0.3).quality == QUALITY_GOOD
    for share, near in ((0.97, False), (0.98, True), (1.0, True), (1.02, True), (1.03, False)):
        flow = gate_flow(PLAIN, POOL, floor, 2.0, share * limit, 0.3)
        assert (flow.quality == QUALITY_NEAR_LIMIT) == near
        assert (flow.state == NEAR_MODULAR_LIMIT) == near
    assert gate_flow(PLAIN, POOL, floor, 2.0, 0.5, 1.1).quality == QUALITY_LIP_NEAR_SURFACE
    assert gate_flow(PLAIN, POOL, floor, 2.0, 1.905, 0.3).quality == QUALITY_VERY_DROWNED
    assert gate_flow(PLAIN, POOL, floor, 2.0, 1.89, 0.3).quality == QUALITY_GOOD


def test_modular_limit_in_the_flow(floor):
    """The limit that the flow reports is where the roller just reaches the jet."""
    _, jet, free, _ = free_jet(STEPPED, POOL, 2.0, 0.3)
    limit = modular_limit_depth(STEPPED, floor, jet, free)
    force = jet_force(floor, free, WIDTH, jet, jet + 0.5)
    assert specific_force(floor, free, limit) == pytest.approx(force, rel=1e-9)
    flow = gate_flow(STEPPED, POOL, floor, 2.0, STEPPED.floor_level + limit, 0.3)
    assert flow.modular_limit_depth == pytest.approx(limit, rel=1e-9)


@given(st.sampled_from(list(GATES.values())), st.floats(0.02, 0.9), st.floats(0.2, 1.9))
def test_opening_for_discharge(gate, opening, tail):
    floor = FLOORS["wider"]
    wanted = gate_discharge(gate, POOL, floor, 2.0, tail, opening)
    found, passed = opening_for_discharge(gate, POOL, floor, 2.0, tail, wanted, 1.0)
    assert passed == pytest.approx(wanted, rel=1e-9)
    assert found == pytest.approx(opening, rel=1e-6)


def test_opening_at_the_ends_of_its_range():
    floor = FLOORS["as wide"]
    largest, passed = opening_for_discharge(PLAIN, POOL, floor, 2.0, 0.2, 1e3, 0.8)
    assert largest == pytest.approx(0.8, rel=1e-12)
    assert passed == pytest.approx(gate_discharge(PLAIN, POOL, floor, 2.0, 0.2, 0.8), rel=1e-12)
    assert opening_for_discharge(PLAIN, POOL, floor, 2.0, 0.2, 0.0, 0.8) == (
        pytest.approx(0.0, abs=1e-12),
        pytest.approx(0.0, abs=1e-9),
    )


@pytest.mark.parametrize("share", [0.95, 0.6, 0.36])
@pytest.mark.parametrize("side_slope", [0.0, 0.5])
def test_gate_wider_than_the_floor_below(share, side_slope):
    """The law has no sense there; it stays finite, and between nothing and free flow."""
    narrow = trapezoid(share * WIDTH, side_slope)
    for opening in (0.2, 0.64):
        for tail in (0.02 * k for k in range(100)):
            flow = gate_flow(PLAIN, POOL, narrow, 1.43, min(tail, 1.42), opening)
            assert 0.0 <= flow.discharge <= flow.free_discharge * (1.0 + 1e-9), (opening, tail)


@pytest.mark.parametrize("leakage", [0.0, 0.05])
def test_no_opening_lets_water_flow_forward_against_a_reversed_head(leakage):
    """The gate stays shut: every opening would let more of it come back."""
    gate = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, leakage=leakage)
    opening, passed = opening_for_discharge(gate, POOL, FLOORS["as wide"], 1.6, 2.0, 3.0, 0.8)
    assert opening == 0.0
    assert passed == pytest.approx(gate_discharge(gate, POOL, FLOORS["as wide"], 1.6, 2.0, 0.0), abs=1e-12)

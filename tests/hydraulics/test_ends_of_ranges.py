"""Every equation at and beyond the ends of its range: no water, no flow, floods, levels below every bed.

A result that says OK holds no NaN; a result without a status is a number wherever the quantity is defined.
"""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import (
    critical_depth,
    froude_number,
    specific_energy,
    specific_force,
    supercritical_depth,
)
from toeline.hydraulics.cross_section import circle, geometry, rectangle, static_moment, surveyed, trapezoid, triangle
from toeline.hydraulics.gradually_varied_flow import (
    DRY_DEPTH,
    channel,
    link_conveyance,
    subcritical_profile,
    supercritical_profile,
    upstream_level,
)
from toeline.hydraulics.hydraulic_jump import jump_length, sequent_depth, subcritical_depth_of_force
from toeline.hydraulics.jump_location import jet_on_floor
from toeline.hydraulics.offtake import DEMAND, ORIFICE, WEIR, offtake_discharge
from toeline.hydraulics.submerged_jump import roller_depth
from toeline.hydraulics.surge import DOWNSTREAM, UPSTREAM, surge_height, wave_speeds
from toeline.hydraulics.underflow_gate import UnderflowGate, gate_flow
from toeline.hydraulics.uniform_flow import conveyance, friction_slope, kinematic_celerity, normal_depth

SECTIONS = {
    "rectangle": rectangle(2.0),
    "trapezoid": trapezoid(1.0, 1.5),
    "triangle": triangle(1.0),
    "trapezoid with a top": trapezoid(1.0, 1.0, 1.0),
    "circle": circle(1.0),
    "surveyed": surveyed([0, 0, 2, 2.5, 3, 6, 6], [2, 0.8, 0.7, 0, 0.6, 0.75, 2]),
}
DEPTHS = (0.0, 1e-6, 1e-3, 0.5, 0.99, 1.0, 3.0, 50.0, 1e4)
DISCHARGES = (0.0, 1e-6, 1e-3, 1.0, 1e3, 1e6, -1.0)


@pytest.fixture(params=SECTIONS.values(), ids=SECTIONS.keys())
def section(request):
    return request.param


def is_honest(values, flag):
    """Whether a result that says OK holds numbers."""
    return flag != status.OK or not np.isnan(values).any()


@pytest.mark.parametrize("depth", [-1.0, *DEPTHS, 1e8])
def test_geometry(section, depth):
    area, width, perimeter, perimeter_slope = geometry(section, depth)
    assert area >= 0.0
    assert width >= 0.0
    assert perimeter >= 0.0
    assert perimeter_slope >= 0.0
    assert static_moment(section, depth) >= 0.0


@pytest.mark.parametrize("discharge", DISCHARGES)
def test_flow_of_a_depth(section, discharge):
    for depth in DEPTHS:
        for value in (
            froude_number(section, discharge, depth),
            specific_energy(section, discharge, depth),
            specific_force(section, discharge, depth),
            conveyance(section, 0.015, depth),
            friction_slope(section, 0.015, discharge, depth),
            *wave_speeds(section, discharge, depth),
        ):
            assert not math.isnan(value)
        if depth > 0.0:
            assert math.isfinite(kinematic_celerity(section, discharge, depth))


@pytest.mark.parametrize("discharge", DISCHARGES)
def test_depth_of_a_flow(section, discharge):
    assert is_honest(*critical_depth(section, discharge))
    for slope in (-1.0, 0.0, 1e-9, 1e-3, 1.0):
        assert is_honest(*normal_depth(section, 0.015, slope, discharge))


@pytest.mark.parametrize("discharge", DISCHARGES)
def test_depth_of_an_energy_or_a_force(section, discharge):
    for amount in DEPTHS:
        assert is_honest(*supercritical_depth(section, discharge, amount))
        assert is_honest(*subcritical_depth_of_force(section, discharge, amount))


@pytest.mark.parametrize("discharge", DISCHARGES[1:])
def test_sequent_depth_and_roller(section, discharge):
    for depth in DEPTHS[1:]:
        sequent, flag = sequent_depth(section, discharge, depth)
        assert is_honest(sequent, flag)
        assert (flag != status.OK) or sequent > 0.0
        for tail in DEPTHS[1:]:
            assert is_honest(*roller_depth(section, discharge, 1.0, depth, tail))


def test_no_sequent_depth_without_water_or_flow(section):
    for discharge, depth in ((1.0, 0.0), (0.0, 0.5), (0.0, 0.0)):
        assert sequent_depth(section, discharge, depth)[1] != status.OK


def test_no_roller_without_tailwater(section):
    for discharge in (1.0, 1e-9):
        assert roller_depth(section, discharge, 1.0, 0.3, 0.0)[1] != status.OK


@pytest.mark.parametrize("thickness", [1e-5, 1e-3, 0.3, 5.0])
@pytest.mark.parametrize("step", [0.0, 1e-6, 0.5, 3.0])
@pytest.mark.parametrize("froude", [1.0, 1.5, 60.0])
def test_jet_on_the_floor(section, thickness, step, froude):
    jet = jet_on_floor(section, 1.0, thickness, step, froude * math.sqrt(GRAVITY * thickness**3))
    assert not np.isnan(jet).any()
    assert 0.0 < jet.depth <= thickness * (1.0 + 1e-9)
    assert jet.full_depth > 0.0


@pytest.mark.parametrize("discharge", DISCHARGES)
@pytest.mark.parametrize("direction", [UPSTREAM, DOWNSTREAM])
def test_surge(section, discharge, direction):
    for depth in DEPTHS:
        for change in (0.0, 1e-9, -1e-9, 1.0, -1.0, 1e3, -1e3):
            height, speed, flag = surge_height(section, discharge, depth, change, direction)
            assert is_honest((height, speed), flag)
            assert height >= -depth


@pytest.mark.parametrize("froude", [-1.0, 0.0, 1.0, 1.7, 10.0, 1e9, math.inf, math.nan])
@pytest.mark.parametrize("depth", DEPTHS)
def test_length_of_a_jump(depth, froude):
    for bottom, side in ((0.0, 1.0), (3.0, 0.0), (3.0, 1.5)):
        length, quality = jump_length(bottom, side, depth, froude, 1.0)
        assert math.isnan(length) == (quality == 0)


GATES = {
    "plain": UnderflowGate(1.0, 0.0, 0.0, 0.0),
    "stepped": UnderflowGate(1.0, 0.0, -0.5, -0.2),
    "radial": UnderflowGate(1.0, 0.0, -0.5, 0.0, radius=2.0, pinion_height=1.5, leaf_height=0.4, leakage=0.01),
    "high": UnderflowGate(1.0, 3.0, 0.0, 0.0, discharge_factor=1.1),
}
LEVELS = (-2.0, 0.0, 1e-9, 1e-4, 0.005, 0.5, 1.99, 2.0, 3.05, 100.0)
TAILS = {"as wide": rectangle(1.0), "wider": trapezoid(1.2, 1.5), "surveyed": surveyed([0, 0, 2, 2], [3, 0, 0, 3])}


@pytest.mark.parametrize("gate", GATES.values(), ids=GATES.keys())
@pytest.mark.parametrize("tail", TAILS.values(), ids=TAILS.keys())
@pytest.mark.parametrize("opening", [0.0, 1e-9, 1e-3, 0.3, 1.0, 5.0])
def test_gate(gate, tail, opening):
    """Closed, dry on one side or both, flooded: a number, with the sign of the head, and free discharge as its
    bound.
    """
    for headwater in LEVELS:
        for tailwater in LEVELS:
            flow = gate_flow(gate, rectangle(1.5), tail, headwater, tailwater, opening)
            assert math.isfinite(flow.discharge)
            assert flow.discharge * (headwater - tailwater) >= 0.0
            assert abs(flow.underflow) <= flow.free_discharge * (1.0 + 1e-3)
            assert flow.free_discharge >= 0.0


@given(
    st.floats(-1.0, 20.0),
    st.floats(-1.0, 20.0),
    st.floats(0.0, 20.0),
    st.floats(0.3, 1.0),
    st.floats(0.1, 1.2),
    st.floats(1.0, 3.0),
)
def test_any_gate(headwater, tailwater, opening, contraction, factor, widening):
    gate = UnderflowGate(2.0, 0.0, -0.4, 0.0, contraction, discharge_factor=factor)
    flow = gate_flow(gate, rectangle(2.0 * widening), rectangle(2.0 * widening), headwater, tailwater, opening)
    assert math.isfinite(flow.discharge)
    assert flow.discharge * (headwater - tailwater) >= 0.0


@pytest.mark.parametrize("kind", [DEMAND, ORIFICE, WEIR])
@pytest.mark.parametrize("level", [-1e6, 0.0, 1e-12, 0.02, 1.0, 1e4])
@pytest.mark.parametrize("opening", [0.0, 1e-9, 0.3])
def test_offtake(kind, level, opening):
    taken = offtake_discharge(kind, 0.7, 0.0, 1.0, opening, 0.6, level)
    assert math.isfinite(taken)
    assert taken >= 0.0


@pytest.mark.parametrize("up", [-1.0, 0.0, DRY_DEPTH, 0.05, 0.1, 3.0])
@pytest.mark.parametrize("down", [-1.0, 0.0, DRY_DEPTH, 0.05, 0.1, 3.0])
def test_drying_link(up, down):
    assert np.isfinite(link_conveyance(3.0, 5.0, 2.0, 2.0, up, down)).all()
    assert link_conveyance(3.0, 5.0, 2.0, 2.0, up, down)[0] >= 0.0


@pytest.mark.parametrize("q", [1e-9, 1e-3, 1.0, 1e3])
@pytest.mark.parametrize("depth", [1e-6, 0.01, 1.0, 50.0])
def test_profiles(section, q, depth):
    reach = channel([0.0, 30.0, 100.0], [0.1, 0.05, 0.0], [section] * 3, 0.015)
    x, y = np.zeros(60), np.zeros(60)
    critical, flag = critical_depth(section, q)
    if flag != status.OK:
        return
    count, _ = supercritical_profile(reach, 0, 2, 0.0, min(depth, 0.9 * critical), q, x, y)
    assert np.isfinite(x[:count]).all()
    assert np.isfinite(y[:count]).all()
    assert np.all(np.diff(x[:count]) > 0.0)
    assert is_honest(*upstream_level(reach, 1, depth, q, 0.0, False))
    levels = np.zeros(3)
    flag = subcritical_profile(reach, 0, 2, depth, q, np.zeros(3), levels)
    assert is_honest(levels, flag)

"""A model to the scale 1:25 gives the same flow: lengths × 25, velocities × 5, discharges × 25^2.5, n × 25^(1/6)."""

import numpy as np
import pytest

from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.gradually_varied_flow import channel, supercritical_profile
from toeline.hydraulics.jump_location import drowning_depth, free_jump, jet_on_floor, protection_margin
from toeline.hydraulics.surge import DOWNSTREAM, surge_height
from toeline.hydraulics.underflow_gate import UnderflowGate, gate_flow

SCALE = 25.0
DISCHARGE_SCALE = SCALE**2.5


def _gate(scale, radius=0.0):
    return UnderflowGate(
        0.5 * scale, 0.0, -0.04 * scale, -0.02 * scale, radius=radius * scale, pinion_height=0.8 * radius * scale
    )


@pytest.mark.parametrize("radius", [0.0, 0.4], ids=["vertical", "radial"])
@pytest.mark.parametrize("tail", [0.0, 0.14, 0.18, 0.19, 0.25])
@pytest.mark.parametrize("opening", [0.04, 0.12, 0.2, 0.4])
def test_gate_law(radius, tail, opening):
    """But for the last centimetre of head, which is a length of its own."""
    flows = [
        gate_flow(
            _gate(scale, radius),
            rectangle(0.6 * scale),
            trapezoid(0.55 * scale, 1.0),
            0.3 * scale,
            tail * scale,
            opening * scale,
        )
        for scale in (1.0, SCALE)
    ]
    assert flows[1].discharge == pytest.approx(DISCHARGE_SCALE * flows[0].discharge, rel=1e-6)
    assert flows[1].jet_thickness == pytest.approx(SCALE * flows[0].jet_thickness, rel=1e-9)
    assert (flows[1].state, flows[1].quality) == (flows[0].state, flows[0].quality)


def _jump(scale):
    gate = _gate(scale)
    sections = [rectangle(0.5 * scale), rectangle(0.5 * scale), trapezoid(0.5 * scale, 1.5)]
    flow = gate_flow(gate, rectangle(0.6 * scale), sections[0], 0.3 * scale, 0.0, 0.04 * scale)
    jet = jet_on_floor(sections[0], gate.width, flow.jet_thickness, 0.04 * scale, flow.discharge)
    floor = channel(
        np.array([0.0, 0.6, 10.0]) * scale, np.array([0.01, 0.01, 0.0]) * scale, sections, 0.009 * scale ** (1 / 6)
    )
    x, y = np.empty(300), np.empty(300)
    count, _ = supercritical_profile(floor, 0, 2, 0.04 * scale, jet.full_depth, flow.discharge, x, y)
    levels = np.full(3, 0.01 * scale + 0.9 * drowning_depth(sections[0], jet))
    jump = free_jump(floor, 0, 2, levels, jet, x, y, count)
    margin = protection_margin(floor, 0, 2, levels, flow.discharge, x, y, count, 1.5 * scale)
    return np.array([jump.chainage, jump.depth, jump.sequent, jump.length, jump.energy_loss, margin]), jump.froude


def test_jump_location():
    (model, froude), (prototype, same_froude) = _jump(1.0), _jump(SCALE)
    assert prototype == pytest.approx(SCALE * model, rel=1e-6)
    assert same_froude == pytest.approx(froude, rel=1e-8)


@pytest.mark.parametrize("change", [0.05, -0.02])
def test_surge(change):
    heights = [
        surge_height(trapezoid(0.5 * s, 1.5), 0.06 * s**2.5, 0.3 * s, change * s**2.5, DOWNSTREAM)[:2]
        for s in (1.0, SCALE)
    ]
    assert heights[1][0] == pytest.approx(SCALE * heights[0][0], rel=1e-9)
    assert heights[1][1] == pytest.approx(SCALE**0.5 * heights[0][1], rel=1e-9)

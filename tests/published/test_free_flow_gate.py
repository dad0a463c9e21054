"""Free discharge of a sluice gate."""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.underflow_gate import FREE, UnderflowGate, gate_flow

OPENING, WIDTH = 0.4, 5.0


@pytest.fixture(
    params=[
        (2, 0.5340, 0.4983),
        (3, 0.5561, 0.5216),
        (4, 0.5682, 0.5350),
        (5, 0.5759, 0.5441),
        (6, 0.5812, 0.5510),
        (8, 0.5880, 0.5608),
        (10, 0.5922, 0.5677),
        (12, 0.5951, 0.5727),
        (16, 0.5987, 0.5799),
        (20, 0.6009, 0.5847),
    ],
    ids=lambda row: f"y0/a={row[0]}",
)
def free_flow_table(request):
    """y₀/a; C_d = q/(a√(2gy₀)) from energy with C_c = 0.61 (derived; published second-hand), recomputed; C_d after
    Swamee 1992 (from memory), recomputed.
    """
    return request.param


def _free_flow(depth_by_opening: float):
    section, depth = rectangle(WIDTH), depth_by_opening * OPENING
    return gate_flow(UnderflowGate(WIDTH, 0.0, 0.0, 0.0), section, section, depth, 0.1 * OPENING, OPENING)


def test_free_flow_table(free_flow_table):
    depth_by_opening, by_energy, by_swamee = free_flow_table
    flow = _free_flow(depth_by_opening)
    coefficient = flow.discharge / (WIDTH * OPENING * math.sqrt(2.0 * GRAVITY * depth_by_opening * OPENING))
    assert flow.state == FREE
    assert coefficient == pytest.approx(by_energy, abs=6e-5)
    assert coefficient == pytest.approx(by_swamee, rel=0.08)
    assert coefficient > by_swamee


def test_white_rule(free_flow_table):
    """C_d ≈ 0.61/√(1 + 0.61·a/y₀) within 2 % for a/y₀ < 0.5. From memory (White, Fluid Mechanics)."""
    depth_by_opening = free_flow_table[0]
    flow = _free_flow(depth_by_opening)
    coefficient = flow.discharge / (WIDTH * OPENING * math.sqrt(2.0 * GRAVITY * depth_by_opening * OPENING))
    assert coefficient == pytest.approx(0.61 / math.sqrt(1.0 + 0.61 / depth_by_opening), rel=0.02)

"""One gate from its law to the place of the jump: wide rectangle, y₀ = 3.00 m, a = 0.50 m, C_c = 0.61, level apron,
n = 0.015.

Derived (g = 9.81): free q = 2.229384 m²/s, jet 0.3050 m, Fr₁ = 4.22572, modular limit 1.67657 m, y_c = 0.79720 m.
The row of the source at a tailwater of 1.70 m is left out: it lies 1.4 % above the limit, where Toeline
interpolates.
"""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.hydraulic_jump import sequent_depth
from toeline.hydraulics.jump_location import jet_on_floor
from toeline.hydraulics.submerged_jump import roller_length, submergence
from toeline.hydraulics.underflow_gate import DROWNED, FREE, UnderflowGate, gate_flow, modular_limit_depth

WIDTH, HEADWATER, OPENING = 1e7, 3.0, 0.5
SECTION = rectangle(WIDTH)
GATE = UnderflowGate(WIDTH, 0.0, 0.0, 0.0)


def _flow(tailwater):
    return gate_flow(GATE, SECTION, SECTION, HEADWATER, tailwater, OPENING)


def test_free_flow_of_the_wide_gate(units):
    metric, flow = units(9.81), _flow(0.3)
    limit = modular_limit_depth(GATE, SECTION, flow.jet_thickness, flow.free_discharge)
    jet = jet_on_floor(SECTION, WIDTH, flow.jet_thickness, 0.0, flow.discharge)
    assert metric.discharge_of_source(flow.discharge) / WIDTH == pytest.approx(2.229384, abs=6e-7)
    assert flow.jet_thickness == pytest.approx(0.3050, abs=1e-12)
    assert jet.froude == pytest.approx(4.22572, abs=6e-6)
    assert limit == pytest.approx(1.67657, abs=6e-6)
    assert critical_depth(SECTION, flow.discharge)[0] == pytest.approx(0.79720, abs=6e-6)


@pytest.fixture(
    params=[
        (2.60, 0.968608, 2.49127, 2.9757, 13.53),
        (2.20, 1.409692, 1.92245, 1.1780, 11.99),
        (1.90, 1.719528, 1.39673, 0.5060, 10.82),
    ],
    ids=lambda row: f"tailwater {row[0]}",
)
def drowned_tailwaters(request):
    """Tailwater m, q m²/s, depth over the jet m, submergence, roller length m."""
    return request.param


def test_drowned_tailwaters(drowned_tailwaters, units):
    tailwater, unit_discharge, over_jet, submerged, length = drowned_tailwaters
    flow = _flow(tailwater)
    sequent, _ = sequent_depth(SECTION, flow.discharge, flow.jet_thickness)
    ratio = submergence(tailwater, sequent)
    assert flow.state == DROWNED
    assert units(9.81).discharge_of_source(flow.discharge) / WIDTH == pytest.approx(unit_discharge, abs=6e-7)
    assert flow.roller_depth == pytest.approx(over_jet, abs=6e-6)
    assert ratio == pytest.approx(submerged, abs=6e-5)
    assert roller_length(sequent, ratio) == pytest.approx(length, abs=6e-3)


@pytest.fixture(
    params=[
        (1.60, 0.32841, 3.782, 6.7740, 9.09),
        (1.50, 0.36266, 3.259, 16.7744, 8.16),
        (1.40, 0.40171, 2.796, 28.1925, 7.20),
        (1.30, 0.44633, 2.387, 41.0845, 6.18),
        (1.20, 0.49745, 2.029, 55.3592, 5.11),
    ],
    ids=lambda row: f"tailwater {row[0]}",
)
def free_tailwaters(request):
    """Tailwater m, toe depth m, Fr at the toe, toe from the contracted section m, length after Hager 1992 m (from
    memory).
    """
    return request.param


def test_free_tailwaters(free_tailwaters, units, prismatic, profiles):
    tailwater, toe_depth, froude, distance, length = free_tailwaters
    flow = _flow(tailwater)
    floor = prismatic(SECTION, 200.0, 0.0, units(9.81).roughness(0.015))
    jump = profiles.jump(floor, tailwater, flow.jet_thickness, flow.discharge)
    assert flow.state == FREE
    assert jump.chainage == pytest.approx(distance, rel=0.005, abs=0.05)
    assert jump.depth == pytest.approx(toe_depth, abs=4e-4)
    assert jump.froude == pytest.approx(froude, abs=6e-3)
    assert jump.length == pytest.approx(length, rel=0.05 if froude >= 2.5 else 0.08)
    assert jump.froude == pytest.approx(flow.discharge / WIDTH / math.sqrt(GRAVITY * jump.depth**3), rel=1e-12)

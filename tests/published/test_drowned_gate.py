"""Discharge of a drowned sluice gate."""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.underflow_gate import (
    DROWNED,
    NEAR_MODULAR_LIMIT,
    UnderflowGate,
    gate_discharge,
    gate_flow,
    modular_limit_depth,
)

OPENING, WIDTH = 0.4, 5.0
SECTION = rectangle(WIDTH)
GATE = UnderflowGate(WIDTH, 0.0, 0.0, 0.0)


def _coefficient(discharge: float, depth: float, opening: float = OPENING, width: float = WIDTH) -> float:
    return discharge / (width * opening * math.sqrt(2.0 * GRAVITY * depth))


ENERGY_MOMENTUM_ROWS = [
    (3, 4, 0.3880, 0.383),
    (4, 5, 0.3229, 0.300), (4, 6, 0.4205, 0.392),
    (5, 6, 0.2840, 0.246), (5, 8, 0.4291, 0.386), (5, 10, 0.5028, 0.466),
    (6, 8, 0.3401, 0.286), (6, 10, 0.4321, 0.377), (6, 12, 0.4864, 0.438), (6, 16, 0.5599, 0.532),
    (8, 10, 0.2955, 0.223), (8, 12, 0.3820, 0.305), (8, 16, 0.4697, 0.400), (8, 20, 0.5175, 0.464),
    (10, 12, 0.2653, 0.182), (10, 16, 0.3984, 0.304), (10, 20, 0.4609, 0.374),
]  # fmt: skip


def _name(row) -> str:
    return f"y3/a={row[0]} y0/a={row[1]}"


@pytest.fixture(params=ENERGY_MOMENTUM_ROWS, ids=_name)
def energy_momentum_table(request):
    """y₃/a, y₀/a; C_d from energy and momentum with C_c = 0.61 and the approach head (derived; Henry 1950, Henderson,
    Bollrich), recomputed; C_d after Swamee 1992 (from memory).
    """
    return request.param


def test_energy_momentum_table(energy_momentum_table):
    tail_by_opening, depth_by_opening, by_momentum, _ = energy_momentum_table
    depth = depth_by_opening * OPENING
    flow = gate_flow(GATE, SECTION, SECTION, depth, tail_by_opening * OPENING, OPENING)
    assert flow.state == DROWNED
    assert _coefficient(flow.discharge, depth) == pytest.approx(by_momentum, abs=6e-5)


@pytest.fixture(params=[row for row in ENERGY_MOMENTUM_ROWS if row[:2] != (6, 16)], ids=_name)
def rows_clear_of_both_limits(request):
    """The rows whose tailwater is 6 % or more above the modular limit by either law."""
    return request.param


def test_swamee_runs_lower(rows_clear_of_both_limits):
    """By 1 to 31 %, the more the deeper drowned: a loose check."""
    tail_by_opening, depth_by_opening, _, by_swamee = rows_clear_of_both_limits
    depth = depth_by_opening * OPENING
    discharge = gate_discharge(GATE, SECTION, SECTION, depth, tail_by_opening * OPENING, OPENING)
    assert 0.68 < by_swamee / _coefficient(discharge, depth) < 1.0


@pytest.fixture(params=[(4, 8, 0.5427), (5, 12, 0.5662)], ids=["y3/a=4 y0/a=8", "y3/a=5 y0/a=12"])
def table_next_to_the_limit(request):
    """Two more values of the table, 0.4 and 0.9 % above the modular limit, where Toeline interpolates (its
    choice).
    """
    return request.param


def test_table_next_to_the_limit(table_next_to_the_limit):
    tail_by_opening, depth_by_opening, by_momentum = table_next_to_the_limit
    depth = depth_by_opening * OPENING
    flow = gate_flow(GATE, SECTION, SECTION, depth, tail_by_opening * OPENING, OPENING)
    assert flow.state == NEAR_MODULAR_LIMIT
    assert _coefficient(flow.discharge, depth) == pytest.approx(by_momentum, rel=0.06)


@pytest.mark.parametrize("opening_by_depth", [0.05, 0.1, 0.2, 0.3])
@pytest.mark.parametrize("tail_by_depth", [0.75, 0.85, 0.95])
def test_closed_form_without_approach_velocity(opening_by_depth, tail_by_depth):
    """C_d = C_c·√(t − √(t² + (y₃/y₀)² − 1)), t = 1 − 2·C_c·(a/y₀)·(1 − C_c·a/y₃). Derived, identical to Bollrich's
    χ·μ.
    """
    depth, opening, tail = 2.0, 2.0 * opening_by_depth, 2.0 * tail_by_depth
    jet = 0.61 * opening
    t = 1.0 - 2.0 * jet / depth * (1.0 - jet / tail)
    closed = 0.61 * math.sqrt(t - math.sqrt(t * t + tail_by_depth**2 - 1.0))
    flow = gate_flow(GATE, rectangle(1e6), SECTION, depth, tail, opening)
    assert flow.state == DROWNED
    assert _coefficient(flow.discharge, depth, opening) == pytest.approx(closed, rel=1e-8)


@pytest.fixture
def textbook_drowned_gate(units):
    """y₀ = 3 m, y₃ = 1.5 m, a = 0.25 m, b = 6 m. Inputs published (textbook companion files, ch. 13, example 13.8).
    Read off Henry's chart C_d = 0.47, Q = 5.41 m³/s (published; ±7 % for a reading from a chart). Energy and
    momentum: Q = 5.597 m³/s, depth over the jet 1.0977 m, limit 1.2456 m (derived).
    """
    section = rectangle(6.0)
    return section, gate_flow(UnderflowGate(6.0, 0.0, 0.0, 0.0), section, section, 3.0, 1.5, 0.25), units(9.81)


def test_textbook_drowned_gate(textbook_drowned_gate):
    section, flow, metric = textbook_drowned_gate
    discharge = metric.discharge_of_source(flow.discharge)
    assert flow.state == DROWNED
    assert discharge == pytest.approx(5.41, rel=0.07)
    assert discharge == pytest.approx(5.597, abs=6e-4)
    assert _coefficient(flow.discharge, 3.0, 0.25, 6.0) == pytest.approx(0.4864, abs=6e-5)
    assert flow.roller_depth == pytest.approx(1.0977, abs=6e-5)
    gate = UnderflowGate(6.0, 0.0, 0.0, 0.0)
    assert modular_limit_depth(gate, section, flow.jet_thickness, flow.free_discharge) == pytest.approx(
        1.2456, abs=6e-5
    )

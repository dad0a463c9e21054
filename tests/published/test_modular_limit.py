"""The tailwater at which a gate ceases to flow free."""

import math

import pytest

from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.underflow_gate import (
    DROWNED,
    FREE,
    UnderflowGate,
    free_jet,
    gate_flow,
    modular_limit_depth,
)

OPENING, WIDTH = 0.4, 5.0
SECTION = rectangle(WIDTH)
RESERVOIR = rectangle(1e6 * WIDTH)


def _limit(gate, approach, depth_by_opening):
    _, jet, discharge, _ = free_jet(gate, approach, depth_by_opening * OPENING, OPENING)
    return modular_limit_depth(gate, SECTION, jet, discharge) / OPENING


@pytest.fixture(
    params=[
        (2, 1.6527, 1.6913),
        (3, 2.1802, 2.1409),
        (4, 2.6210, 2.5307),
        (5, 3.0066, 2.8813),
        (6, 3.3531, 3.2035),
        (8, 3.9647, 3.7867),
        (10, 4.5002, 4.3112),
        (12, 4.9824, 4.7933),
        (16, 5.8350, 5.6660),
        (20, 6.5833, 6.4509),
    ],
    ids=lambda row: f"y0/a={row[0]}",
)
def limit_of_lin_and_of_swamee(request):
    """y₀/a; y_t/a by theory with C_c = 0.61 (derived; the method of Lin, Yen & Tsai 2002, abstract read, and of
    Bollrich); y_t/a after Swamee 1992 (published second-hand). They differ by −2 to +5 %.
    """
    return request.param


def test_limit_by_theory(limit_of_lin_and_of_swamee):
    depth_by_opening, theory, swamee = limit_of_lin_and_of_swamee
    limit = _limit(UnderflowGate(WIDTH, 0.0, 0.0, 0.0), SECTION, depth_by_opening)
    assert limit == pytest.approx(theory, abs=1.5e-4)
    assert -0.025 < limit / swamee - 1.0 < 0.052


def test_state_on_both_sides_of_the_limit(limit_of_lin_and_of_swamee):
    """Six per cent away from the limit, where every published law agrees on the state."""
    depth_by_opening, theory, swamee = limit_of_lin_and_of_swamee
    gate, headwater = UnderflowGate(WIDTH, 0.0, 0.0, 0.0), depth_by_opening * OPENING
    below, above = 0.94 * min(theory, swamee) * OPENING, 1.06 * max(theory, swamee) * OPENING
    assert gate_flow(gate, SECTION, SECTION, headwater, below, OPENING).state == FREE
    assert gate_flow(gate, SECTION, SECTION, headwater, above, OPENING).state == DROWNED


@pytest.fixture(
    params=[
        (0.611, {2: 1.56, 3: 2.13, 4: 2.59, 5: 2.98, 8: 3.96, 10: 4.49}),
        (0.990, {2: 1.57, 3: 2.37, 4: 2.99, 5: 3.52, 8: 4.80, 10: 5.50}),
    ],
    ids=["sharp", "rounded"],
)
def limit_of_iso_13550(request):
    """C_c; h₂/a by H₁/a from (C_c/2)·[√(1 + 16(H₁/(C_c·a) − 1)) − 1]. Published (ISO 13550, legible in part,
    re-derived), evaluated with H₁ = h₁: the approach velocity is left out, as above a wide approach.
    """
    return request.param


def test_limit_of_iso_13550(limit_of_iso_13550):
    contraction, limits = limit_of_iso_13550
    gate = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, contraction=contraction)
    for head_by_opening, limit in limits.items():
        by_formula = 0.5 * contraction * (math.sqrt(1.0 + 16.0 * (head_by_opening / contraction - 1.0)) - 1.0)
        assert _limit(gate, RESERVOIR, head_by_opening) == pytest.approx(by_formula, rel=1e-6)
        assert by_formula == pytest.approx(limit, abs=0.011)


def test_radial_gates_drown_later():
    """Their contraction is weaker (Lin, Yen & Tsai 2002, abstract)."""
    vertical = UnderflowGate(WIDTH, 0.0, 0.0, 0.0)
    radial = UnderflowGate(WIDTH, 0.0, 0.0, 0.0, radius=2.5, pinion_height=2.0)
    for depth_by_opening in (3, 5, 10):
        assert _limit(radial, SECTION, depth_by_opening) > _limit(vertical, SECTION, depth_by_opening)

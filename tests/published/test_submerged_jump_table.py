"""Submerged jumps below gates."""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.hydraulic_jump import sequent_depth
from toeline.hydraulics.submerged_jump import roller_depth, roller_length, submergence

JET, WIDTH = 0.2, 3.0
SECTION = rectangle(WIDTH)


@pytest.fixture(
    params=[
        (3, 0.1, 4.1492, 1.8852, 0.4544, 6.59, 0.3093),
        (3, 0.5, 5.6580, 4.1466, 0.7329, 8.55, 0.3294),
        (5, 0.0, 6.5887, 1.0000, 0.1518, 6.10, 0.4906),
        (5, 0.1, 7.2476, 3.0703, 0.4236, 6.59, 0.5192),
        (5, 0.5, 9.8831, 7.2619, 0.7348, 8.55, 0.4934),
        (5, 1.0, 13.1774, 11.2889, 0.8567, 11.00, 0.4430),
        (8, 1.0, 21.6495, 18.6176, 0.8600, 11.00, 0.5709),
    ],
    ids=lambda row: f"Fr={row[0]} S={row[1]}",
)
def submerged_jump_table(request):
    """Fr₁, S, y_t/y₁, y/y₁, y/y_t, L/y₂, ΔE/E₁. Depths by momentum (derived; Rajaratnam 1967), recomputed; length
    y₂·(6.1 + 4.9 S) from memory (Govinda Rao & Rajaratnam 1963). The share of energy lost first rises, then falls
    with S.
    """
    return request.param


def test_submerged_jump_table(submerged_jump_table):
    froude, submerged, tail_by_jet, over_jet, over_tail, length_by_sequent, loss_share = submerged_jump_table
    unit_discharge = froude * math.sqrt(GRAVITY * JET**3)
    sequent, _ = sequent_depth(SECTION, WIDTH * unit_discharge, JET)
    tail = (1.0 + submerged) * sequent
    roller, _ = roller_depth(SECTION, WIDTH * unit_discharge, WIDTH, JET, tail)
    assert tail / JET == pytest.approx(tail_by_jet, abs=6e-5)
    assert submergence(tail, sequent) == pytest.approx(submerged, abs=1e-12)
    assert roller / JET == pytest.approx(over_jet, abs=1e-4)
    assert roller / tail == pytest.approx(over_tail, abs=6e-5)
    assert roller_length(sequent, submerged) / sequent == pytest.approx(length_by_sequent, abs=6e-3)
    before = roller + unit_discharge**2 / (2.0 * GRAVITY * JET**2)
    after = tail + unit_discharge**2 / (2.0 * GRAVITY * tail**2)
    assert (before - after) / before == pytest.approx(loss_share, abs=6e-5)


@pytest.fixture
def drowned_gate_as_a_submerged_jump(units):
    """The drowned gate of textbook companion files, example 13.8, by energy and momentum: q = 0.93288 m²/s, jet
    0.1525 m, Fr₁ 5.0013, sequent 1.0051 m, S 0.4924, depth over the jet 1.09765 m, length 8.556 m. Derived, two
    routes.
    """
    return units(9.81).discharge(0.93288), 0.1525, 1.5


def test_drowned_gate_as_a_submerged_jump(drowned_gate_as_a_submerged_jump):
    unit_discharge, jet, tail = drowned_gate_as_a_submerged_jump
    section = rectangle(1.0)
    sequent, _ = sequent_depth(section, unit_discharge, jet)
    submerged = submergence(tail, sequent)
    assert unit_discharge / math.sqrt(GRAVITY * jet**3) == pytest.approx(5.0013, abs=1e-4)
    assert sequent == pytest.approx(1.0051, abs=6e-5)
    assert submerged == pytest.approx(0.4924, abs=1e-4)
    assert roller_depth(section, unit_discharge, 1.0, jet, tail)[0] == pytest.approx(1.09765, abs=1e-5)
    assert roller_length(sequent, submerged) == pytest.approx(8.556, abs=1e-3)

"""The classical jump on a level rectangular floor, and the names of its kinds."""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics import hydraulic_jump
from toeline.hydraulics.critical_flow import froude_number, specific_energy
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.hydraulic_jump import energy_loss, jump_kind, sequent_depth

SECTION = rectangle(3.0)


@pytest.fixture(
    params=[
        (1.7, 1.9556, 0.6216, 0.1116, 0.0456),
        (2.0, 2.3723, 0.5474, 0.2723, 0.0908),
        (2.5, 3.0707, 0.4646, 0.7229, 0.1752),
        (3.0, 3.7720, 0.4095, 1.4117, 0.2567),
        (3.5, 4.4749, 0.3697, 2.3442, 0.3290),
        (4.0, 5.1789, 0.3394, 3.5228, 0.3914),
        (5.0, 6.5887, 0.2956, 6.6233, 0.4906),
        (6.0, 8.0000, 0.2652, 10.7188, 0.5641),
        (8.0, 10.8248, 0.2246, 21.9022, 0.6637),
        (9.0, 12.2377, 0.2102, 28.9918, 0.6986),
        (10.0, 13.6510, 0.1983, 37.0807, 0.7271),
    ],
    ids=lambda row: f"Fr={row[0]}",
)
def classical_jump_table(request):
    """Fr₁, y₂/y₁, Fr₂, ΔE/y₁, ΔE/E₁. Bélanger's formulas (published: Chow 1959, ch. 15; Maurer ch. 5), recomputed."""
    return request.param


@pytest.mark.parametrize("toe", [0.02, 0.4])
def test_classical_jump_table(classical_jump_table, toe):
    froude, ratio, froude_after, loss_by_toe, loss_by_energy = classical_jump_table
    discharge = 3.0 * toe * froude * math.sqrt(GRAVITY * toe)
    sequent, _ = sequent_depth(SECTION, discharge, toe)
    loss = energy_loss(SECTION, discharge, toe, sequent)
    assert sequent / toe == pytest.approx(ratio, abs=6e-5)
    assert froude_number(SECTION, discharge, sequent) == pytest.approx(froude_after, abs=6e-5)
    assert loss / toe == pytest.approx(loss_by_toe, abs=6e-5)
    assert loss / specific_energy(SECTION, discharge, toe) == pytest.approx(loss_by_energy, abs=6e-5)


@pytest.fixture(
    params=[
        (1.0, hydraulic_jump.UNDULAR, 1.7),
        (1.7, hydraulic_jump.WEAK, 2.5),
        (2.5, hydraulic_jump.OSCILLATING, 4.5),
        (4.5, hydraulic_jump.STEADY, 9.0),
        (9.0, hydraulic_jump.STRONG, 30.0),
    ],
    ids=["undular", "weak", "oscillating", "steady", "strong"],
)
def bradley_and_peterka_kinds(request):
    """Kinds of jump by Fr₁. Published bounds (Bradley & Peterka 1957; Chow 1959, ch. 15)."""
    return request.param


def test_bradley_and_peterka_kinds(bradley_and_peterka_kinds):
    above, kind, up_to = bradley_and_peterka_kinds
    assert jump_kind(above + 1e-9) == kind
    assert jump_kind(up_to) == kind


@pytest.mark.parametrize("froude", [0.0, 0.3, 1.0])
def test_no_kind_where_there_is_no_jump(froude):
    assert jump_kind(froude) == hydraulic_jump.NO_JUMP

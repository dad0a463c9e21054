"""Lengths of free jumps: the curve of Engineering Monograph 25, and Silvester's constants."""

import math

import pytest

from toeline.hydraulics.hydraulic_jump import (
    LENGTH_GOOD,
    LENGTH_NOT_DEFINED,
    LENGTH_POORLY_KNOWN,
    jump_length,
)

TOE = 0.3


def _belanger(froude: float) -> float:
    return 0.5 * (math.sqrt(1.0 + 8.0 * froude * froude) - 1.0)


@pytest.fixture(
    params=[
        (1.7, 4.00, 3.478, 3.578),
        (2.0, 4.35, 4.110, 4.212),
        (2.5, 4.85, 4.782, 4.877),
        (3.0, 5.28, 5.206, 5.288),
        (3.5, 5.55, 5.497, 5.563),
        (4.0, 5.80, 5.710, 5.757),
        (5.0, 6.00, 6.002, 6.005),
        (6.0, 6.10, 6.193, 6.145),
        (8.0, 6.12, 6.429, 6.257),
        (10.0, 6.10, 6.571, 6.248),
    ],
    ids=lambda row: f"Fr={row[0]}",
)
def engineering_monograph_25(request):
    """Fr₁, then L/y₂ after Peterka's curve (from memory, ±0.05: USBR Engineering Monograph 25, fig. 7; Chow 1959,
    fig. 15-4), after Silvester 1964 for a rectangle and after Hager 1992 (both recomputed from formulas from memory).
    """
    return request.param


def test_engineering_monograph_25(engineering_monograph_25):
    froude, ratio, _, _ = engineering_monograph_25
    sequent = TOE * _belanger(froude)
    length, quality = jump_length(4.0, 0.0, TOE, froude, sequent)
    assert length / sequent == pytest.approx(ratio, abs=0.05)
    assert quality == LENGTH_GOOD


def test_three_length_laws_agree(engineering_monograph_25):
    """Within 2 % for 2.5 ≤ Fr₁ ≤ 6, where laboratories agree; within 15 % at the ends of the range."""
    froude, _, silvester, hager = engineering_monograph_25
    sequent = TOE * _belanger(froude)
    ratio = jump_length(4.0, 0.0, TOE, froude, sequent)[0] / sequent
    doubt = 0.02 if 2.5 <= froude <= 6.0 else 0.15
    assert silvester == pytest.approx(ratio, rel=doubt)
    assert hager == pytest.approx(ratio, rel=doubt)


@pytest.mark.parametrize("froude", [4.0, 6.0, 10.0])
def test_rule_of_six_sequent_depths(froude):
    """L ≈ 6·y₂ for 4 < Fr₁ < 12. Published (Engineering Monograph 25, as quoted in courses); ±5 %."""
    assert jump_length(4.0, 0.0, TOE, froude, 1.0)[0] == pytest.approx(6.0, rel=0.05)


@pytest.fixture(params=[(16, 17.6, 0.905), (8, 23.0, 0.885), (4, 35.0, 0.836)], ids=lambda row: f"k={row[0]}")
def silvester_trapezoids(request):
    """k = b/(z·y₁), σ, Γ of L/y₁ = σ·(Fr₁ − 1)^Γ. From memory (Silvester 1964; French 1985), not read again."""
    return request.param


@pytest.mark.parametrize("froude", [1.7, 3.0, 6.0, 10.0])
def test_silvester_trapezoids(silvester_trapezoids, froude):
    k, factor, power = silvester_trapezoids
    length, quality = jump_length(k * 1.5 * TOE, 1.5, TOE, froude, 1.0)
    assert length / TOE == pytest.approx(factor * (froude - 1.0) ** power, rel=1e-12)
    assert quality == LENGTH_POORLY_KNOWN


@pytest.mark.parametrize("froude", [1.0, 1.69, 10.01, math.inf, math.nan])
def test_no_length_outside_the_curves(froude):
    length, quality = jump_length(4.0, 0.0, TOE, froude, 1.0)
    assert math.isnan(length)
    assert quality == LENGTH_NOT_DEFINED


@pytest.mark.parametrize("bottom_width", [0.0, 3.9 * 1.5 * TOE])
def test_no_length_in_narrow_trapezoids(bottom_width):
    """Silvester's constants end at k = 4; a triangle has k = 0."""
    assert jump_length(bottom_width, 1.5, TOE, 5.0, 1.0)[1] == LENGTH_NOT_DEFINED

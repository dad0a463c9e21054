"""Contraction of the jet under a gate."""

import math

import pytest

from toeline.hydraulics.underflow_gate import UnderflowGate, contraction_coefficient


@pytest.fixture(params=[0.1, 0.2, 0.3, 0.4, 0.5])
def vertical_sharp_edge(request):
    """a/E. Practice value 0.61 (Henderson 1966, quoted second-hand); bounds 0.598 to 0.611 for a/E up to 0.5
    (Benjamin 1956, Fangmeier & Strelkoff 1968, the range quoted second-hand).
    """
    return request.param


def test_vertical_sharp_edge(vertical_sharp_edge):
    gate = UnderflowGate(4.0, 0.0, 0.0, 0.0)
    coefficient = contraction_coefficient(gate, vertical_sharp_edge * 2.0, 2.0)
    assert coefficient == 0.61
    assert 0.598 <= coefficient <= 0.611


@pytest.fixture(
    params=[
        (20, 0.851, 0.901),
        (30, 0.790, 0.844),
        (45, 0.715, 0.758),
        (60, 0.660, 0.683),
        (75, 0.625, 0.632),
        (90, 0.610, 0.616),
    ],
    ids=lambda row: f"{row[0]}°",
)
def toch_radial_gates(request):
    """Lip angle, C_c after Toch 1955 (fit by Henderson 1966; from memory, ±5 %), and after Clemmens, Strelkoff &
    Replogle 2003 (cubic from memory, not sure). The two differ by 6 % at 20° to 45°: not to be held tighter than ±7
    %.
    """
    return request.param


def test_toch_radial_gates(toch_radial_gates):
    degrees, toch, cubic = toch_radial_gates
    radius, opening = 2.0, 0.1
    pinion = opening + radius * math.cos(math.radians(degrees))
    gate = UnderflowGate(4.0, 0.0, 0.0, 0.0, radius=radius, pinion_height=pinion)
    coefficient = contraction_coefficient(gate, opening, 10.0)
    assert coefficient == pytest.approx(toch, abs=6e-4)
    assert coefficient == pytest.approx(cubic, rel=0.07)


def test_radial_lip_beyond_the_vertical_counts_as_vertical():
    gate = UnderflowGate(4.0, 0.0, 0.0, 0.0, radius=2.0, pinion_height=0.5)
    assert contraction_coefficient(gate, 0.6, 10.0) == 0.61


@pytest.fixture(
    params=[(0.6, 0.6621), (0.7, 0.6867), (0.8, 0.7223), (0.9, 0.7806)],
    ids=lambda row: f"a/y={row[0]}",
)
def slot_theory(request):
    """a/y₀ and C_c of a slot without gravity (von Mises; derived, matches his table to 0.06 %)."""
    return request.param


def test_contraction_vanishes_towards_the_surface(slot_theory):
    """The choice beyond a/E = 0.5 starts from 0.61 and ends at 1 like slot theory, and stays within 0.19 of it."""
    opening_by_head, slot = slot_theory
    gate = UnderflowGate(4.0, 0.0, 0.0, 0.0)
    coefficient = contraction_coefficient(gate, opening_by_head, 1.0)
    assert 0.61 < coefficient < 1.0
    assert coefficient == pytest.approx(slot, abs=0.19)


def test_no_contraction_of_a_lip_above_the_energy_level():
    gate = UnderflowGate(4.0, 0.0, 0.0, 0.0)
    assert contraction_coefficient(gate, 2.0, 2.0) == 1.0
    assert contraction_coefficient(gate, 3.0, 2.0) == 1.0

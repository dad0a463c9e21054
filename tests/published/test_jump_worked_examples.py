"""Hydraulic jumps worked out in textbooks and courses."""

import pytest

from toeline.constants import WATER_DENSITY
from toeline.hydraulics.critical_flow import critical_depth, froude_number, specific_energy
from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.hydraulic_jump import energy_loss, sequent_depth


@pytest.fixture
def rectangle_of_ten_metres(units):
    """Rectangle b = 10 m, y₁ = 0.8 m, V₁ = 7 m/s. Inputs published (textbook companion files, ch. 13, example
    13.7); printed results from memory (taken to be Çengel & Cimbala). The book rounds y₂ first: its loss and power
    are 1 % low.
    """
    metric = units(9.81)
    return rectangle(10.0), metric.discharge(10.0 * 0.8 * 7.0), 0.8


def test_rectangle_of_ten_metres(rectangle_of_ten_metres):
    section, discharge, toe = rectangle_of_ten_metres
    sequent, _ = sequent_depth(section, discharge, toe)
    loss = energy_loss(section, discharge, toe, sequent)
    assert froude_number(section, discharge, toe) == pytest.approx(2.50, abs=0.005)
    assert sequent == pytest.approx(2.46, abs=0.006)
    assert froude_number(section, discharge, sequent) == pytest.approx(0.464, abs=0.0015)
    assert loss == pytest.approx(0.572, rel=0.01)
    assert loss / specific_energy(section, discharge, toe) == pytest.approx(0.175, abs=0.0005)
    assert WATER_DENSITY * 9.81 * 56.0 * loss == pytest.approx(314e3, rel=0.012)


@pytest.fixture
def small_trapezoid(units):
    """Trapezoid b = 0.5 m, z = 1, Q = 0.2 m³/s, y₁ = 0.1 m. Published (Maurer, open textbook, example 5.9, g =
    9.8067); the recomputed values differ by up to 0.06 %, the power by 0.12 % (it stands on a unit weight of 9.79
    kN/m³).
    """
    return trapezoid(0.5, 1.0), units(9.8067).discharge(0.2), 0.1


def test_small_trapezoid(small_trapezoid):
    section, discharge, toe = small_trapezoid
    sequent, _ = sequent_depth(section, discharge, toe)
    loss = energy_loss(section, discharge, toe, sequent)
    assert critical_depth(section, discharge)[0] == pytest.approx(0.217704, rel=1e-4)
    assert sequent == pytest.approx(0.3941, rel=2e-4)
    assert froude_number(section, discharge, toe) == pytest.approx(3.6357, rel=3e-4)
    assert froude_number(section, discharge, sequent) == pytest.approx(0.34655, rel=3e-4)
    assert specific_energy(section, discharge, toe) == pytest.approx(0.66651, rel=4e-4)
    assert specific_energy(section, discharge, sequent) == pytest.approx(0.41053, rel=4e-4)
    assert loss == pytest.approx(0.25598, rel=7e-4)
    assert WATER_DENSITY * 9.79 * 0.2 * loss == pytest.approx(501.4, rel=1e-3)


@pytest.fixture(
    params=[
        # section, discharge ft³/s, toe ft, sequent ft, loss ft; published (open course CE4353, exercise after Sturm)
        (trapezoid(20.0, 2.0), 1100.0, 1.35, 8.482, 12.684),
        # published (same course)
        (rectangle(20.0), 2500.0, 3.5, 14.99, 7.236),
    ],
    ids=["trapezoid", "rectangle"],
)
def course_exercise_in_feet(request):
    return request.param


def test_course_exercise_in_feet(course_exercise_in_feet, units):
    section, discharge, toe, sequent_in_print, loss_in_print = course_exercise_in_feet
    discharge = units(32.2).discharge(discharge)
    sequent, _ = sequent_depth(section, discharge, toe)
    assert sequent == pytest.approx(sequent_in_print, rel=4e-4)
    assert energy_loss(section, discharge, toe, sequent) == pytest.approx(loss_in_print, rel=6e-4)


@pytest.fixture(
    params=[(3.0, 5.0, 0.568, 2.70, 1.53), (2.0, 5.0, 0.434, 2.70, 1.17), (2.0, 4.0, 0.467, 2.37, 1.11)],
    ids=["q=3 Fr²=5", "q=2 Fr²=5", "q=2 Fr²=4"],
)
def examination_of_three_years(request):
    """q m²/s, Fr₁², y₁ m, y₂/y₁, y₂ m. Published (open-channel examination, three years' solutions), three digits."""
    return request.param


def test_examination_of_three_years(examination_of_three_years, units):
    unit_discharge, froude_squared, toe_in_print, ratio_in_print, sequent_in_print = examination_of_three_years
    toe = (unit_discharge**2 / (9.81 * froude_squared)) ** (1.0 / 3.0)
    sequent, _ = sequent_depth(rectangle(1.0), units(9.81).discharge(unit_discharge), toe)
    assert toe == pytest.approx(toe_in_print, abs=5e-4)
    assert sequent / toe == pytest.approx(ratio_in_print, abs=0.005)
    assert sequent == pytest.approx(sequent_in_print, abs=0.006)

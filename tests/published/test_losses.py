"""Seepage and evaporation as rates in the units of the trade."""

import pytest

from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.water_losses import loss_per_length
from toeline.units import UnitSystem, parse_quantity

MILE, FOOT = 1609.344, 0.3048
CUBIC_FOOT = FOOT**3


def rate(text: str) -> float:
    return parse_quantity(text, "rate of loss", UnitSystem.metric)


def test_cusecs_per_million_square_feet():
    """1 cusec per 10⁶ ft² of wetted area is 0.3048 m³/s per 10⁶ m²; Bellasis, Irrigation Works 1913, gives about 9 to
    10 of them for sandy main canals.
    """
    one = CUBIC_FOOT / (1e6 * FOOT**2)
    assert one * 1e6 == pytest.approx(0.3048, rel=1e-12)
    section = rectangle(10.0)
    assert loss_per_length(section, 2.0, one, 0.0)[0] * 1e6 / 14.0 == pytest.approx(0.3048, rel=1e-12)


def test_evaporation_from_eleven_metres_of_surface():
    """6 mm/day on 11 m of top width: 0.000764 m³/s a kilometre (hand evaluation of E·T·L)."""
    section = trapezoid(5.0, 1.5)
    assert 1000.0 * loss_per_length(section, 2.0, 0.0, rate("6 mm/day"))[0] == pytest.approx(0.000764, abs=5e-7)


def test_moritz_example_as_a_rate_through_the_wetted_perimeter():
    """Moritz (Bureau of Reclamation), S = 0.2·C·√(Q/V) ft³/s a mile with C = 0.66 ft/day, Q = 100 ft³/s, V = 2 ft/s:
    0.9334 ft³/s a mile (formula from memory, recomputed). His 0.2·√A stands for a wetted perimeter: of the deeper
    rectangle with that area and perimeter the rate C gives the same.
    """
    area = 50.0
    perimeter = 0.2 * area**0.5 * 86_400.0 / 5280.0
    depth = 0.25 * (perimeter + (perimeter**2 - 8.0 * area) ** 0.5)
    width = perimeter - 2.0 * depth
    lost = loss_per_length(rectangle(width * FOOT), depth * FOOT, rate("0.66 ft/day"), 0.0)[0]
    assert width * depth == pytest.approx(area, rel=1e-9)
    assert lost * MILE / CUBIC_FOOT == pytest.approx(0.9334, abs=5e-5)

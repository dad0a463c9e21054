"""What leaves the last node of a canal."""

import numpy as np
import pytest

from toeline.hydraulics.canal_tail import free_overfall_discharge, rating_discharge
from toeline.hydraulics.critical_flow import froude_number
from toeline.hydraulics.cross_section import circle, rectangle, trapezoid

LEVELS, DISCHARGES = np.array([10.0, 10.5, 11.0, 12.0]), np.array([0.0, 1.0, 3.0, 9.0])


@pytest.mark.parametrize("section", [rectangle(3.0), trapezoid(2.0, 1.5, alpha=1.1), circle(2.0)])
@pytest.mark.parametrize("depth", [0.01, 0.4, 1.5])
def test_flow_at_the_brink_is_critical(section, depth):
    discharge = free_overfall_discharge(section, depth)
    assert froude_number(section, discharge, depth) == pytest.approx(1.0, rel=1e-12)


@pytest.mark.parametrize("depth", [0.0, -1.0])
def test_nothing_leaves_a_dry_brink(depth):
    assert free_overfall_discharge(rectangle(3.0), depth) == 0.0


@pytest.mark.parametrize(
    ("level", "discharge"),
    [(10.0, 0.0), (10.25, 0.5), (10.5, 1.0), (10.9, 2.6), (11.5, 6.0), (12.0, 9.0), (13.0, 15.0), (9.0, 0.0)],
)
def test_rating(level, discharge):
    """Linear between its rows and beyond its last one; never negative."""
    assert rating_discharge(LEVELS, DISCHARGES, level) == pytest.approx(discharge, abs=1e-12)

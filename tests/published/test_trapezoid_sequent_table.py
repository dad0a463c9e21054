"""Sequent depths in trapezoids."""

import math

import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import area, rectangle, top_width, trapezoid
from toeline.hydraulics.hydraulic_jump import sequent_depth

TOE = 0.25


@pytest.fixture(
    params=[
        (2.0, {2: 2.051, 4: 2.165, 8: 2.253, 16: 2.308, math.inf: 2.372}),
        (3.0, {2: 2.963, 4: 3.215, 8: 3.430, 16: 3.579, math.inf: 3.772}),
        (4.0, {2: 3.785, 4: 4.179, 8: 4.536, 16: 4.803, math.inf: 5.179}),
        (6.0, {2: 5.254, 4: 5.926, 8: 6.585, 16: 7.125, math.inf: 8.000}),
        (8.0, {2: 6.569, 4: 7.505, 8: 8.468, 16: 9.307, math.inf: 10.825}),
    ],
    ids=lambda row: f"Fr={row[0]}",
)
def trapezoid_sequent_table(request):
    """y₂/y₁ by Fr₁ (with the hydraulic depth) and k = b/(z·y₁); k = ∞ is the rectangle. Derived from the momentum
    function by two routes, recomputed.
    """
    return request.param


@pytest.mark.parametrize("side_slope", [0.5, 2.0])
def test_trapezoid_sequent_table(trapezoid_sequent_table, side_slope):
    froude, ratios = trapezoid_sequent_table
    for k, ratio in ratios.items():
        section = rectangle(1.0) if math.isinf(k) else trapezoid(k * side_slope * TOE, side_slope)
        flow_area = area(section, TOE)
        discharge = froude * flow_area * math.sqrt(GRAVITY * flow_area / top_width(section, TOE))
        assert sequent_depth(section, discharge, TOE)[0] / TOE == pytest.approx(ratio, abs=6e-4), k

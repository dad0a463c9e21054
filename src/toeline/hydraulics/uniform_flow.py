"""Friction after Manning, normal depth, and the celerity of a small kinematic wave."""

import math

from toeline.hydraulics import status
from toeline.hydraulics.cross_section import CIRCLE, OWN, geometry
from toeline.hydraulics.kernel import kernel

FULLEST = 0.9381813
"""Depth over diameter at which a circle carries the most (Manning)."""


@kernel
def conveyance(section, roughness, depth):
    """Conveyance K = A·R^(2/3)/n [m³/s]; `roughness` is Manning's n [s/m^(1/3)] (Manning 1891; Chow 1959, ch. 5)."""
    area, _, perimeter, _ = geometry(section, depth)
    if area <= 0.0:
        return 0.0
    return area * (area / perimeter) ** (2.0 / 3.0) / roughness


@kernel
def friction_slope(section, roughness, discharge, depth):
    """Friction slope S_f = Q|Q|/K² [1]; infinite where a discharge has no depth."""
    if discharge == 0.0:
        return 0.0
    k = conveyance(section, roughness, depth)
    return discharge * abs(discharge) / (k * k) if k > 0.0 else math.copysign(math.inf, discharge)


@kernel
def normal_depth(section, roughness, slope, discharge):
    """Depth [m] of uniform flow, and a status; the lowest one where a closed section has two.

    NO_SOLUTION (and NaN) where the slope or the discharge is not positive, or a circle cannot carry it part full.
    Newton's method in logarithms.
    """
    if slope <= 0.0 or discharge <= 0.0:
        return math.nan, status.NO_SOLUTION
    wanted = math.log(discharge * roughness / math.sqrt(slope))
    highest = FULLEST * section[OWN] if section[0] == CIRCLE else 1e4
    if conveyance(section, roughness, highest) * math.sqrt(slope) < discharge:
        return math.nan, status.NO_SOLUTION
    y = min(0.5, 0.5 * highest)
    for _ in range(100):
        area, width, perimeter, perimeter_slope = geometry(section, y)
        gap = (5.0 * math.log(area) - 2.0 * math.log(perimeter)) / 3.0 - wanted
        growth = y * (5.0 * width / area - 2.0 * perimeter_slope / perimeter) / 3.0
        step = -gap / max(growth, 0.2)
        y = min(y * math.exp(min(max(step, -1.5), 1.5)), highest)
        if abs(step) < 1e-13:
            return y, status.OK
    return (y, status.OK) if abs(gap) < 1e-9 else (math.nan, status.NOT_CONVERGED)


@kernel
def kinematic_celerity(section, discharge, depth):
    """Celerity dQ/dA [m/s] of a small slow wave on uniform flow: V·(5/3 − (2A/3TP)·dP/dy) (Chow 1959, ch. 18)."""
    area, width, perimeter, perimeter_slope = geometry(section, depth)
    return discharge / area * (5.0 - 2.0 * area * perimeter_slope / (width * perimeter)) / 3.0

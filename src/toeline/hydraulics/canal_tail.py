"""How water leaves the last node of a canal that no gate closes."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import ALPHA, geometry
from toeline.hydraulics.kernel import kernel


@kernel
def free_overfall_discharge(section, depth):
    """Discharge [m³/s] over a free fall: critical flow at the brink, Q = A·√(gA/(αT))."""
    if depth <= 0.0:
        return 0.0
    area, width, _, _ = geometry(section, depth)
    return area * math.sqrt(GRAVITY * area / (section[ALPHA] * width))


@kernel
def rating_discharge(levels, discharges, level):
    """Discharge of a rating [m³/s], linear between its rows and beyond both ends; not below zero."""
    k = 1
    while k < levels.size - 1 and level > levels[k]:
        k += 1
    slope = (discharges[k] - discharges[k - 1]) / (levels[k] - levels[k - 1])
    return max(discharges[k - 1] + slope * (level - levels[k - 1]), 0.0)


@kernel
def rating_level(levels, discharges, discharge):
    """Level [m] at which a rating passes a discharge: the inverse of `rating_discharge`."""
    k = 1
    while k < levels.size - 1 and discharge > discharges[k]:
        k += 1
    slope = (levels[k] - levels[k - 1]) / (discharges[k] - discharges[k - 1])
    return levels[k - 1] + slope * (discharge - discharges[k - 1])

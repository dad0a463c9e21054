"""What an offtake takes from its pool."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.weir import weir_discharge_one_way

DEMAND, ORIFICE, WEIR = 0, 1, 2

TAPER_DEPTH = 0.05
"""Water over the sill [m] below which a delivery fades to nothing (choice)."""


@kernel
def taper(head):
    """Share of a delivery that is given at a head over the sill [m]: smooth from 0 at the sill to 1 at 5 cm."""
    s = min(max(head / TAPER_DEPTH, 0.0), 1.0)
    return s * s * (3.0 - 2.0 * s)


@kernel
def orifice_discharge(coefficient, width, opening, head):
    """Free discharge of a rectangular orifice [m³/s] with the given head over its sill [m].

    C·b·a·√(2g(h − a/2)) with the head to the middle of the opening; while the opening is not covered by half its height
    more, the water passes as over a sill of the same discharge at that head.
    """
    if head <= 0.0 or opening <= 0.0:
        return 0.0
    full = 1.5 * opening
    if head >= full:
        return coefficient * width * opening * math.sqrt(2.0 * GRAVITY * (head - 0.5 * opening))
    return coefficient * width * opening * math.sqrt(2.0 * GRAVITY * opening) * (head / full) ** 1.5


@kernel
def offtake_discharge(kind, demand, sill_level, width, opening, coefficient, water_level):
    """Discharge [m³/s] that an offtake takes at a water level; every kind fades out over the last 5 cm above its
    sill.
    """
    head = water_level - sill_level
    if kind == DEMAND:
        return demand * taper(head)
    if kind == ORIFICE:
        return orifice_discharge(coefficient, width, opening, head) * taper(head)
    return weir_discharge_one_way(coefficient, width, sill_level, water_level, -math.inf) * taper(head)

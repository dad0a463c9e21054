"""Overflow weirs, free and drowned."""

import math

from toeline.hydraulics.kernel import kernel

LINEAR_HEAD = 0.01
"""Difference of level [m] over a drowned side weir below which its discharge falls linearly to zero (choice)."""


@kernel
def drowned_weir_factor(upstream_head, downstream_head):
    """Share of its free discharge that a drowned weir passes: (1 − (h₂/h₁)^1.5)^0.385 (Villemonte 1947)."""
    if downstream_head <= 0.0:
        return 1.0
    if downstream_head >= upstream_head:
        return 0.0
    return (1.0 - (downstream_head / upstream_head) ** 1.5) ** 0.385


@kernel
def weir_discharge(coefficient, width, crest_level, upstream_level, downstream_level):
    """Discharge over a weir [m³/s]: C·b·h^1.5, drowned after Villemonte 1947; negative where the lower side is higher.

    `coefficient` in m^0.5/s (about 1.7 for a broad or a leaf crest), `width` m, levels m. `-inf` for an open fall.
    """
    if downstream_level > upstream_level:
        return -weir_discharge_one_way(coefficient, width, crest_level, downstream_level, upstream_level)
    return weir_discharge_one_way(coefficient, width, crest_level, upstream_level, downstream_level)


@kernel
def weir_discharge_one_way(coefficient, width, crest_level, upstream_level, downstream_level):
    """`weir_discharge` with the upstream level not below the downstream one."""
    head = upstream_level - crest_level
    if head <= 0.0:
        return 0.0
    factor = drowned_weir_factor(head, downstream_level - crest_level)
    return coefficient * width * head * math.sqrt(head) * factor


@kernel
def side_weir_discharge(coefficient, length, crest_level, water_level, outside_level):
    """Discharge over a side weir out of a canal [m³/s]: C·L·h^1.5 with the level beside its middle, drowned after
    Villemonte 1947; none comes back where the outside level is higher.

    `coefficient` in m^0.5/s, `length` of the crest in m, levels in m, `-inf` for an open fall. Over the last centimetre
    between the two levels the discharge is that of one centimetre, scaled linearly to zero (choice).
    """
    fall = water_level - outside_level
    if fall <= 0.0:
        return 0.0
    lowered = min(outside_level, water_level - LINEAR_HEAD)
    full = weir_discharge_one_way(coefficient, length, crest_level, water_level, lowered)
    return full * min(fall / LINEAR_HEAD, 1.0)

"""Overflow weirs, free and drowned."""

import math

from toeline.hydraulics.kernel import kernel


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

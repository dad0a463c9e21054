"""Discharge of an underflow gate: one law, continuous from closed through free, drowned, clear of water and overtopped.

Depths are counted from the downstream floor unless they are said to be over the sill. The law solves its own approach
velocity, so that the discharge is a function of the two levels and the opening alone.
"""

import math
from typing import NamedTuple

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import BETA, geometry, static_moment
from toeline.hydraulics.drowned_gate import LIP_CONTACT, drowned_discharge, drowned_slopes, jet_width
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.weir import weir_discharge_one_way

CLOSED, FREE, NEAR_MODULAR_LIMIT, DROWNED, CLEAR_OF_WATER, CLEAR_AND_DROWNED, OVERTOPPED, REVERSE = range(8)

(
    QUALITY_GOOD,
    QUALITY_NEAR_LIMIT,
    QUALITY_LIP_NEAR_SURFACE,
    QUALITY_VERY_DROWNED,
    QUALITY_REVERSE,
    QUALITY_UNEVEN_BAYS,
) = range(6)

SHARP_EDGE_CONTRACTION = 0.61
BLEND = 0.025
"""Half width of the blended range about the modular limit, in tail depths (choice)."""
LINEAR_HEAD = 0.01
"""Head [m] below which the discharge falls linearly to zero (choice)."""
VERY_DROWNED = 0.95
"""Tailwater over headwater, both above the sill, from which the discharge of a drowned gate is poorly known."""
LEAST_HEAD = 1e-6
"""Head over the sill [m] below which nothing passes."""
LEAST_OPENING = 1e-9
"""Opening [m] below which nothing passes."""
APPROACH_PASSES = 4
LEVEL_NUDGE = 1e-6
"""Step [m] of finite differences of discharges to levels."""


class UnderflowGate(NamedTuple):
    """A gate as its law sees it; all floats, SI."""

    width: float  # m, all bays together
    sill_level: float  # m above datum
    floor_level: float  # m above datum, downstream floor, not above the sill
    upstream_bed_level: float  # m above datum, not above the sill
    contraction: float = SHARP_EDGE_CONTRACTION  # of a vertical lip; ignored for a radial gate
    radius: float = 0.0  # m, of a radial gate; 0 for a vertical one
    pinion_height: float = 0.0  # m above the sill
    discharge_factor: float = 1.0  # site calibration
    leaf_height: float = math.inf  # m from lip to top; inf where the leaf cannot be overtopped
    leaf_weir_coefficient: float = 1.7  # m^0.5/s
    leakage: float = 0.0  # m³/s under 1 m of head


class GateFlow(NamedTuple):
    """What passes a gate, and the jet that it makes."""

    discharge: float  # m³/s, signed, leaf and leakage included
    underflow: float  # m³/s, below the lip
    free_discharge: float  # m³/s, underflow with the tailwater out of the way
    jet_thickness: float  # m over the sill
    energy_head: float  # m, upstream, over the sill, of the free discharge
    roller_depth: float  # m over the floor; NaN unless drowned
    modular_limit_depth: float  # m over the floor: tail depth at which the roller reaches the jet; NaN if not asked for
    state: int
    quality: int


DISCHARGE_AGREES, OPENING_AGREES = 1e-14, 1e-15
"""Relative difference of discharge, and width of the bracket [m], at which the search for an opening ends."""


@kernel
def contraction_coefficient(gate, opening, energy_head):
    """Jet thickness over opening [1].

    Vertical: the gate's own value (0.61 sharp edged, Henderson 1966). Radial: 1 − 0.75t + 0.36t², t = θ/90° (Toch 1955,
    fit by Henderson 1966). From a lip at half the energy head on it rises to 1 at the full head (choice).
    """
    base = gate.contraction
    if gate.radius > 0.0:
        cosine = (gate.pinion_height - opening) / gate.radius
        t = math.acos(min(max(cosine, -1.0), 1.0)) / (0.5 * math.pi)
        base = 1.0 - 0.75 * t + 0.36 * t * t if t < 1.0 else SHARP_EDGE_CONTRACTION
    if energy_head <= opening:
        return 1.0
    excess = (opening / energy_head - LIP_CONTACT) / (1.0 - LIP_CONTACT)
    return base if excess <= 0.0 else base + (1.0 - base) * excess * excess


@kernel
def free_jet(gate, upstream_section, headwater_level, opening):
    """Energy head over the sill [m], jet thickness [m], discharge [m³/s] and lip thickness C_c·a [m] of free flow.

    Q = φ·b·h·√(2g(E − h)), h = min(C_c·a, ⅔E): past ⅔E the gate is clear of water and the flow critical over the sill.
    """
    head = headwater_level - gate.sill_level
    if head <= LEAST_HEAD or opening <= LEAST_OPENING:
        return max(head, 0.0), 0.0, 0.0, 0.0
    width = jet_width(gate)
    share = width / geometry(upstream_section, headwater_level - gate.upstream_bed_level)[0]
    energy = head
    for _ in range(APPROACH_PASSES):
        before = energy
        energy = min(max(_with_approach(gate, head, before, opening, share), head), 1.5 * head)
        if energy == before:
            break
    lip = contraction_coefficient(gate, opening, energy) * opening
    jet = min(lip, energy * 2.0 / 3.0)
    return energy, jet, width * jet * math.sqrt(2.0 * GRAVITY * (energy - jet)), lip


@kernel
def _with_approach(gate, head, energy, opening, share):
    """A better energy head [m] of free flow: head and velocity head of the approach; `share` = φ·b/A upstream."""
    jet = contraction_coefficient(gate, opening, energy) * opening
    if jet < energy * 2.0 / 3.0:
        return jet + (head - jet) / max(1.0 - (share * jet) ** 2, 0.05)
    factor = 4.0 / 27.0 * share * share * energy * energy
    return energy - (energy - head - factor * energy) / max(1.0 - 3.0 * factor, 0.05)


@kernel
def modular_limit_depth(gate, downstream_section, jet, discharge):
    """Tail depth over the floor [m] at which the roller just reaches a free jet of the given thickness: the modular
    limit.
    """
    surface = jet + gate.sill_level - gate.floor_level
    if discharge <= 0.0 or jet <= 0.0:
        return surface
    flux = downstream_section[BETA] * discharge * discharge / GRAVITY
    force = static_moment(downstream_section, surface) + flux / (jet_width(gate) * jet)
    y = surface
    while not _pushes_back(downstream_section, flux, force, y):
        y *= 1.5
    return _limit_from_above(downstream_section, flux, force, y)


@kernel
def _is_subcritical(section, flux, depth):
    area, width, _, _ = geometry(section, depth)
    return flux * width < area * area * area


@kernel
def _pushes_back(section, flux, force, depth):
    """Whether a tail depth is subcritical and has at least the given force."""
    area, width, _, _ = geometry(section, depth)
    return flux * width < area * area * area and static_moment(section, depth) + flux / area >= force


@kernel
def _limit_from_above(section, flux, force, start):
    """Newton from a subcritical depth whose force is not below the wanted one; the force is convex there."""
    y = start
    for _ in range(60):
        area, width, _, _ = geometry(section, y)
        step = (static_moment(section, y) + flux / area - force) / (area - flux * width / (area * area))
        if step >= y or not _is_subcritical(section, flux, y - step):
            break
        y -= step
        if step < 1e-12 * start:
            break
    return y


@kernel
def _underflow_one_way(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening):
    """Flow below the lip with the headwater higher than the tailwater by at least `LINEAR_HEAD`."""
    energy, jet, free, lip = free_jet(gate, upstream_section, headwater_level, opening)
    state = CLEAR_OF_WATER if jet < lip or opening <= 0.0 else FREE
    tail_depth, step = tailwater_level - gate.floor_level, gate.sill_level - gate.floor_level
    if free <= 0.0 or tail_depth <= 0.0:
        return GateFlow(free, free, free, jet, energy, math.nan, math.nan, state, QUALITY_GOOD)
    flux = downstream_section[BETA] * free * free / GRAVITY
    force = static_moment(downstream_section, jet + step) + flux / (jet_width(gate) * jet)
    drowned = _pushes_back(downstream_section, flux, force, tail_depth / (1.0 + BLEND))
    if not drowned and not _pushes_back(downstream_section, flux, force, tail_depth / (1.0 - BLEND)):
        return GateFlow(free, free, free, jet, energy, math.nan, math.nan, state, QUALITY_GOOD)
    head_depth = headwater_level - gate.floor_level
    approach = (energy - (headwater_level - gate.sill_level)) / (free * free)
    limit, depth = math.nan, tail_depth
    if not drowned:
        limit = _limit_from_above(downstream_section, flux, force, tail_depth / (1.0 - BLEND))
        depth = min((1.0 + BLEND) * limit, energy + step)
    q, roller = drowned_discharge(gate, downstream_section, head_depth, depth, energy, opening, lip, approach)
    q = min(q, free)
    if not drowned:
        share = (tail_depth - (1.0 - BLEND) * limit) / (depth - (1.0 - BLEND) * limit)
        q = free + (q - free) * min(max(share, 0.0), 1.0)
        return GateFlow(q, q, free, jet, energy, math.nan, limit, NEAR_MODULAR_LIMIT, QUALITY_NEAR_LIMIT)
    if state == CLEAR_OF_WATER:
        return GateFlow(q, q, free, min(lip, roller - step), energy, roller, math.nan, CLEAR_AND_DROWNED, QUALITY_GOOD)
    return GateFlow(q, q, free, jet, energy, roller, math.nan, DROWNED, QUALITY_GOOD)


@kernel
def _underflow(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening):
    """`_underflow_one_way`, scaled linearly to zero over the last centimetre of head."""
    head = headwater_level - tailwater_level
    lowered = min(tailwater_level, headwater_level - LINEAR_HEAD)
    flow = _underflow_one_way(gate, upstream_section, downstream_section, headwater_level, lowered, opening)
    if head >= LINEAR_HEAD:
        return flow
    q = flow.discharge * max(head, 0.0) / LINEAR_HEAD
    return GateFlow(
        q, q, flow.free_discharge, flow.jet_thickness, flow.energy_head, flow.roller_depth,
        flow.modular_limit_depth, flow.state, flow.quality,
    )  # fmt: skip


@kernel
def reversed_gate(gate):
    """The gate seen from the other side: no step, sides exchanged."""
    return UnderflowGate(
        gate.width, gate.sill_level, gate.sill_level, gate.floor_level, gate.contraction, gate.radius,
        gate.pinion_height, gate.discharge_factor, gate.leaf_height, gate.leaf_weir_coefficient, gate.leakage,
    )  # fmt: skip


@kernel
def gate_flow(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening):
    """Everything that passes a gate, as a `GateFlow`.

    Levels in m above datum, opening in m above the sill. Free flow by energy; drowned flow by energy to the jet and
    momentum below it (Henry 1950; Henderson 1966, ch. 6); linear between 0.975 and 1.025 of the modular limit (choice);
    water above the leaf by the weir formula, drowned after Villemonte 1947. The state says which; the quality says
    where the discharge is poorly known: near the limit, lip near the surface (a > E/2), tailwater ≥ 0.95 of headwater,
    reverse.
    """
    sign, law, above, below = 1.0, gate, upstream_section, downstream_section
    if tailwater_level > headwater_level:
        sign, law, above, below = -1.0, reversed_gate(gate), downstream_section, upstream_section
    high, low = max(headwater_level, tailwater_level), min(headwater_level, tailwater_level)
    flow = _underflow(law, above, below, high, low, opening)
    crest = gate.sill_level + opening + gate.leaf_height
    over = sign * _over_leaf(gate, crest, high, low)
    through = _leakage(gate, headwater_level, tailwater_level)
    state = _state(flow.state, opening, sign, over)
    quality = _quality(gate, flow, headwater_level, tailwater_level, opening, sign)
    return GateFlow(
        sign * flow.discharge + over + through, sign * flow.discharge, flow.free_discharge, flow.jet_thickness,
        flow.energy_head, flow.roller_depth, flow.modular_limit_depth, state, quality,
    )  # fmt: skip


@kernel
def gate_discharge(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening):
    """Discharge of a gate [m³/s], signed; see `gate_flow`."""
    return gate_flow(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening).discharge


@kernel
def discharge_and_slopes(gate, upstream_section, downstream_section, headwater_level, tailwater_level, opening):
    """Discharge of a gate [m³/s] and its derivatives to headwater and tailwater level [m²/s].

    Those of a jet below a lip clear of the surface, free or drowned, by its own equations; all others by differences
    over a micrometre. The law never falls with the headwater nor rises with the tailwater; what rounding makes of that
    is left out.
    """
    up, down = headwater_level, tailwater_level
    flow = gate_flow(gate, upstream_section, downstream_section, up, down, opening)
    if (flow.state != FREE and flow.state != DROWNED) or up - down < LINEAR_HEAD or _lip_is_near(flow, opening):
        above = gate_discharge(gate, upstream_section, downstream_section, up + LEVEL_NUDGE, down, opening)
        below = gate_discharge(gate, upstream_section, downstream_section, up, down + LEVEL_NUDGE, opening)
        by_up, by_down = (above - flow.discharge) / LEVEL_NUDGE, (below - flow.discharge) / LEVEL_NUDGE
        return flow.discharge, max(by_up, 0.0), min(by_down, 0.0)
    by_up, by_down = _jet_slopes(gate, upstream_section, downstream_section, up, down, flow)
    if gate.leakage > 0.0:
        leaks = _leakage(gate, up, down)
        by_up += (_leakage(gate, up + LEVEL_NUDGE, down) - leaks) / LEVEL_NUDGE
        by_down += (_leakage(gate, up, down + LEVEL_NUDGE) - leaks) / LEVEL_NUDGE
    return flow.discharge, max(by_up, 0.0), min(by_down, 0.0)


@kernel
def _jet_slopes(gate, upstream_section, downstream_section, up, down, flow):
    """Derivatives of the discharge of a free or drowned jet to the level above and below [m²/s]."""
    tail_depth, lip = down - gate.floor_level, flow.jet_thickness + gate.sill_level - gate.floor_level
    if flow.state == DROWNED and flow.underflow < flow.free_discharge and lip < flow.roller_depth < tail_depth:
        return drowned_slopes(
            gate, upstream_section, downstream_section, up, tail_depth, flow.jet_thickness, flow.roller_depth,
            flow.underflow,
        )  # fmt: skip
    return _free_slope(gate, upstream_section, up, flow), 0.0


@kernel
def _free_slope(gate, upstream_section, headwater_level, flow):
    """Derivative of Q = φ·b·h·√(2g(E − h)) to the headwater level [m²/s]; the approach Q²/2gA² follows."""
    area, width, _, _ = geometry(upstream_section, headwater_level - gate.upstream_bed_level)
    fall, share = flow.energy_head - flow.jet_thickness, jet_width(gate) * flow.jet_thickness / area
    still = max(1.0 - share * share, 0.05)
    return 0.5 * flow.free_discharge / fall * (1.0 - 2.0 * fall * share * share * width / area) / still


@kernel
def _lip_is_near(flow, opening):
    """Whether the lip is so near to the surface upstream that the contraction vanishes."""
    return opening > LIP_CONTACT * flow.energy_head


@kernel
def _over_leaf(gate, crest, high, low):
    """Flow over the leaf, scaled linearly to zero over the last centimetre of head as below it."""
    lowered = min(low, high - LINEAR_HEAD)
    full = weir_discharge_one_way(gate.leaf_weir_coefficient, gate.width, crest, high, lowered)
    return full * min((high - low) / LINEAR_HEAD, 1.0)


@kernel
def _leakage(gate, headwater_level, tailwater_level):
    """Flow past the seals: leakage·√head, linear below a centimetre; none from water below the sill."""
    high, low = max(headwater_level, tailwater_level), min(headwater_level, tailwater_level)
    head = high - max(low, gate.sill_level)
    if gate.leakage == 0.0 or head <= 0.0:
        return 0.0
    size = math.sqrt(head) if head > LINEAR_HEAD else head / math.sqrt(LINEAR_HEAD)
    return math.copysign(gate.leakage * size, headwater_level - tailwater_level)


@kernel
def _state(state, opening, sign, over):
    if over != 0.0:
        return OVERTOPPED
    if opening <= 0.0:
        return CLOSED
    return REVERSE if sign < 0.0 else state


@kernel
def _quality(gate, flow, headwater_level, tailwater_level, opening, sign):
    if opening <= 0.0:
        return QUALITY_GOOD
    if sign < 0.0:
        return QUALITY_REVERSE
    drowned = flow.state in (DROWNED, CLEAR_AND_DROWNED)
    if drowned and tailwater_level - gate.sill_level >= VERY_DROWNED * (headwater_level - gate.sill_level):
        return QUALITY_VERY_DROWNED
    if _lip_is_near(flow, opening):
        return QUALITY_LIP_NEAR_SURFACE
    return flow.quality


@kernel
def opening_for_discharge(
    gate, upstream_section, downstream_section, headwater_level, tailwater_level, discharge, largest
):
    """Opening [m] that passes a discharge [m³/s] at given levels, and the discharge at that opening.

    False position with the retained end's value halved (Dowell & Jarratt 1971, from memory) on [0, `largest`]; the end
    of the range nearest to the wanted discharge where none passes it.
    """
    if discharge <= 0.0:
        return 0.0, 0.0
    low, high = 0.0, largest
    low_gap = (
        gate_discharge(gate, upstream_section, downstream_section, headwater_level, tailwater_level, low) - discharge
    )
    high_gap = (
        gate_discharge(gate, upstream_section, downstream_section, headwater_level, tailwater_level, high) - discharge
    )
    if low_gap >= 0.0 or high_gap < low_gap:  # more open is further away where the head is reversed
        return low, discharge + low_gap
    if high_gap <= 0.0:
        return high, discharge + high_gap
    best, gap, side = high, high_gap, 0
    for _ in range(100):
        best = (low * high_gap - high * low_gap) / (high_gap - low_gap)
        if not low < best < high:
            best = 0.5 * (low + high)
        gap = (
            gate_discharge(gate, upstream_section, downstream_section, headwater_level, tailwater_level, best)
            - discharge
        )
        if abs(gap) <= DISCHARGE_AGREES * discharge or high - low <= OPENING_AGREES:
            break
        if gap < 0.0:
            low, low_gap = best, gap
            high_gap *= 0.5 if side < 0 else 1.0
            side = -1
        else:
            high, high_gap = best, gap
            low_gap *= 0.5 if side > 0 else 1.0
            side = 1
    return best, discharge + gap

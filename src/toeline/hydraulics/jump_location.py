"""Where the jump below a gate stands, and how much tailwater there is to spare."""

import math
from typing import NamedTuple

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import alternate_depth, is_rectangle, supercritical_depth
from toeline.hydraulics.cross_section import BETA, OWN, TRAPEZOID
from toeline.hydraulics.gradually_varied_flow import (
    link_alpha,
    link_bed,
    link_critical_depth,
    link_force,
    link_geometry,
)
from toeline.hydraulics.hydraulic_jump import (
    LENGTH_NOT_DEFINED,
    jump_length,
    subcritical_depth_of_force,
)
from toeline.hydraulics.kernel import kernel
from toeline.hydraulics.submerged_jump import jet_force

JUMP_NONE, JUMP_DROWNED, JUMP_ON_APRON, JUMP_ON_PROTECTION, JUMP_BEYOND_PROTECTION, JUMP_SWEPT_OUT = range(6)


class Jet(NamedTuple):
    """A jet below a gate, at the contracted section."""

    discharge: float  # m³/s
    width: float  # m
    depth: float  # m on the floor
    full_depth: float  # m, spread over the whole section with the same energy
    froude: float  # 1, over its own width
    force: float  # m³, dead water beside it included


class FreeJump(NamedTuple):
    """A free jump by its toe; chainages along the channel."""

    chainage: float  # m; NaN where the jet leaves the channel's end
    depth: float  # m at the toe
    froude: float  # 1 at the toe
    sequent: float  # m
    length: float  # m; NaN where not defined
    length_quality: int
    energy_loss: float  # m


@kernel
def jet_on_floor(section, jet_width, thickness, step, discharge):
    """The jet of a gate after its fall of `step` [m] onto the floor: y₁ + q²/(2gy₁²) = h + q²/(2gh²) + step, as a
    `Jet`.
    """
    energy, depth = fallen_jet(jet_width, thickness, step, discharge)
    full, _ = supercritical_depth(section, discharge, energy)
    froude = discharge / (jet_width * depth * math.sqrt(GRAVITY * depth))
    return Jet(discharge, jet_width, depth, full, froude, jet_force(section, discharge, jet_width, depth, depth))


@kernel
def fallen_jet(jet_width, thickness, step, discharge):
    """Energy and depth [m] over the floor of a jet after its fall of `step` [m]."""
    flux = discharge * discharge / (2.0 * GRAVITY * jet_width * jet_width)
    energy = thickness + flux / (thickness * thickness) + step
    return energy, alternate_depth(flux, energy) if step > 0.0 else thickness


@kernel
def tail_depth_at(channel, levels, node, weight, discharge):
    """Depth of the tailwater [m] between a node and the next; shallower than critical counts as critical."""
    level = levels[node] + weight * (levels[node + 1] - levels[node])
    depth = level - link_bed(channel, node, weight)
    width_area = link_geometry(channel, node, weight, max(depth, 0.0))
    area, width = width_area[0], width_area[1]
    if area * area * area * GRAVITY > link_alpha(channel, node, weight) * discharge * discharge * width:
        return depth
    return link_critical_depth(channel, node, weight, discharge)


@kernel
def _node_below(channel, first, last, chainage):
    node = first
    while node < last - 1 and channel.nodes[node + 1].chainage <= chainage:
        node += 1
    return node, (chainage - channel.nodes[node].chainage) / (
        channel.nodes[node + 1].chainage - channel.nodes[node].chainage
    )


@kernel
def drowning_depth(section, jet):
    """Tail depth [m] at which the jump would just stand at the contracted section."""
    return subcritical_depth_of_force(section, jet.discharge, jet.force)[0]


@kernel
def sequent_of_jet(section, jet_width, thickness, step, discharge):
    """`drowning_depth` of the jet of a gate after its fall of `step` [m] onto the floor."""
    _, depth = fallen_jet(jet_width, thickness, step, discharge)
    force = jet_force(section, discharge, jet_width, depth, depth)
    return subcritical_depth_of_force(section, discharge, force)[0]


@kernel
def free_jump(channel, first, last, levels, jet, chainages, depths, count):
    """The jump on a jet's profile (`supercritical_profile`) under a tailwater given by the nodes' levels, as a
    `FreeJump`.

    The toe is the first place where the jet's specific force has fallen to the tailwater's. Called for a jet whose
    force at the start exceeds the tailwater's. Chainage NaN where that happens nowhere: swept out of the channel.
    """
    before, node = jet.force, first
    x_before = chainages[0]
    for k in range(count):
        x, y = chainages[k], depths[k]
        while node < last - 1 and channel.nodes[node + 1].chainage <= x:
            node += 1
        weight = (x - channel.nodes[node].chainage) / (channel.nodes[node + 1].chainage - channel.nodes[node].chainage)
        tail = tail_depth_at(channel, levels, node, weight, jet.discharge)
        force = jet.force if k == 0 else link_force(channel, node, weight, jet.discharge, y)
        excess = force - link_force(channel, node, weight, jet.discharge, tail)
        if excess <= 0.0 and k > 0:
            share = before / (before - excess)
            toe = x_before + share * (x - x_before)
            depth = depths[k - 1] + share * (y - depths[k - 1])
            return _jump_at(channel, first, last, levels, jet.discharge, toe, depth)
        before, x_before = excess, x
    return FreeJump(math.nan, math.nan, math.nan, math.nan, math.nan, LENGTH_NOT_DEFINED, math.nan)


@kernel
def _jump_at(channel, first, last, levels, discharge, toe, depth):
    node, weight = _node_below(channel, first, last, toe)
    tail = tail_depth_at(channel, levels, node, weight, discharge)
    alpha = link_alpha(channel, node, weight)
    area, width, _, _, _ = link_geometry(channel, node, weight, depth)
    froude = discharge * math.sqrt(alpha * width / (GRAVITY * area)) / area
    length, quality = link_jump_length(channel, node, weight, depth, froude, tail)
    tail_area = link_geometry(channel, node, weight, tail)[0]
    head = alpha * discharge * discharge / (2.0 * GRAVITY)
    loss = depth + head / (area * area) - tail - head / (tail_area * tail_area)
    return FreeJump(toe, depth, froude, tail, length, quality, max(loss, 0.0))


@kernel
def link_jump_length(channel, node, weight, depth, froude, sequent):
    """`jump_length` in the section between a node and the next, not defined unless both are trapezoids."""
    here, there = channel.shapes[channel.nodes[node].section], channel.shapes[channel.nodes[node + 1].section]
    if here[0] != TRAPEZOID or there[0] != TRAPEZOID or sequent > min(here[1], there[1]):
        return math.nan, LENGTH_NOT_DEFINED
    bottom = here[OWN] + weight * (there[OWN] - here[OWN])
    slope = here[OWN + 1] + weight * (there[OWN + 1] - here[OWN + 1])
    return jump_length(bottom, slope, depth, froude, sequent)


@kernel
def sequent_in_link(channel, node, weight, discharge, depth):
    """Sequent depth [m] of a supercritical depth in the section between a node and the next; Newton's method from
    above.
    """
    area, width, _, _, _ = link_geometry(channel, node, weight, depth)
    froude_squared = discharge * discharge * width / (GRAVITY * area * area * area)
    y = 0.5 * depth * (math.sqrt(1.0 + 8.0 * froude_squared) - 1.0)
    here = channel.shapes[channel.nodes[node].section]
    if is_rectangle(here) and here[BETA] == 1.0 and channel.nodes[node].section == channel.nodes[node + 1].section:
        return y
    force = link_force(channel, node, weight, discharge, depth)
    for _ in range(60):
        area, width, _, _, _ = link_geometry(channel, node, weight, y)
        slope = area - discharge * discharge * width / (GRAVITY * area * area)
        if slope <= 0.0:
            break
        step = (link_force(channel, node, weight, discharge, y) - force) / slope
        y -= step
        if abs(step) < 1e-8 * y:
            break
    return y


@kernel
def _end_of_jump_from(channel, first, last, discharge, x, depth):
    """Where a jump with its toe at x would end (its toe where the length is not defined), and its sequent depth."""
    node, weight = _node_below(channel, first, last, x)
    sequent = sequent_in_link(channel, node, weight, discharge, depth)
    area, width, _, _, _ = link_geometry(channel, node, weight, depth)
    froude = discharge * math.sqrt(link_alpha(channel, node, weight) * width / (GRAVITY * area)) / area
    length, _ = link_jump_length(channel, node, weight, depth, froude, sequent)
    return (x if math.isnan(length) else x + length), sequent


@kernel
def last_protected_toe(channel, first, last, discharge, chainages, depths, count, protection_end):
    """Chainage of the toe whose jump ends at `protection_end` and its sequent depth [m], from the profile of a free
    jet; the first point of the profile where every jump would end further on, NaN where the jet turns critical before
    any such toe.
    """
    low, high = 0, count - 1
    while high > 1 and chainages[high - 1] >= protection_end:
        high -= 1
    end_high, sequent_high = _end_of_jump_from(channel, first, last, discharge, chainages[high], depths[high])
    if end_high < protection_end:
        return math.nan, math.nan
    end_low, sequent = _end_of_jump_from(channel, first, last, discharge, chainages[0], depths[0])
    if end_low > protection_end:
        return chainages[0], sequent
    while high - low > 1:
        share = (protection_end - end_low) / (end_high - end_low)
        guess = low + min(max(int(share * (high - low) + 0.5), 1), high - low - 1)
        end, sequent_guess = _end_of_jump_from(channel, first, last, discharge, chainages[guess], depths[guess])
        if end <= protection_end:
            low, end_low, sequent = guess, end, sequent_guess
        else:
            high, end_high, sequent_high = guess, end, sequent_guess
    share = (protection_end - end_low) / (end_high - end_low) if end_high > end_low else 0.0
    toe = chainages[low] + share * (chainages[high] - chainages[low])
    return toe, sequent + share * (sequent_high - sequent)


@kernel
def protection_margin(channel, first, last, levels, discharge, chainages, depths, count, protection_end):
    """How far the tailwater could fall [m], its whole profile alike, before the jump's end passes `protection_end`.

    Negative: how much it is short. Margin = tailwater level at the last protected toe less the level of the sequent
    depth; NaN where the jet turns critical before any such toe.
    """
    toe, sequent = last_protected_toe(channel, first, last, discharge, chainages, depths, count, protection_end)
    return tail_over(channel, first, last, levels, toe, sequent)


@kernel
def tail_over(channel, first, last, levels, x, depth):
    """Height [m] of the tailwater over a depth at a chainage; NaN where there is none."""
    if math.isnan(x):
        return math.nan
    node, weight = _node_below(channel, first, last, x)
    level = levels[node] + weight * (levels[node + 1] - levels[node])
    return level - link_bed(channel, node, weight) - depth


@kernel
def jump_state(end_distance, apron_end, protection_end):
    """State of a free jump by the distance of its end from the gate [m]."""
    if end_distance <= apron_end:
        return JUMP_ON_APRON
    if end_distance <= protection_end:
        return JUMP_ON_PROTECTION
    return JUMP_BEYOND_PROTECTION

"""Steady water-surface profiles along a channel whose section and bed vary linearly between nodes.

Subcritical profiles go upstream node by node with the one-discharge energy balance that the time loop uses for its
reach links; supercritical profiles go downstream in substeps fine enough to place a jump.
"""

import math
from typing import NamedTuple

import numpy as np

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.cross_section import ALPHA, BETA, geometry, packed, static_moment
from toeline.hydraulics.kernel import kernel

DEPTH_STEP = 0.04
"""Relative change of depth in one substep of a supercritical profile (choice: toe within 0.5 %)."""

DRY_DEPTH, WET_DEPTH = 0.02, 0.10
"""Depths [m] between which a drying node hands its say in the conveyance of a link to its upstream neighbour
(choice).
"""

CALM_FROUDE, CRITICAL_FROUDE = 0.9, 1.0
"""Froude numbers between which the convective head of the time loop fades out (choice)."""

LEAST_CONVEYANCE = 1e-9
"""Floor of a link's conveyance [m³/s]: a dry link stays solvable and passes nothing."""

REACHED_END, TURNED_CRITICAL, FULL = 0, 1, 2


CHANNEL_NODE = np.dtype(
    [
        ("chainage", float),  # m
        ("bed_level", float),  # m above datum
        ("roughness", float),  # Manning's n
        ("transition_loss", float),  # k of k·|ΔV²|/2g between this node and the next
        ("section", np.int64),  # row of `Channel.shapes`
    ]
)


class Channel(NamedTuple):
    """A channel by its n nodes, downstream in order; between nodes everything varies linearly."""

    nodes: np.recarray  # (n) of CHANNEL_NODE
    shapes: np.ndarray  # (s, w) section arrays, see cross_section


def channel(chainage, bed_level, sections, roughness, transition_loss=0.0) -> Channel:
    """A `Channel` from plain sequences: chainage [m], bed level [m], one section array, Manning's n and transition
    loss a node (or one number for all)."""
    nodes = np.zeros(len(chainage), CHANNEL_NODE).view(np.recarray)
    nodes.chainage, nodes.bed_level, nodes.roughness = chainage, bed_level, roughness
    nodes.transition_loss, nodes.section = transition_loss, np.arange(len(chainage))
    return Channel(nodes, packed(list(sections)))


@kernel
def link_geometry(channel, node, weight, depth):
    """Area, top width, perimeter, its slope [m², m, m, 1] and roughness at the fraction `weight` between a node and
    the next.
    """
    a, t, p, dp = geometry(channel.shapes[channel.nodes[node].section], depth)
    n = channel.nodes[node].roughness
    if weight > 0.0:
        n += weight * (channel.nodes[node + 1].roughness - n)
        if channel.nodes[node + 1].section != channel.nodes[node].section:
            a2, t2, p2, dp2 = geometry(channel.shapes[channel.nodes[node + 1].section], depth)
            a, t = a + weight * (a2 - a), t + weight * (t2 - t)
            p, dp = p + weight * (p2 - p), dp + weight * (dp2 - dp)
    return a, t, p, dp, n


@kernel
def link_bed(channel, node, weight):
    """Bed level [m] at the fraction `weight` between a node and the next."""
    if weight <= 0.0:
        return channel.nodes[node].bed_level
    return channel.nodes[node].bed_level + weight * (channel.nodes[node + 1].bed_level - channel.nodes[node].bed_level)


@kernel
def link_force(channel, node, weight, discharge, depth):
    """Specific force M + βQ²/(gA) [m³] at the fraction `weight` between a node and the next."""
    here = channel.shapes[channel.nodes[node].section]
    moment, area, beta = static_moment(here, depth), geometry(here, depth)[0], here[BETA]
    if weight > 0.0 and channel.nodes[node + 1].section != channel.nodes[node].section:
        there = channel.shapes[channel.nodes[node + 1].section]
        moment += weight * (static_moment(there, depth) - moment)
        area += weight * (geometry(there, depth)[0] - area)
        beta += weight * (there[BETA] - beta)
    return moment + beta * discharge * discharge / (GRAVITY * area)


@kernel
def link_alpha(channel, node, weight):
    """Velocity-head coefficient at the fraction `weight` between a node and the next."""
    alpha = channel.shapes[channel.nodes[node].section, ALPHA]
    if weight > 0.0:
        alpha += weight * (channel.shapes[channel.nodes[node + 1].section, ALPHA] - alpha)
    return alpha


@kernel
def link_critical_depth(channel, node, weight, discharge):
    """Critical depth [m] at the fraction `weight` between a node and the next; see `critical_depth`."""
    if weight <= 0.0 or channel.nodes[node + 1].section == channel.nodes[node].section:
        return critical_depth(channel.shapes[channel.nodes[node].section], discharge)[0]
    wanted = link_alpha(channel, node, weight) * discharge * discharge / GRAVITY
    y = critical_depth(channel.shapes[channel.nodes[node].section], discharge)[0]
    for _ in range(200):
        area, width, _, _, _ = link_geometry(channel, node, weight, y)
        step = math.log(wanted * width / (area * area * area)) / max(3.0 * y * width / area, 1.0)
        y *= math.exp(min(max(step, -1.5), 1.5))
        if abs(step) < 1e-12:
            break
    return y


@kernel
def _friction(area, perimeter, roughness, discharge):
    """Friction slope of Manning from area and perimeter."""
    velocity = roughness * discharge / area
    return velocity * velocity * math.exp(math.log(perimeter / area) * (4.0 / 3.0))


@kernel
def supercritical_profile(channel, first, last, chainage, depth, discharge, chainage_out, depth_out):
    """March the jet downstream by the energy equation from a chainage and a depth below critical.

    Fills `chainage_out` and `depth_out` [m] and returns their count and how it ended: REACHED_END at node `last`,
    TURNED_CRITICAL (the last point is critical), FULL where the output is. Friction is averaged over each substep; with
    no change of section a substep is taken in depth (direct step), else in distance (standard step) (Chow 1959, ch.
    10).
    """
    node = first
    while node < last - 1 and channel.nodes[node + 1].chainage <= chainage:
        node += 1
    here = _point(channel, node, chainage, depth, discharge)
    chainage_out[0], depth_out[0], count = chainage, depth, 1
    while count < chainage_out.size:
        if here.chainage >= channel.nodes[node + 1].chainage:
            node += 1
            if node >= last:
                return count, REACHED_END
        here = _substep(channel, node, here, discharge)
        chainage_out[count], depth_out[count] = here.chainage, here.depth
        count += 1
        if here.is_critical:
            return count, TURNED_CRITICAL
    return count, FULL


class _Point(NamedTuple):
    """A point of a supercritical profile."""

    chainage: float  # m
    depth: float  # m
    velocity_head: float  # m
    froude_squared: float
    friction: float  # slope
    is_critical: bool


@kernel
def _point(channel, node, x, y, discharge):
    span = channel.nodes[node + 1].chainage - channel.nodes[node].chainage
    weight = (x - channel.nodes[node].chainage) / span
    area, width, perimeter, _, n = link_geometry(channel, node, weight, y)
    head = link_alpha(channel, node, weight) * discharge * discharge / (2.0 * GRAVITY * area * area)
    return _Point(x, y, head, 2.0 * head * width / area, _friction(area, perimeter, n, discharge), False)


@kernel
def _substep(channel, node, here, discharge):
    """The point after one substep inside a link."""
    start, end = channel.nodes[node], channel.nodes[node + 1]
    span, rest = end.chainage - start.chainage, end.chainage - here.chainage
    bed_slope = (start.bed_level - end.bed_level) / span
    if start.section == end.section and start.roughness == end.roughness:
        there = _step_in_depth(channel.shapes[start.section], start.roughness, here, bed_slope, discharge)
        if here.chainage < there.chainage <= end.chainage:
            return there
        longest = rest
    else:
        longest = 0.25 * span
    gradient = abs(bed_slope - here.friction) / max(here.froude_squared - 1.0, 1e-3)
    step = min(rest, DEPTH_STEP * here.depth / max(gradient, 1e-9), longest)
    x_next = end.chainage if rest - step < 1e-9 else here.chainage + step
    return _step_in_distance(channel, node, here, x_next, discharge)


@kernel
def _step_in_depth(section, roughness, here, bed_slope, discharge):
    """The point where the depth has changed by 4 % the way the profile goes, or has become critical."""
    y = here.depth * (1.0 + DEPTH_STEP) if here.friction > bed_slope else here.depth / (1.0 + DEPTH_STEP)
    area, width, perimeter, _ = geometry(section, y)
    head = section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)
    critical = head * 2.0 * width <= area
    if critical:
        y = critical_depth(section, discharge)[0]
        area, width, perimeter, _ = geometry(section, y)
        head = section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)
    friction = _friction(area, perimeter, roughness, discharge)
    moved = (y + head - here.depth - here.velocity_head) / (bed_slope - 0.5 * (here.friction + friction))
    return _Point(here.chainage + moved, y, head, 2.0 * head * width / area, friction, critical)


@kernel
def _step_in_distance(channel, node, here, x_next, discharge):
    """The point at a chainage by Newton's method on the energy balance, critical where that cannot be met.

    Below critical depth the balance falls with the depth; where its slope vanishes before it is met there is no such
    depth.
    """
    start, end = channel.nodes[node], channel.nodes[node + 1]
    span, step, loss = end.chainage - start.chainage, x_next - here.chainage, start.transition_loss
    weight = (x_next - start.chainage) / span
    drop = (start.bed_level - end.bed_level) * step / span
    wanted = drop + here.depth + here.velocity_head - 0.5 * step * here.friction
    flux = link_alpha(channel, node, weight) * discharge * discharge / (2.0 * GRAVITY)
    y = here.depth
    for _ in range(50):
        area, width, perimeter, perimeter_slope, n = link_geometry(channel, node, weight, y)
        head, friction = flux / (area * area), _friction(area, perimeter, n, discharge)
        head_slope = -2.0 * head * width / area
        towards = 1.0 if head >= here.velocity_head else -1.0
        excess = y + head + 0.5 * step * friction + loss * towards * (head - here.velocity_head) - wanted
        friction_slope = friction / 3.0 * (4.0 * perimeter_slope / perimeter - 10.0 * width / area)
        slope = 1.0 + head_slope * (1.0 + loss * towards) + 0.5 * step * friction_slope
        if slope >= 0.0 or 1.0 + head_slope >= 0.0:
            break
        change = max(-excess / slope, -0.5 * y)
        y += change
        if abs(change) < 1e-6 * y:
            return _Point(x_next, y, head + head_slope * change, -head_slope, friction + friction_slope * change, False)
    y = link_critical_depth(channel, node, weight, discharge)
    return _Point(x_next, y, 0.5 * y, 1.0, here.friction, True)


@kernel
def link_conveyance(k_up, k_down, dk_up, dk_down, depth_up, depth_down):
    """Conveyance of a reach link [m³/s] and its derivatives to the upstream and downstream depth.

    The mean of both nodes; as the shallower one dries the weight moves to the upstream node alone, so that water can
    enter a dry cell and cannot leave an empty one. "Upstream" is the side the water comes from.
    """
    shallow = min(depth_up, depth_down)
    if shallow >= WET_DEPTH:
        return 0.5 * (k_up + k_down), 0.5 * dk_up, 0.5 * dk_down
    s = max((shallow - DRY_DEPTH) / (WET_DEPTH - DRY_DEPTH), 0.0)
    share = 1.0 - 0.5 * s * s * (3.0 - 2.0 * s)
    tilt = -3.0 * s * (1.0 - s) / (WET_DEPTH - DRY_DEPTH) * (k_up - k_down)
    from_up, from_down = (tilt, 0.0) if depth_up <= depth_down else (0.0, tilt)
    return share * k_up + (1.0 - share) * k_down, share * dk_up + from_up, (1.0 - share) * dk_down + from_down


@kernel
def upstream_level(channel, node, level_down, discharge, point_loss, fades):
    """Level [m] at a node from the level at the next in steady subcritical flow, and a status.

    z_i + αQ²/2gA_i² = z_{i+1} + αQ²/2gA_{i+1}² + Δx·Q²/K² + local losses, K the mean of both conveyances. With `fades`
    the velocity heads fade near critical flow, as in the time loop. Bisection on the subcritical side; NO_SOLUTION
    (critical depth) where no subcritical depth balances.
    """
    section = channel.shapes[channel.nodes[node].section]
    low = channel.nodes[node].bed_level + max(critical_depth(section, discharge)[0], 1e-6)
    if _energy_gap(channel, node, low, level_down, discharge, point_loss, fades) > 0.0:
        return low, status.NO_SOLUTION
    high = max(low, level_down) + 1.0
    while _energy_gap(channel, node, high, level_down, discharge, point_loss, fades) < 0.0:
        high += 1.0
        if high > low + 1e3:
            return math.nan, status.NO_SOLUTION
    while high - low > 1e-14 * (1.0 + abs(high)):
        middle = 0.5 * (low + high)
        if middle <= low or middle >= high:
            break
        if _energy_gap(channel, node, middle, level_down, discharge, point_loss, fades) > 0.0:
            high = middle
        else:
            low = middle
    return 0.5 * (low + high), status.OK


@kernel
def _energy_gap(channel, node, level, level_down, discharge, point_loss, fades):
    """Energy upstream less energy downstream and losses [m]; with `fades` the velocity heads count by `calm_share`."""
    y_up, y_down = level - channel.nodes[node].bed_level, level_down - channel.nodes[node + 1].bed_level
    a_up, t_up, p_up, _, n_up = link_geometry(channel, node, 0.0, y_up)
    a_down, t_down, p_down, _, n_down = link_geometry(channel, node + 1, 0.0, y_down)
    k_up = a_up * (a_up / p_up) ** (2.0 / 3.0) / n_up
    k_down = a_down * (a_down / p_down) ** (2.0 / 3.0) / n_down
    k = link_conveyance(k_up, k_down, 0.0, 0.0, y_up, y_down)[0]
    half = discharge * abs(discharge) / (2.0 * GRAVITY)
    head_up = link_alpha(channel, node, 0.0) * discharge * discharge / (2.0 * GRAVITY * a_up * a_up)
    head_down = link_alpha(channel, node + 1, 0.0) * discharge * discharge / (2.0 * GRAVITY * a_down * a_down)
    mean_area = 0.5 * (a_up + a_down)
    local = half * point_loss / (mean_area * mean_area)
    local += math.copysign(channel.nodes[node].transition_loss * abs(head_up - head_down), discharge)
    friction = (channel.nodes[node + 1].chainage - channel.nodes[node].chainage) * discharge * abs(discharge) / (k * k)
    share = 1.0
    if fades:
        share = calm_share(max(2.0 * head_up * t_up / a_up, 2.0 * head_down * t_down / a_down))
    return level - level_down + share * (head_up - head_down) - friction - local


@kernel
def calm_share(froude_squared):
    """Weight of the difference of velocity heads in the time loop [1]: 1 up to Fr 0.9, 0 from Fr 1 on (choice)."""
    if froude_squared <= CALM_FROUDE * CALM_FROUDE:
        return 1.0
    s = max((CRITICAL_FROUDE - math.sqrt(froude_squared)) / (CRITICAL_FROUDE - CALM_FROUDE), 0.0)
    return s * s * (3.0 - 2.0 * s)


@kernel
def subcritical_profile(channel, first, last, level, discharge, point_loss, levels_out):
    """Levels [m] of steady flow from node `last`, whose level is given, up to node `first`, and a status.

    `point_loss` holds k of k·V²/2g between each node and the next. NO_SOLUTION at the first node that would be
    critical; levels above it are then not filled.
    """
    levels_out[last] = level
    for node in range(last - 1, first - 1, -1):
        z, flag = upstream_level(channel, node, levels_out[node + 1], discharge, point_loss[node], False)
        if flag != status.OK:
            return flag
        levels_out[node] = z
    return status.OK

"""The momentum balance of a reach link and what its nodes contribute."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import ALPHA, geometry
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH, WET_DEPTH, link_conveyance
from toeline.hydraulics.kernel import kernel

CONVECTIVE_TIME = 20.0
"""Time [s] in which the convective head follows the flow; from 5 s on nothing below a widening grows (choice)."""

CALM_FROUDE, CRITICAL_FROUDE = 0.9, 1.0
"""Froude numbers between which the convective head fades out (choice)."""

LEAST_CONVEYANCE = 1e-9
"""Floor of a link's conveyance [m³/s]: a dry link stays solvable and passes nothing."""


@kernel
def node_geometry(channel, nodes, node, level, stage):
    """Fill storage area, conveyance and α/A² of a node and their derivatives to the level.

    Below the dry depth the area goes on as A_s·exp((y − y_s)·T_s/A_s): positive for any level.
    """
    row = channel.shape[node]
    depth = level - channel.bed_level[node]
    if depth >= DRY_DEPTH:
        area, width, perimeter, perimeter_slope = geometry(channel.shapes[row], depth)
        inverse = channel.shapes[row, ALPHA] / (area * area)
        inverse_slope = -2.0 * inverse * width / area
    else:
        floor = nodes.dry_area[row]
        area = floor * math.exp((depth - DRY_DEPTH) * nodes.dry_width[row] / floor)
        width = area * nodes.dry_width[row] / floor
        perimeter, perimeter_slope = nodes.dry_perimeter[row], 0.0
        inverse, inverse_slope = channel.shapes[row, ALPHA] / (floor * floor), 0.0
    radius = area / perimeter
    k = area * math.exp(math.log(radius) * (2.0 / 3.0)) / channel.roughness[node]
    stage.area[node] = area
    stage.width[node] = width
    stage.conveyance[node] = k
    stage.conveyance_slope[node] = k / 3.0 * (5.0 * width / area - 2.0 * perimeter_slope / perimeter)
    stage.inverse_area[node] = inverse
    stage.inverse_area_slope[node] = inverse_slope


@kernel
def convective_target(share, discharge, inverse_up, inverse_down):
    """Difference of velocity heads [m] that the convective head tends to: σ·Q²/2g·(α/A_i² − α/A_{i+1}²)."""
    return share * discharge * discharge / (2.0 * GRAVITY) * (inverse_up - inverse_down)


@kernel
def reach_balance(channel, links, stage, link, level_up, level_down, q, head_base, head_share):
    """Head left over in a reach link [m], and its derivatives to the level above, the discharge and the level below.

    z_i − z_{i+1} + C − Q|Q|·(Δx/K² + local losses), with C = head_base + head_share·Q²/2g·(α/A_i² − α/A_{i+1}²).
    """
    up, down = link - 1, link
    depth_up, depth_down = level_up - channel.bed_level[up], level_down - channel.bed_level[down]
    if level_up >= level_down:
        k, dk_up, dk_down = link_conveyance(
            stage.conveyance[up], stage.conveyance[down], stage.conveyance_slope[up], stage.conveyance_slope[down],
            depth_up, depth_down,
        )  # fmt: skip
    else:
        k, dk_down, dk_up = link_conveyance(
            stage.conveyance[down], stage.conveyance[up], stage.conveyance_slope[down], stage.conveyance_slope[up],
            depth_down, depth_up,
        )  # fmt: skip
    if k < LEAST_CONVEYANCE:
        k, dk_up, dk_down = LEAST_CONVEYANCE, 0.0, 0.0
    flux = q * abs(q)
    friction = links.length[link] / (k * k)
    loss, loss_up, loss_down = friction, -2.0 * friction / k * dk_up, -2.0 * friction / k * dk_down
    if links.point_loss[link] > 0.0 or channel.transition_loss[up] > 0.0:
        local, local_up, local_down = _local_losses(channel, links, stage, link)
        loss, loss_up, loss_down = loss + local, loss_up + local_up, loss_down + local_down
    half = head_share * q / (2.0 * GRAVITY)
    difference = stage.inverse_area[up] - stage.inverse_area[down]
    left = level_up - level_down + head_base + half * q * difference - flux * loss
    by_up = 1.0 + half * q * stage.inverse_area_slope[up] - flux * loss_up
    by_down = -1.0 - half * q * stage.inverse_area_slope[down] - flux * loss_down
    by_discharge = 2.0 * half * difference - 2.0 * abs(q) * loss
    return left, by_up, by_discharge, by_down


@kernel
def _local_losses(channel, links, stage, link):
    """k/(2gA²) of point losses and of a transition, per Q|Q|, and derivatives to both levels."""
    up, down = link - 1, link
    mean = 0.5 * (stage.area[up] + stage.area[down])
    point = links.point_loss[link] / (2.0 * GRAVITY * mean * mean)
    difference = stage.inverse_area[up] - stage.inverse_area[down]
    turn = math.copysign(channel.transition_loss[up] / (2.0 * GRAVITY), difference)
    by_up = -point * stage.width[up] / mean + turn * stage.inverse_area_slope[up]
    by_down = -point * stage.width[down] / mean - turn * stage.inverse_area_slope[down]
    return point + turn * difference, by_up, by_down


@kernel
def convective_share(channel, stage, link, q):
    """Weight σ of the convective head: 1 up to Fr 0.9, 0 from Fr 1 on, by the faster of both ends."""
    up, down = link - 1, link
    head = q * q / GRAVITY
    froude_up = head * stage.inverse_area[up] * stage.width[up] / stage.area[up]
    froude_down = head * stage.inverse_area[down] * stage.width[down] / stage.area[down]
    froude = math.sqrt(max(froude_up, froude_down))
    s = min(max((CRITICAL_FROUDE - froude) / (CRITICAL_FROUDE - CALM_FROUDE), 0.0), 1.0)
    return s * s * (3.0 - 2.0 * s)


@kernel
def inertia_share(channel, link, level_up, level_down):
    """Weight of the local inertia: 1 in a wet link, 0 once the shallower node is dry."""
    shallow = min(level_up - channel.bed_level[link - 1], level_down - channel.bed_level[link])
    s = min(max((shallow - DRY_DEPTH) / (WET_DEPTH - DRY_DEPTH), 0.0), 1.0)
    return s * s * (3.0 - 2.0 * s)


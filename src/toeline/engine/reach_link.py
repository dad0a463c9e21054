"""The momentum balance of a reach link and what its nodes contribute."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import ALPHA, geometry
from toeline.hydraulics.gradually_varied_flow import (
    CALM_FROUDE,
    DRY_DEPTH,
    LEAST_CONVEYANCE,
    WET_DEPTH,
    calm_share,
    link_conveyance,
)
from toeline.hydraulics.kernel import kernel

VELOCITY_HEAD = 0.5 / GRAVITY
"""1/2g [s²/m], and a multiplication where a division would stand."""

CONVECTIVE_TIME = 20.0
"""Time [s] in which the convective head follows the flow; from 5 s on nothing below a widening grows (choice)."""

INERTIAL_CONVECTIVE_TIME = 60.0
"""The same with local inertia, where the water of a short widening link could swing with its pools (choice)."""

DRY_HEAD = 1e-4
"""Head [m] below which the discharge of a link with a dry end falls linearly to zero (choice)."""


@kernel
def node_geometry(site, cell, section, level, work):
    """Fill storage area, conveyance and α/A² of a node and their derivatives to the level.

    Below the dry depth the area goes on as A_s·exp((y − y_s)·T_s/A_s): positive for any level.
    """
    depth = level - site.bed_level
    if depth >= DRY_DEPTH:
        area, width, perimeter, perimeter_slope = geometry(section, depth)
        work.inverse_area = section[ALPHA] / (area * area)
        work.inverse_area_slope = -2.0 * work.inverse_area * width / area
    else:
        area = cell.dry_area * math.exp((depth - DRY_DEPTH) * cell.dry_width / cell.dry_area)
        width = area * cell.dry_width / cell.dry_area
        perimeter, perimeter_slope = cell.dry_perimeter, 0.0
        work.inverse_area, work.inverse_area_slope = section[ALPHA] / (cell.dry_area * cell.dry_area), 0.0
    work.area, work.width = area, width
    work.conveyance = area * math.exp(math.log(area / perimeter) * (2.0 / 3.0)) / site.roughness
    work.conveyance_slope = work.conveyance / 3.0 * (5.0 * width / area - 2.0 * perimeter_slope / perimeter)


@kernel
def convective_time(inertial):
    """Time [s] in which the convective head follows the flow."""
    return INERTIAL_CONVECTIVE_TIME if inertial else CONVECTIVE_TIME


@kernel
def convective_target(share, discharge, inverse_up, inverse_down):
    """Difference of velocity heads [m] that the convective head tends to: σ·Q²/2g·(α/A_i² − α/A_{i+1}²)."""
    return share * discharge * discharge * VELOCITY_HEAD * (inverse_up - inverse_down)


@kernel
def reach_balance(
    link, transition_loss, up, down, level_up, level_down, depth_up, depth_down, q, head_base, head_share
):
    """Head left over in a reach link [m], and its derivatives to the level above, the discharge and the level below.

    z_i − z_{i+1} + C − Q|Q|·(Δx/K² + local losses), with C = head_base + head_share·Q²/2g·(α/A_i² − α/A_{i+1}²).
    Where the discharge is less than half its balance with the present levels the slope to it is that at the balance:
    from rest Newton's method would overshoot.
    """
    if level_up >= level_down:
        k, dk_up, dk_down = link_conveyance(
            up.conveyance, down.conveyance, up.conveyance_slope, down.conveyance_slope, depth_up, depth_down
        )
    else:
        k, dk_down, dk_up = link_conveyance(
            down.conveyance, up.conveyance, down.conveyance_slope, up.conveyance_slope, depth_down, depth_up
        )
    if k < LEAST_CONVEYANCE:
        k, dk_up, dk_down = LEAST_CONVEYANCE, 0.0, 0.0
    inverse = 1.0 / k
    loss = link.length * inverse * inverse
    loss_up, loss_down = -2.0 * loss * inverse * dk_up, -2.0 * loss * inverse * dk_down
    if link.point_loss > 0.0 or transition_loss > 0.0:
        local, local_up, local_down = _local_losses(link.point_loss, transition_loss, up, down)
        loss, loss_up, loss_down = loss + local, loss_up + local_up, loss_down + local_down
    if min(depth_up, depth_down) < DRY_DEPTH:
        return _dry_balance(level_up - level_down + head_base, loss, loss_up, loss_down, q)
    flux, half = q * abs(q), head_share * q * VELOCITY_HEAD
    difference = up.inverse_area - down.inverse_area
    drive = level_up - level_down + head_base + half * q * difference
    size = abs(q)
    if abs(drive) > 4.0 * q * q * loss:
        size = math.sqrt(abs(drive) / loss)
    by_up = 1.0 + half * q * up.inverse_area_slope - flux * loss_up
    by_down = -1.0 - half * q * down.inverse_area_slope - flux * loss_down
    by_discharge = 2.0 * half * difference - 2.0 * size * loss
    return drive - flux * loss, by_up, by_discharge, by_down


@kernel
def _dry_balance(drive, loss, loss_up, loss_down, q):
    """The balance of a link with a dry end, solved for its discharge: q less drive/√(loss·(|drive| + 0.1 mm)).

    With next to no storage at the dry end the levels do not hold Newton's method; the discharge must follow them at
    once.
    """
    size = abs(drive) + DRY_HEAD
    balanced = drive / math.sqrt(loss * size)
    by_drive = (0.5 * abs(drive) + DRY_HEAD) / (size * math.sqrt(loss * size))
    by_loss = -0.5 * balanced / loss
    return q - balanced, -by_drive - by_loss * loss_up, 1.0, by_drive - by_loss * loss_down


@kernel
def _local_losses(point_loss, transition_loss, up, down):
    """k/(2gA²) of point losses and of a transition, per Q|Q|, and derivatives to both levels."""
    mean = 0.5 * (up.area + down.area)
    point = point_loss / (2.0 * GRAVITY * mean * mean)
    difference = up.inverse_area - down.inverse_area
    turn = math.copysign(transition_loss / (2.0 * GRAVITY), difference)
    by_up = -point * up.width / mean + turn * up.inverse_area_slope
    by_down = -point * down.width / mean - turn * down.inverse_area_slope
    return point + turn * difference, by_up, by_down


@kernel
def convective_share(up, down, q):
    """Weight σ of the convective head: 1 up to Fr 0.9, 0 from Fr 1 on, by the faster of both ends.

    With Fr² = flux/A; calm flow, nearly all there is, is told without a division.
    """
    flux_up = 2.0 * VELOCITY_HEAD * q * q * up.inverse_area * up.width
    flux_down = 2.0 * VELOCITY_HEAD * q * q * down.inverse_area * down.width
    calm = CALM_FROUDE * CALM_FROUDE
    if flux_up <= calm * up.area and flux_down <= calm * down.area:
        return 1.0
    return calm_share(max(flux_up / up.area, flux_down / down.area))


@kernel
def wet_share(depth_up, depth_down):
    """1 in a wet link, 0 once the shallower node is dry."""
    s = min(max((min(depth_up, depth_down) - DRY_DEPTH) / (WET_DEPTH - DRY_DEPTH), 0.0), 1.0)
    return s * s * (3.0 - 2.0 * s)


@kernel
def inertia_head(length, share, mean, source, q, earlier_flux, momentum_base, seconds):
    """Head that accelerates a link's water, less what earlier stages left, and its derivatives to discharge, mean area
    and source area.

    Δx/g·(1/A·dQ/dt − 2Q/A²·dA/dt), with dA/dt at the end that the water comes from: with the mean of both ends the flux
    of momentum feeds the swinging of a short link behind a long one, which grows. As A_s²/A·d(Q/A_s²)/dt it is advanced
    with the weights of the stage; `earlier_flux` is Q/A_s² at the start of the step.
    """
    mass, base = share * length / (GRAVITY * seconds), share * momentum_base
    kept, moving = mass * earlier_flux + base, source * source / mean
    head = mass * q / mean - kept * moving
    return head, mass / mean, -head / mean, -2.0 * kept * source / mean

"""The surge that a sudden change of discharge sends along a pool."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import geometry, static_moment
from toeline.hydraulics.kernel import kernel

DOWNSTREAM, UPSTREAM = 1.0, -1.0


@kernel
def surge_height(section, discharge, depth, change, direction):
    """Change of depth [m] behind the front of a surge, speed of the front [m/s] along its way, and a status.

    `change` of discharge [m³/s, positive downstream] made at once at the end of a pool; `direction` DOWNSTREAM below
    the gate that moves, UPSTREAM above it. With velocities U counted along the way of the front, speed w:
    continuity w·(A₂ − A₁) = ΔQ, momentum M₂ − M₁ = A₁/g·(w − U₁)·(U₂ − U₁) (Chow 1959, ch. 18; Henderson 1966, ch. 8).
    A negative surge flattens as it travels: its height is the bound at the gate. NO_SOLUTION where the pool cannot
    feed the change: the whole depth is returned.
    """
    area = geometry(section, depth)[0]
    if change == 0.0:
        return 0.0, 0.0, status.OK
    if area <= 0.0:
        return 0.0, math.nan, status.NO_SOLUTION
    flow, step = direction * discharge, direction * change
    low, high, found = _surge_bracket(section, flow, depth, step)
    if not found:
        return -depth, math.nan, status.NO_SOLUTION
    while high - low > 1e-12 * depth:
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        if _excess_force(section, flow, depth, step, middle) > 0.0:
            high = middle
        else:
            low = middle
    height = 0.5 * (low + high)
    return height, step / (geometry(section, depth + height)[0] - area), status.OK


@kernel
def _surge_bracket(section, flow, depth, step):
    """Two heights between which the excess force rises through zero, the pair nearest to no surge, and whether it
    exists.
    """
    if step > 0.0:
        high = 0.1 * depth
        while _excess_force(section, flow, depth, step, high) < 0.0:
            high *= 2.0
        return 0.0, high, True
    parts = 200
    for k in range(1, parts):
        low = -depth * k / parts
        if _excess_force(section, flow, depth, step, low) < 0.0:
            return low, low + depth / parts, True
    return -depth, 0.0, False


@kernel
def _excess_force(section, flow, depth, step, height):
    """Force behind a front of the given height less what its momentum needs; rises with the height."""
    area_1 = geometry(section, depth)[0]
    area_2 = geometry(section, depth + height)[0]
    if area_2 <= 0.0 or area_2 == area_1:
        return -math.copysign(math.inf, step) if area_2 == area_1 else -math.inf
    speed = step / (area_2 - area_1)
    velocity_1, velocity_2 = flow / area_1, (flow + step) / area_2
    gain = static_moment(section, depth + height) - static_moment(section, depth)
    return gain - area_1 / GRAVITY * (speed - velocity_1) * (velocity_2 - velocity_1)


@kernel
def wave_speeds(section, discharge, depth):
    """Speeds [m/s] of a small gravity wave with and against the flow: c + V and c − V, c = √(gA/T)."""
    area, width, _, _ = geometry(section, depth)
    if area <= 0.0:
        return 0.0, 0.0
    celerity, velocity = math.sqrt(GRAVITY * area / width), discharge / area
    return celerity + velocity, celerity - velocity

"""Specific energy, specific force, the Froude number and the depths at which they turn."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import ALPHA, BETA, geometry, static_moment
from toeline.hydraulics.kernel import kernel


@kernel
def froude_number(section, discharge, depth):
    """Fr = √(αQ²T/(gA³)) [1]; infinite at no depth (Chow 1959, ch. 3)."""
    area, width, _, _ = geometry(section, depth)
    if area <= 0.0:
        return math.inf
    return abs(discharge) * math.sqrt(section[ALPHA] * width / (GRAVITY * area * area * area))


@kernel
def specific_energy(section, discharge, depth):
    """E = y + αQ²/(2gA²) [m] above the bed."""
    area = geometry(section, depth)[0]
    if area <= 0.0:
        return math.inf
    return depth + section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)


@kernel
def specific_force(section, discharge, depth):
    """S = M(y) + βQ²/(gA) [m³]: pressure and momentum flux over the weight of water (Chow 1959, ch. 3)."""
    area = geometry(section, depth)[0]
    if area <= 0.0:
        return math.inf
    return static_moment(section, depth) + section[BETA] * discharge * discharge / (GRAVITY * area)


@kernel
def critical_depth(section, discharge):
    """Depth [m] at which Fr = 1, and a status; zero for no discharge.

    Each pass scales the depth by the power 1/(3yT/A) of what A³/T lacks: exact at once in a rectangle, and contracting
    in any section whose width grows or shrinks gently.
    """
    if discharge == 0.0:
        return 0.0, status.OK
    wanted = section[ALPHA] * discharge * discharge / GRAVITY
    y, low, high = 0.5, 0.0, math.inf
    for k in range(200):
        area, width, _, _ = geometry(section, y)
        step = math.log(wanted * width / (area * area * area)) / max(3.0 * y * width / area, 1.0)
        low, high = (y, high) if step > 0.0 else (low, y)
        if k < 60 or low == 0.0 or high == math.inf:
            y *= math.exp(min(max(step, -1.5), 1.5))
        else:
            y = math.sqrt(low * high)
            step = min(abs(step), math.log(high / low))
        if abs(step) < 1e-13:
            return y, status.OK
    return (y, status.OK) if abs(step) < 1e-9 else (math.nan, status.NOT_CONVERGED)


@kernel
def supercritical_depth(section, discharge, energy):
    """The depth [m] below critical with the given specific energy [m], and a status.

    NO_SOLUTION (and the critical depth) where the energy is below its least value. Newton's method from the shallow
    side, where E falls and is convex: it climbs to the root.
    """
    critical, _ = critical_depth(section, discharge)
    if energy <= specific_energy(section, discharge, critical):
        return critical, status.NO_SOLUTION
    y = critical
    while specific_energy(section, discharge, y) < energy:
        y *= 0.5
    for _ in range(100):
        area, width, _, _ = geometry(section, y)
        velocity_head = section[ALPHA] * discharge * discharge / (2.0 * GRAVITY * area * area)
        step = (y + velocity_head - energy) / (2.0 * velocity_head * width / area - 1.0)
        y = min(y + step, critical)
        if abs(step) < 1e-13 * y + 1e-15:
            return y, status.OK
    return y, status.NOT_CONVERGED

"""Specific energy, specific force, the Froude number and the depths at which they turn."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import ALPHA, BETA, OWN, TOP, TRAPEZOID, geometry, static_moment
from toeline.hydraulics.kernel import kernel

ROUNDING = 1e-12
"""Relative shortfall of energy that still counts as critical flow."""


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
    if is_rectangle(section):
        y = (wanted / (section[OWN] * section[OWN])) ** (1.0 / 3.0)
        if y <= section[TOP]:
            return y, status.OK
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
    if is_rectangle(section) and energy <= section[TOP]:
        q = discharge / section[OWN]
        y = alternate_depth(section[ALPHA] * q * q / (2.0 * GRAVITY), energy)
        if y == y:
            return y, status.OK
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


@kernel
def is_rectangle(section):
    """Whether a section has upright sides."""
    return section[0] == TRAPEZOID and section[OWN + 1] == 0.0


@kernel
def alternate_depth(flux, energy):
    """Supercritical root [m] of y + flux/y² = energy [m³, m], in closed form and polished; NaN where there is none."""
    cosine = 1.0 - 13.5 * flux / (energy * energy * energy) if energy > 0.0 else -2.0
    if cosine < -1.0 - ROUNDING:
        return math.nan
    y = energy / 3.0 * (1.0 + 2.0 * math.cos((math.acos(min(max(cosine, -1.0), 1.0)) + 4.0 * math.pi) / 3.0))
    for _ in range(2):
        slope = 1.0 - 2.0 * flux / (y * y * y) if y > 0.0 else 0.0
        if slope < -1e-3:
            y -= (y + flux / (y * y) - energy) / slope
    return y

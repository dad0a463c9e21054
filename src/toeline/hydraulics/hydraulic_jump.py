"""The free hydraulic jump: sequent depth, loss, kind and length."""

import math

import numpy as np

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.critical_flow import critical_depth, specific_energy, specific_force
from toeline.hydraulics.cross_section import BETA, OWN, TRAPEZOID, geometry
from toeline.hydraulics.kernel import kernel

NO_JUMP, UNDULAR, WEAK, OSCILLATING, STEADY, STRONG = 0, 1, 2, 3, 4, 5

LENGTH_NOT_DEFINED, LENGTH_GOOD, LENGTH_POORLY_KNOWN = 0, 1, 2

LENGTH_FROUDE = np.array([1.7, 2.0, 2.5, 3.0, 3.5, 4.0, 5.0, 6.0, 8.0, 10.0])
LENGTH_RATIO = np.array([4.00, 4.35, 4.85, 5.28, 5.55, 5.80, 6.00, 6.10, 6.12, 6.10])
"""Length over sequent depth on a level rectangular floor (Peterka 1958, Engineering Monograph 25, fig. 7)."""

SILVESTER_INVERSE_K = np.array([0.0, 1.0 / 16.0, 1.0 / 8.0, 1.0 / 4.0])
SILVESTER_FACTOR = np.array([9.75, 17.6, 23.0, 35.0])
SILVESTER_POWER = np.array([1.01, 0.905, 0.885, 0.836])
"""Length over toe depth = factor·(Fr₁ − 1)^power by 1/k, k = b/(z·y₁) (Silvester 1964; French 1985)."""


@kernel
def sequent_depth(section, discharge, depth):
    """The other depth [m] with the same specific force, and a status; NO_SOLUTION (and the depth itself) at critical
    flow.

    Equal specific force is the momentum equation of the jump on a level floor without friction (Bélanger; Chow 1959,
    ch. 15). Works both ways. Newton's method from the far side of the root, where the force is convex.
    """
    if depth <= 0.0 or discharge == 0.0:
        return depth, status.NO_SOLUTION
    force = specific_force(section, discharge, depth)
    critical, _ = critical_depth(section, discharge)
    if depth < critical:
        return _deeper_depth(section, discharge, force, critical, depth)
    if depth > critical:
        return _shallower_depth(section, discharge, force, critical)
    return depth, status.NO_SOLUTION


@kernel
def subcritical_depth_of_force(section, discharge, force):
    """The depth [m] above critical with the given specific force [m³], and a status.

    NO_SOLUTION (and the critical depth) where the force is below its least value.
    """
    critical, _ = critical_depth(section, discharge)
    if force <= specific_force(section, discharge, critical):
        return critical, status.NO_SOLUTION
    return _deeper_depth(section, discharge, force, critical, 0.5 * critical)


@kernel
def _force_slope(section, discharge, depth):
    """dS/dy = A − βQ²T/(gA²)."""
    area, width, _, _ = geometry(section, depth)
    return area - section[BETA] * discharge * discharge * width / (GRAVITY * area * area)


@kernel
def _deeper_depth(section, discharge, force, critical, shallow):
    """Newton from above; the first guess is the sequent of a rectangle with the section's hydraulic depth."""
    area, width, _, _ = geometry(section, shallow)
    froude_squared = discharge * discharge * width / (GRAVITY * area * area * area)
    y = max(0.5 * shallow * (math.sqrt(1.0 + 8.0 * froude_squared) - 1.0), 1.2 * critical)
    for _ in range(100):
        step = (specific_force(section, discharge, y) - force) / _force_slope(section, discharge, y)
        y = max(y - step, 0.5 * (y + critical))
        if abs(step) < 1e-13 * y:
            return y, status.OK
    return (y, status.OK) if abs(step) < 1e-9 * y else (y, status.NOT_CONVERGED)


@kernel
def _shallower_depth(section, discharge, force, critical):
    """Newton from the shallow side, where the force exceeds the wanted one."""
    y = 0.5 * critical
    while specific_force(section, discharge, y) < force:
        y *= 0.5
    for _ in range(100):
        step = (specific_force(section, discharge, y) - force) / _force_slope(section, discharge, y)
        y = min(y - step, critical)
        if abs(step) < 1e-13 * y:
            return y, status.OK
    return (y, status.OK) if abs(step) < 1e-9 * y else (y, status.NOT_CONVERGED)


@kernel
def energy_loss(section, discharge, depth_before, depth_after):
    """Energy head lost [m] between two depths on a level floor."""
    return specific_energy(section, discharge, depth_before) - specific_energy(section, discharge, depth_after)


@kernel
def jump_kind(froude):
    """Kind of a free jump by the Froude number at its toe (Bradley & Peterka 1957; Chow 1959, ch. 15)."""
    if not froude > 1.0:
        return NO_JUMP
    if froude <= 1.7:
        return UNDULAR
    if froude <= 2.5:
        return WEAK
    if froude <= 4.5:
        return OSCILLATING
    if froude <= 9.0:
        return STEADY
    return STRONG


@kernel
def interpolated(x, xs, ys):
    """Linear interpolation in a table with rising xs; the caller keeps x inside it."""
    k = 1
    while k < xs.size - 1 and x > xs[k]:
        k += 1
    return ys[k - 1] + (ys[k] - ys[k - 1]) * (x - xs[k - 1]) / (xs[k] - xs[k - 1])


@kernel
def jump_length(bottom_width, side_slope, toe_depth, froude, sequent):
    """Length of a free jump [m], and how well it is known (LENGTH_NOT_DEFINED with NaN outside the tables).

    A rectangle: Peterka's curve, 1.7 ≤ Fr₁ ≤ 10. A trapezoid: Silvester 1964 for k = b/(z·y₁) ≥ 4 and the same Froude
    numbers, with constants interpolated in 1/k; poorly known (laboratory data scatter by half).
    """
    if not LENGTH_FROUDE[0] <= froude <= LENGTH_FROUDE[-1]:
        return math.nan, LENGTH_NOT_DEFINED
    if side_slope == 0.0:
        return sequent * interpolated(froude, LENGTH_FROUDE, LENGTH_RATIO), LENGTH_GOOD
    inverse_k = side_slope * toe_depth / bottom_width if bottom_width > 0.0 else math.inf
    if inverse_k > SILVESTER_INVERSE_K[-1]:
        return math.nan, LENGTH_NOT_DEFINED
    factor = interpolated(inverse_k, SILVESTER_INVERSE_K, SILVESTER_FACTOR)
    power = interpolated(inverse_k, SILVESTER_INVERSE_K, SILVESTER_POWER)
    return toe_depth * factor * (froude - 1.0) ** power, LENGTH_POORLY_KNOWN


@kernel
def jump_length_in_section(section, toe_depth, froude, sequent):
    """`jump_length` for a section array; not defined for circles and surveyed lines."""
    if section[0] != TRAPEZOID or max(toe_depth, sequent) > section[1]:
        return math.nan, LENGTH_NOT_DEFINED
    return jump_length(section[OWN], section[OWN + 1], toe_depth, froude, sequent)

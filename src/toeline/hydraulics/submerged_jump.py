"""The drowned (submerged) jump: the roller that lies on the jet below a gate."""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import BETA, geometry, static_moment
from toeline.hydraulics.kernel import kernel


@kernel
def jet_force(section, discharge, jet_width, jet_depth, surface_depth):
    """Specific force [m³] of a jet of the given width and depth with dead water over and beside it up to
    `surface_depth`.

    M(surface) + βQ²/(g·b·h): the momentum equation's upper side below a gate.
    """
    flux = section[BETA] * discharge * discharge / (GRAVITY * jet_width * jet_depth)
    return static_moment(section, surface_depth) + flux


@kernel
def roller_depth(section, discharge, jet_width, jet_depth, tail_depth):
    """Depth of the roller over the floor at the gate [m], and a status, for a known discharge.

    M(y_m) + βQ²/(g·b·h) = M(y₂) + βQ²/(g·A₂) (Govinda Rao & Rajaratnam 1963). NO_SOLUTION (and the jet depth) where the
    tailwater cannot hold a roller over the jet: the jump is free.
    """
    if tail_depth <= 0.0:
        return jet_depth, status.NO_SOLUTION
    flux = section[BETA] * discharge * discharge / GRAVITY
    tail = static_moment(section, tail_depth) + flux / geometry(section, tail_depth)[0]
    wanted = tail - flux / (jet_width * jet_depth)
    if wanted <= static_moment(section, jet_depth):
        return jet_depth, status.NO_SOLUTION
    y = tail_depth
    for _ in range(100):
        step = (static_moment(section, y) - wanted) / geometry(section, y)[0]
        y -= step
        if abs(step) < 1e-13 * tail_depth:
            return y, status.OK
    return y, status.NOT_CONVERGED


@kernel
def submergence(tail_depth, sequent_depth):
    """S = (y_t − y₂)/y₂ [1] with y₂ the sequent depth of the free jet."""
    return (tail_depth - sequent_depth) / sequent_depth


@kernel
def roller_length(sequent_depth, submergence_ratio):
    """Length of the roller from the gate [m]: y₂·(6.1 + 4.9 S) (Govinda Rao & Rajaratnam 1963); NaN for S < 0."""
    if submergence_ratio < 0.0:
        return math.nan
    return sequent_depth * (6.1 + 4.9 * submergence_ratio)

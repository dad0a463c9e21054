"""Drowned flow under a gate: energy to the throat and momentum over the floor together (Henry 1950; Henderson 1966,
ch. 6).

`gate` is an `UnderflowGate`; depths are counted from the downstream floor unless they are said to be over the sill.
"""

import math

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import BETA, geometry, static_moment
from toeline.hydraulics.kernel import kernel

LIP_CONTACT = 0.5
"""Opening over upstream energy head from which the contraction begins to vanish (choice)."""
LEAST_LOSS = 0.3
"""Least share of the velocity head in the throat that an approach as fast as the throat leaves to be supplied
(choice).
"""


@kernel
def jet_width(gate):
    """Width of the jet [m]: the bays, with the site's discharge factor taken as a factor of the jet's area."""
    return gate.discharge_factor * gate.width


@kernel
def _throat_loss(gate, thickness, approach_per_square):
    """1/(2g(φbh)²) less the approach velocity head, both per Q² [s²/m⁵]."""
    throat = jet_width(gate) * thickness
    full = 1.0 / (2.0 * GRAVITY * throat * throat)
    return max(full - approach_per_square, LEAST_LOSS * full)


@kernel
def drowned_discharge(gate, section, head_depth, tail_depth, energy, opening, lip, approach_per_square):
    """Discharge [m³/s] and roller depth [m] of a drowned gate: energy to the throat and momentum over the floor
    together.

    `head_depth` is the headwater over the downstream floor, `energy` the upstream energy head over the sill, `lip` =
    C_c·a. Where the roller does not reach the lip the throat is the water over the sill (an open throat); a lip that
    dips into the surface passes no more than an open throat.
    """
    if head_depth <= tail_depth:
        return 0.0, tail_depth
    critical = energy * 2.0 / 3.0
    if lip >= critical and not _reaches_lip(gate, section, head_depth, tail_depth, lip, approach_per_square):
        return _drowned_open_throat(gate, section, head_depth, tail_depth, critical, lip, approach_per_square)
    discharge, roller = _drowned_under_lip(gate, section, head_depth, tail_depth, lip, approach_per_square)
    if opening > LIP_CONTACT * energy:
        most, open_roller = _drowned_open_throat(
            gate, section, head_depth, tail_depth, critical, math.inf, approach_per_square
        )
        if most < discharge:
            return most, open_roller
    return discharge, roller


@kernel
def _reaches_lip(gate, section, head_depth, tail_depth, lip, approach_per_square):
    """Whether the roller of a gate clear of water stands up to its lip: the jet under the lip has less force than the
    tail.
    """
    least = lip + gate.sill_level - gate.floor_level
    if least >= tail_depth:
        return False
    flux = section[BETA] / GRAVITY * (1.0 / (jet_width(gate) * lip) - 1.0 / geometry(section, tail_depth)[0])
    squared = (head_depth - least) / _throat_loss(gate, lip, approach_per_square)
    return static_moment(section, least) + flux * squared < static_moment(section, tail_depth)


@kernel
def _drowned_under_lip(gate, section, head_depth, tail_depth, jet, approach_per_square):
    """Newton in the roller depth from the tail depth down, where the residual is positive and convex."""
    flux = section[BETA] / GRAVITY * (1.0 / (jet_width(gate) * jet) - 1.0 / geometry(section, tail_depth)[0])
    loss = _throat_loss(gate, jet, approach_per_square)
    tail_moment = static_moment(section, tail_depth)
    least = jet + gate.sill_level - gate.floor_level
    if flux <= 0.0 or tail_depth <= least:
        return math.sqrt(max(head_depth - max(tail_depth, least), 0.0) / loss), max(tail_depth, least)
    ratio = loss / flux
    low, high, y = least, tail_depth, tail_depth
    for _ in range(60):
        residual = head_depth - y - ratio * (tail_moment - static_moment(section, y))
        if residual > 0.0:
            high = y
        else:
            low = y
        slope = ratio * geometry(section, y)[0] - 1.0
        step = residual / slope if slope > 0.0 else math.inf
        if abs(step) < 1e-12 * tail_depth:
            break
        y = y - step if low < y - step <= high else 0.5 * (low + high)
        if abs(step) < 1e-12 * tail_depth or high - low < 1e-13 * tail_depth:
            break
    return math.sqrt(max(head_depth - y, 0.0) / loss), y


@kernel
def _drowned_open_throat(gate, section, head_depth, tail_depth, jet, lip, approach_per_square):
    """Bisection in the roller depth between critical flow over the sill and the lip or the tailwater."""
    step = gate.sill_level - gate.floor_level
    low, high = min(jet + step, tail_depth), min(lip + step, tail_depth)
    tail_area, tail_moment = geometry(section, tail_depth)[0], static_moment(section, tail_depth)
    for _ in range(48):
        y = 0.5 * (low + high)
        squared = max(head_depth - y, 0.0) / _throat_loss(gate, y - step, approach_per_square)
        flux = section[BETA] * squared / GRAVITY * (1.0 / (jet_width(gate) * (y - step)) - 1.0 / tail_area)
        if static_moment(section, y) + flux > tail_moment:
            high = y
        else:
            low = y
    return math.sqrt(max(head_depth - y, 0.0) / _throat_loss(gate, y - step, approach_per_square)), y


@kernel
def drowned_slopes(gate, upstream_section, section, headwater_level, tail_depth, thickness, roller, discharge):
    """Derivatives of the discharge of a drowned gate to headwater and tailwater level [m²/s], from its two equations.

    Holds for a lip clear of the surface and a roller between jet and tailwater. With S = Q², throat loss L and momentum
    flux F per Q²: S·L = H − y and F·S = M(y_t) − M(y), differentiated together.
    """
    area, width, _, _ = geometry(upstream_section, headwater_level - gate.upstream_bed_level)
    approach = 1.0 / (2.0 * GRAVITY * area * area)
    loss = _throat_loss(gate, thickness, approach)
    loss_slope = 2.0 * approach * width / area if loss > LEAST_LOSS * (loss + approach) else 0.0
    tail_area, tail_width, _, _ = geometry(section, tail_depth)
    unit_flux = section[BETA] / GRAVITY
    flux = unit_flux * (1.0 / (jet_width(gate) * thickness) - 1.0 / tail_area)
    flux_slope = unit_flux * tail_width / (tail_area * tail_area)
    roller_area, squared = geometry(section, roller)[0], discharge * discharge
    share = 1.0 / (2.0 * discharge * (loss * roller_area - flux))
    by_headwater = (1.0 - squared * loss_slope) * roller_area * share
    return by_headwater, -(tail_area - squared * flux_slope) * share

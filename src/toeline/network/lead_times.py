"""How long a change of flow needs through a pool, and the area that stores what is left over: the pool as a delay and a
reservoir behind it.
"""

import math
from typing import NamedTuple

import numpy as np

from toeline.constants import GRAVITY
from toeline.hydraulics import status
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import upstream_level
from toeline.hydraulics.surge import wave_speeds
from toeline.hydraulics.uniform_flow import friction_slope, normal_depth
from toeline.network.tables import Network

RELATIVE_CHANGE = 0.01
"""Change of the discharge over which the volume of a pool is compared with its own (choice)."""

LEAST_DISCHARGE = 1e-6
"""Discharge [m³/s] below which a pool has no lead time: its water stands."""

LARGEST_EXPONENT = 50.0
"""Of e, beyond which a pool is none that holds water back."""


class Response(NamedTuple):
    """A pool's answer to a change of flow: at its lower end after a delay [s], there as a reservoir of an area [m²],
    and to waves by a discharge per level T(C − V) [m²/s].
    """

    delay: float
    area: float
    admittance: float


NO_RESPONSE = Response(math.nan, math.nan, math.nan)


class PoolTimes(NamedTuple):
    """By pool: lead times by wave and by volume [s]; areas [m²] and wave admittances [m²/s] of the lower end; NaN where
    there is none.
    """

    wave: np.ndarray
    volume: np.ndarray
    area: np.ndarray
    admittance: np.ndarray


def pool_times(network: Network, level: np.ndarray, discharge: np.ndarray) -> PoolTimes:
    """Times of all pools at their target levels, or at the level at the start where they have none.

    `level` [m] by node and `discharge` [m³/s] by link are those at the start.
    """
    times = [_times_of_pool(network, p, level, discharge) for p in range(network.pool_count)]
    return PoolTimes(*np.array(times).T)


def response(
    section: np.ndarray, roughness: float, slope: float, length: float, depth: float, discharge: float
) -> Response:
    """`Response` of a prismatic pool with a depth [m] held at its lower end.

    A uniform part above and a backed-up part below, each with the speed V + √(gA/T) of its own depth (Litrico &
    Fromion 2004, J. Irrig. Drain. Eng. 130(5); second-hand). Where no uniform flow is, as on a level bed, all is backed
    up. NaN where the flow is not calm or nothing flows.
    """
    if discharge < LEAST_DISCHARGE or not _is_calm(section, discharge, depth):
        return NO_RESPONSE
    area, width, _, _ = geometry(section, depth)
    froude_squared = discharge * discharge * width / (GRAVITY * area**3)
    rise = (slope - friction_slope(section, roughness, discharge, depth)) / (1.0 - froude_squared)
    normal, flag = normal_depth(section, roughness, slope, discharge) if slope > 0.0 else (math.nan, status.OK)
    uniform = _uniform_length(length, depth - normal, rise) if flag == status.OK else 0.0
    backed_up = length - uniform
    middle = depth - 0.5 * rise * backed_up
    parts = [part for part in ((uniform, normal), (backed_up, middle)) if part[0] > 0.0]
    if not all(_is_calm(section, discharge, at) for _, at in parts):
        return NO_RESPONSE
    delay = sum(part / wave_speeds(section, discharge, at)[0] for part, at in parts)
    lower, share = _end_area(section, slope, backed_up, middle, rise, discharge) if backed_up > 0.0 else (0.0, 1.0)
    upper = _end_area(section, slope, uniform, normal, 0.0, discharge)[0] if uniform > 0.0 else 0.0
    return Response(delay, lower + share * upper, width * wave_speeds(section, discharge, depth)[1])


def _is_calm(section: np.ndarray, discharge: float, depth: float) -> bool:
    area, width, _, _ = geometry(section, depth)
    return bool(area > 0.0 and discharge * discharge * width < GRAVITY * area**3)


def _uniform_length(length: float, excess: float, rise: float) -> float:
    """Length [m] of the part above the backwater: all where the depth held is the normal one."""
    if not math.isfinite(excess):
        return 0.0
    return max(length - excess / rise, 0.0) if rise != 0.0 else length


def _end_area(
    section: np.ndarray, slope: float, length: float, depth: float, rise: float, discharge: float
) -> tuple[float, float]:
    """Area [m²] with which a part of a pool answers at its lower end, and the share of that of the part above it which
    is felt there.
    """
    area, width, perimeter, perimeter_slope = geometry(section, depth)
    velocity_squared, celerity_squared = (discharge / area) ** 2, GRAVITY * area / width
    kappa = 7.0 / 3.0 - 4.0 * area / (3.0 * width * perimeter) * perimeter_slope
    froude_squared = velocity_squared / celerity_squared
    gamma = GRAVITY * width * ((1.0 + kappa) * slope - (1.0 + kappa - (kappa - 2.0) * froude_squared) * rise)
    decay = gamma / (width * (celerity_squared - velocity_squared))
    if abs(decay * length) < 1e-9:
        return width * length, 1.0
    exponent = min(-decay * length, LARGEST_EXPONENT)
    return -width / decay * math.expm1(exponent), math.exp(exponent)


def _times_of_pool(
    network: Network, p: int, level: np.ndarray, discharge: np.ndarray
) -> tuple[float, float, float, float]:
    channel, ends = network.channel, network.tables.pools[p]
    first, last = int(ends.first_node), int(ends.last_node)
    head, end = channel.nodes[first], channel.nodes[last]
    target = network.names.target_level[p]
    held = float(level[last] if np.isnan(target) else target)
    flow = float(discharge[(first + last) // 2 + 1])
    length = end.chainage - head.chainage
    slope = (head.bed_level - end.bed_level) / length
    found = response(channel.shapes[end.section], end.roughness, slope, length, held - end.bed_level, flow)
    is_calm = math.isfinite(found.delay)
    by_volume = _volume_by_discharge(network, first, last, held, flow) if is_calm else math.nan
    return found.delay, by_volume, found.area, found.admittance


def _volume_by_discharge(network: Network, first: int, last: int, held: float, flow: float) -> float:
    """dV/dQ [s] of the steady pool at the level held at its lower end (Bautista & Clemmens 2005, J. Irrig. Drain. Eng.
    131(6); from memory).
    """
    change = RELATIVE_CHANGE * flow
    low, high = (_volume(network, first, last, held, q) for q in (flow - change, flow + change))
    return (high - low) / (2.0 * change)


def _volume(network: Network, first: int, last: int, held: float, flow: float) -> float:
    """Volume [m³] of steady flow below the level held; NaN where it would not be calm."""
    channel, losses = network.channel, network.tables.links.point_loss
    level, flag = held, status.OK
    areas = [_area(network, last, level)]
    for node in range(last - 1, first - 1, -1):
        level, flag = upstream_level(channel, node, level, flow, losses[node + 1], True)
        if flag != status.OK:
            return math.nan
        areas.append(_area(network, node, level))
    return float(np.trapezoid(areas[::-1], channel.nodes.chainage[first : last + 1]))


def _area(network: Network, node: int, level: float) -> float:
    here = network.channel.nodes[node]
    return float(geometry(network.channel.shapes[here.section], level - here.bed_level)[0])

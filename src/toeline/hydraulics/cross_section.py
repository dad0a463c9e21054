"""Cross sections: flow area, top width, wetted perimeter and static moment by depth, exact for every shape.

A section is one float64 array, made by `rectangle`, `trapezoid`, `triangle`, `circle` or `surveyed`:

    [0] shape  [1] top depth  [2..5] area, width, perimeter, static moment at the top depth  [6] alpha  [7] beta
    [8..] shape's own

Above its top depth (highest point of the section line) a section is continued by vertical walls, so that no level is
out of range. The static moment M(y) = ∫A dy is taken about the water surface, hence dM/dy = A.
"""

import math
from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from toeline.hydraulics.kernel import kernel

TRAPEZOID = 0.0
CIRCLE = 1.0
PIECEWISE = 2.0

TOP, AREA_AT_TOP, WIDTH_AT_TOP, PERIMETER_AT_TOP, MOMENT_AT_TOP, ALPHA, BETA = 1, 2, 3, 4, 5, 6, 7
OWN = 8
ROW = 7
"""Values in a row of a piecewise section: depth, area, width, its slope, perimeter, its slope, static moment."""

CIRCLE_SLOT = 0.02
"""Width of the slot above a circle's crown, in diameters: keeps the surface width positive when a pipe runs full
(choice).
"""

CIRCLE_SIDES = 512
"""Sides of the polygon that stands for a circle inside a transition."""


def trapezoid(
    bottom_width: float, side_slope: float, top_depth: float = math.inf, alpha: float = 1.0, beta: float = 1.0
):
    """A trapezoid; `side_slope` horizontal to 1 vertical, both sides alike [m, 1, m]. Returns the section array."""
    if bottom_width < 0 or side_slope < 0 or bottom_width + side_slope == 0 or top_depth <= 0:
        raise ValueError(
            "a trapezoid needs bottom width and side slope not negative, not both zero, and a positive top depth"
        )
    own = (bottom_width, side_slope, 2.0 * math.hypot(1.0, side_slope))
    return _with_top(TRAPEZOID, top_depth, own, alpha, beta)


def rectangle(width: float, top_depth: float = math.inf, alpha: float = 1.0, beta: float = 1.0):
    """A rectangle of the given width [m]. Returns the section array."""
    return trapezoid(width, 0.0, top_depth, alpha, beta)


def triangle(side_slope: float, top_depth: float = math.inf, alpha: float = 1.0, beta: float = 1.0):
    """A triangle with both sides sloping `side_slope` horizontal to 1 vertical. Returns the section array."""
    return trapezoid(0.0, side_slope, top_depth, alpha, beta)


def circle(diameter: float, alpha: float = 1.0, beta: float = 1.0):
    """A circle flowing part full [m]; above the crown a slot of 2 % of the diameter. Returns the section array."""
    if diameter <= 0:
        raise ValueError("a circle needs a positive diameter")
    top = 0.5 * diameter * (1.0 + math.sqrt(1.0 - CIRCLE_SLOT**2))
    return _with_top(CIRCLE, top, (diameter,), alpha, beta)


def surveyed(stations: Sequence[float], levels: Sequence[float], alpha: float = 1.0, beta: float = 1.0):
    """A surveyed line: stations across the canal (never decreasing) and levels [m]; depth counts from the lowest level.

    The lower end is carried up vertically to the height of the other. Returns the section array.
    """
    station, level = np.asarray(stations, float), np.asarray(levels, float)
    if station.shape != level.shape or station.size < 2 or np.any(np.diff(station) < 0) or np.ptp(station) == 0:
        raise ValueError("a surveyed section needs at least two points with stations that never decrease")
    if np.ptp(level) == 0:
        raise ValueError("a surveyed section needs points at more than one level")
    station = np.concatenate(([station[0]], station, [station[-1]]))
    level = np.concatenate(([level.max()], level, [level.max()])) - level.min()
    depth, width, perimeter = _polygon_rows(station, level)
    return _piecewise(depth, width, perimeter, alpha, beta)


def blended(section_a: np.ndarray, section_b: np.ndarray, weight: float):
    """The section at the fraction `weight` of the way from a to b: widths and perimeters vary linearly [1]."""
    if weight <= 0.0 or np.array_equal(section_a, section_b):
        return section_a
    if weight >= 1.0:
        return section_b
    alpha, beta = (1.0 - weight) * section_a[ALPHA : BETA + 1] + weight * section_b[ALPHA : BETA + 1]
    if section_a[0] == TRAPEZOID and section_b[0] == TRAPEZOID:
        width, slope = (1.0 - weight) * section_a[OWN : OWN + 2] + weight * section_b[OWN : OWN + 2]
        return trapezoid(width, slope, _blended_top(section_a[TOP], section_b[TOP], weight), alpha, beta)
    return _blended_piecewise(_as_piecewise(section_a), _as_piecewise(section_b), weight, alpha, beta)


def packed(sections: Sequence[np.ndarray]) -> np.ndarray:
    """Section arrays as the rows of one table, shape (sections, longest row)."""
    table = np.zeros((len(sections), max(section.size for section in sections)))
    for row, section in zip(table, sections, strict=True):
        row[: section.size] = section
    return table


def _with_top(shape: float, top_depth: float, own: tuple[float, ...], alpha: float, beta: float) -> np.ndarray:
    section = np.array([shape, math.inf, 0.0, 0.0, 0.0, 0.0, alpha, beta, *own])
    if math.isfinite(top_depth):
        area, width, perimeter, _ = geometry(section, top_depth)
        section[AREA_AT_TOP : MOMENT_AT_TOP + 1] = area, width, perimeter, static_moment(section, top_depth)
        section[TOP] = top_depth
    return section


def _blended_top(top_a: float, top_b: float, weight: float) -> float:
    if math.isinf(top_a) or math.isinf(top_b):
        return min(top_a, top_b)
    return (1.0 - weight) * top_a + weight * top_b


def _polygon_rows(station: np.ndarray, level: np.ndarray):
    """Breakpoint depths, and width and perimeter just above the lower and just below the upper end of each interval."""
    depth = np.unique(level)
    low, high = np.minimum(level[:-1], level[1:]), np.maximum(level[:-1], level[1:])
    run, side = np.diff(station), np.hypot(np.diff(station), np.diff(level))
    rise = np.where(high > low, high - low, 1.0)

    def wetted(lengths: np.ndarray, y: float, middle: float) -> float:
        part = np.where(high <= middle, 1.0, np.where(low >= middle, 0.0, (y - low) / rise))
        return float(np.sum(lengths * part))

    bounds = list(pairwise(depth))
    width = np.array([[wetted(run, y, 0.5 * (a + b)) for y in (a, b)] for a, b in bounds])
    perimeter = np.array([[wetted(side, y, 0.5 * (a + b)) for y in (a, b)] for a, b in bounds])
    return depth, width, perimeter


def _piecewise(depth: np.ndarray, width: np.ndarray, perimeter: np.ndarray, alpha: float, beta: float) -> np.ndarray:
    """A section whose width and perimeter are linear between breakpoint depths (n + 1 depths, n pairs of ends)."""
    rows = np.zeros((depth.size - 1, ROW))
    area = moment = 0.0
    for row, y0, step, (t0, t1), (p0, p1) in zip(rows, depth[:-1], np.diff(depth), width, perimeter, strict=True):
        t_slope, p_slope = (t1 - t0) / step, (p1 - p0) / step
        row[:] = y0, area, t0, t_slope, p0, p_slope, moment
        moment += area * step + t0 * step**2 / 2.0 + t_slope * step**3 / 6.0
        area += t0 * step + t_slope * step**2 / 2.0
    head = [PIECEWISE, depth[-1], area, width[-1, 1], perimeter[-1, 1], moment, alpha, beta, len(rows)]
    return np.concatenate((head, rows.ravel()))


def _as_piecewise(section: np.ndarray) -> np.ndarray:
    if section[0] == PIECEWISE:
        return section
    if section[0] == TRAPEZOID:
        top = section[TOP] if math.isfinite(section[TOP]) else 100.0
        width, slope = section[OWN], section[OWN + 1]
        across = [-width / 2 - slope * top, -width / 2, width / 2, width / 2 + slope * top]
        return surveyed(across, [top, 0.0, 0.0, top])
    radius = section[OWN] / 2
    angle = np.linspace(-math.pi, 0.0, CIRCLE_SIDES + 1)
    across, depth = radius * np.cos(angle), radius * (1.0 + np.sin(angle))
    half = CIRCLE_SIDES // 2
    depth[half:] = depth[half::-1]
    depth[[0, -1]] = radius
    lower = _polygon_rows(across, depth)
    depths, width, perimeter = _closed_above(lower, radius)
    return _piecewise(depths, width, perimeter, section[ALPHA], section[BETA])


def _closed_above(lower, radius: float):
    """The lower half of a circle mirrored upwards, as far as the slot."""
    depth, width, perimeter = lower
    top = circle(2.0 * radius)[TOP]
    upper = 2.0 * radius - depth[::-1]
    keep = upper < top
    full = 2.0 * perimeter[-1, 1]
    depths = np.concatenate((depth, upper[1:][keep[1:]]))
    count = depths.size - 1 - len(width)
    return (
        depths,
        np.concatenate((width, width[::-1, ::-1][:count])),
        np.concatenate((perimeter, (full - perimeter[::-1, ::-1])[:count])),
    )


def _blended_piecewise(a: np.ndarray, b: np.ndarray, weight: float, alpha: float, beta: float) -> np.ndarray:
    top = _blended_top(a[TOP], b[TOP], weight)
    depths = np.unique(np.concatenate((_breakpoints(a), _breakpoints(b), [0.0, top])))
    depths = depths[depths <= top]
    bounds = list(pairwise(depths))
    ends = np.array([[_linear_ends(section, y0, y1) for y0, y1 in bounds] for section in (a, b)])
    mixed = (1.0 - weight) * ends[0] + weight * ends[1]
    return _piecewise(depths, mixed[:, :2], mixed[:, 2:], alpha, beta)


def _breakpoints(section: np.ndarray) -> np.ndarray:
    rows = section[OWN + 1 :].reshape(-1, ROW)
    return np.append(rows[:, 0], section[TOP])


def _linear_ends(section: np.ndarray, y0: float, y1: float) -> tuple[float, float, float, float]:
    """Width and perimeter at both ends of an interval in which they are linear, seen from inside it."""
    step = y1 - y0
    _, w_a, p_a, _ = geometry(section, y0 + step / 3.0)
    _, w_b, p_b, _ = geometry(section, y0 + 2.0 * step / 3.0)
    return 2.0 * w_a - w_b, 2.0 * w_b - w_a, 2.0 * p_a - p_b, 2.0 * p_b - p_a


@kernel
def geometry(section, depth):
    """Flow area [m²], top width [m], wetted perimeter [m] and its rate of change with depth [1] at a depth [m].

    At no depth the area is zero and the widths are those of the bed.
    """
    y = max(depth, 0.0)
    if section[0] == TRAPEZOID and not y > section[TOP]:
        b, z, wall = section[OWN], section[OWN + 1], section[OWN + 2]
        return (b + z * y) * y, b + 2.0 * z * y, b + wall * y, wall
    return _other_geometry(section, y)


@kernel
def _other_geometry(section, y):
    """`geometry` above the top of a section, in circles and in surveyed lines."""
    above = y - section[TOP]
    if above > 0.0:
        width = section[WIDTH_AT_TOP]
        return section[AREA_AT_TOP] + width * above, width, section[PERIMETER_AT_TOP] + 2.0 * above, 2.0
    if section[0] == CIRCLE:
        return _circle_geometry(section[OWN], y)
    row = _row_below(section, y)
    d = y - section[row]
    area = section[row + 1] + d * (section[row + 2] + 0.5 * d * section[row + 3])
    width = section[row + 2] + d * section[row + 3]
    return area, width, section[row + 4] + d * section[row + 5], section[row + 5]


@kernel
def area(section, depth):
    """Flow area [m²] at a depth [m]."""
    return geometry(section, depth)[0]


@kernel
def top_width(section, depth):
    """Width of the water surface [m] at a depth [m]."""
    return geometry(section, depth)[1]


@kernel
def wetted_perimeter(section, depth):
    """Wetted perimeter [m] at a depth [m]."""
    return geometry(section, depth)[2]


@kernel
def static_moment(section, depth):
    """Static moment of the flow area about the water surface [m³] at a depth [m]: the integral of the area over
    depth.
    """
    y = max(depth, 0.0)
    if section[0] == TRAPEZOID and not y > section[TOP]:
        return y * y * (section[OWN] / 2.0 + section[OWN + 1] * y / 3.0)
    return _other_moment(section, y)


@kernel
def _other_moment(section, y):
    """`static_moment` above the top of a section, in circles and in surveyed lines."""
    above = y - section[TOP]
    if above > 0.0:
        return section[MOMENT_AT_TOP] + above * (section[AREA_AT_TOP] + 0.5 * above * section[WIDTH_AT_TOP])
    if section[0] == CIRCLE:
        return _circle_moment(section[OWN], y)
    row = _row_below(section, y)
    d = y - section[row]
    return section[row + 6] + d * (section[row + 1] + d * (section[row + 2] / 2.0 + d * section[row + 3] / 6.0))


@kernel
def _row_below(section, y):
    """Where the row starts whose depth interval holds y."""
    low, high = 0, int(section[OWN])
    while high - low > 1:
        middle = (low + high) // 2
        if section[OWN + 1 + ROW * middle] <= y:
            low = middle
        else:
            high = middle
    return OWN + 1 + ROW * low


@kernel
def _circle_geometry(diameter, y):
    half_angle = math.acos(min(max(1.0 - 2.0 * y / diameter, -1.0), 1.0))
    half_width = math.sqrt(max(y * (diameter - y), 0.0))
    area = diameter * diameter / 4.0 * half_angle - half_width * (diameter / 2.0 - y)
    slope = diameter / half_width if half_width > 0.0 else math.inf
    return area, 2.0 * half_width, diameter * half_angle, slope


@kernel
def _circle_moment(diameter, y):
    """∫A dy = (y − r)·A + ⅔·(half width)³."""
    area, width, _, _ = _circle_geometry(diameter, y)
    return (y - diameter / 2.0) * area + width * width * width / 12.0

"""Section geometry against numerical integration of the shape itself."""

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.integrate import quad

from toeline.hydraulics.cross_section import (
    CIRCLE_SLOT,
    area,
    blended,
    circle,
    geometry,
    packed,
    rectangle,
    static_moment,
    surveyed,
    top_width,
    trapezoid,
    triangle,
    wetted_perimeter,
)

BENCHES = ([0, 0, 4, 4.5, 6, 7.5, 8, 12, 12], [3, 1.2, 1.0, 0.3, 0, 0.2, 1.1, 1.3, 2.6])
TWO_CHANNELS = ([0, 1, 3, 4, 5, 7, 8], [2.5, 0.4, 0.4, 1.5, 0.0, 0.0, 2.5])
VERTICAL_WALLS = ([0, 0, 3, 3], [2, 0, 0, 2])
V_WITH_UNEQUAL_BANKS = ([0, 2, 6], [1.4, 0, 3])


def wetted_runs(stations, levels, depth, vertical):
    """Length over which a surveyed line lies below a depth: across, or along the line; walls above either end."""
    station, level = np.asarray(stations, float), np.asarray(levels, float)
    level = level - level.min()
    top = max(depth, level.max())
    station, level = np.concatenate(([station[0]], station, [station[-1]])), np.concatenate(([top], level, [top]))
    total = 0.0
    for run, low, high in zip(np.diff(station), level[:-1], level[1:], strict=True):
        low, high = min(low, high), max(low, high)
        share = 1.0 if high <= depth else 0.0 if low >= depth else (depth - low) / (high - low)
        total += share * (math.hypot(run, high - low) if vertical else run)
    return total


class Shape:
    """A section array, and the same shape by other means."""

    def __init__(self, section, width, perimeter, kinks=()):
        self.section, self.width, self.perimeter, self.kinks = section, width, perimeter, kinks


def prism(bottom, slope, top=math.inf):
    return Shape(
        trapezoid(bottom, slope, top),
        lambda y: bottom + 2.0 * slope * min(y, top),
        lambda y: bottom + 2.0 * min(y, top) * math.hypot(1.0, slope) + 2.0 * max(y - top, 0.0),
        kinks=(top,) if math.isfinite(top) else (),
    )


def line(points):
    levels = sorted({level - min(points[1]) for level in points[1]})
    return Shape(
        surveyed(*points),
        lambda y: wetted_runs(*points, y, vertical=False),
        lambda y: wetted_runs(*points, y, vertical=True),
        kinks=tuple(levels),
    )


def mixture(one, other, weight, perimeter=None):
    return Shape(
        blended(one.section, other.section, weight),
        lambda y: (1.0 - weight) * one.width(y) + weight * other.width(y),
        perimeter or (lambda y: (1.0 - weight) * one.perimeter(y) + weight * other.perimeter(y)),
        kinks=(*one.kinks, *other.kinks),
    )


SHAPES = {
    "rectangle": prism(3.0, 0.0),
    "trapezoid": prism(2.0, 1.5),
    "triangle": prism(0.0, 2.0),
    "trapezoid with a top": prism(2.0, 1.5, 0.7),
    "circle": Shape(circle(1.6), lambda y: 2.0 * math.sqrt(y * (1.6 - y)), lambda y: 1.6 * math.acos(1.0 - y / 0.8)),
    "benches": line(BENCHES),
    "two channels": line(TWO_CHANNELS),
    "vertical walls": line(VERTICAL_WALLS),
    "unequal banks": line(V_WITH_UNEQUAL_BANKS),
    "between trapezoids": mixture(prism(2.0, 1.5), prism(4.0, 0.0), 0.3, perimeter=prism(2.6, 1.05).perimeter),
    "between trapezoid and surveyed": mixture(prism(2.0, 1.5), line(BENCHES), 0.6),
    "between surveyed lines": mixture(line(VERTICAL_WALLS), line(TWO_CHANNELS), 0.25),
}
DEPTHS = (0.001, 0.15, 0.3, 0.7, 1.1, 1.4, 1.55)


@pytest.fixture(params=SHAPES.values(), ids=SHAPES.keys())
def shape(request):
    return request.param


def integral(function, depth, kinks):
    inside = sorted({kink for kink in kinks if 0.0 < kink < depth})
    return sum(quad(function, a, b, epsabs=1e-13)[0] for a, b in zip([0.0, *inside], [*inside, depth], strict=True))


@pytest.mark.parametrize("depth", DEPTHS)
def test_widths_and_perimeters(shape, depth):
    assert top_width(shape.section, depth) == pytest.approx(shape.width(depth), rel=1e-9)
    assert wetted_perimeter(shape.section, depth) == pytest.approx(shape.perimeter(depth), rel=1e-9)


@pytest.mark.parametrize("depth", DEPTHS)
def test_area_is_the_integral_of_the_width(shape, depth):
    assert area(shape.section, depth) == pytest.approx(integral(shape.width, depth, shape.kinks), rel=1e-9)


@pytest.mark.parametrize("depth", DEPTHS)
def test_static_moment_is_the_moment_of_the_area(shape, depth):
    """∫(y − η)·T(η) dη, the lever of every layer to the surface."""
    moment = integral(lambda eta: (depth - eta) * shape.width(eta), depth, shape.kinks)
    assert static_moment(shape.section, depth) == pytest.approx(moment, rel=1e-9)


@pytest.mark.parametrize("depth", [0.05, 0.25, 0.61, 0.9, 1.45])
def test_derivatives(shape, depth):
    nudge = 1e-5
    above, below = geometry(shape.section, depth + nudge), geometry(shape.section, depth - nudge)
    _, width, _, perimeter_slope = geometry(shape.section, depth)
    assert (above[0] - below[0]) / (2 * nudge) == pytest.approx(width, rel=1e-6)
    assert (above[2] - below[2]) / (2 * nudge) == pytest.approx(perimeter_slope, rel=1e-6)
    moments = [static_moment(shape.section, depth + sign * nudge) for sign in (1, -1)]
    assert (moments[0] - moments[1]) / (2 * nudge) == pytest.approx(area(shape.section, depth), rel=1e-6)


@pytest.mark.parametrize("depth", [0.0, -0.3])
def test_no_water(shape, depth):
    assert area(shape.section, depth) == 0.0
    assert static_moment(shape.section, depth) == 0.0
    assert geometry(shape.section, depth) == geometry(shape.section, 0.0)


@pytest.mark.parametrize("make", [lambda: surveyed(*BENCHES), lambda: trapezoid(2.0, 1.5, 3.0), lambda: circle(3.0)])
def test_vertical_walls_above_the_top(make):
    section = make()
    top_area, width, perimeter, _ = geometry(section, section[1])
    assert geometry(section, section[1] + 2.0) == pytest.approx((top_area + 2.0 * width, width, perimeter + 4.0, 2.0))
    moment = static_moment(section, section[1])
    assert static_moment(section, section[1] + 2.0) == pytest.approx(moment + 2.0 * top_area + 2.0 * width)


def test_circle_near_the_crown():
    """The slot joins on without a step, 0.1 mm below the crown of a circle of 1 m, and keeps the surface 2 cm
    wide.
    """
    section = circle(1.0)
    top = section[1]
    assert 0.9998 < top < 1.0
    assert top_width(section, top) == pytest.approx(CIRCLE_SLOT)
    assert top_width(section, 5.0) == pytest.approx(CIRCLE_SLOT)
    assert area(section, top) == pytest.approx(math.pi / 4.0, rel=1e-5)
    below, above = geometry(section, top - 1e-12), geometry(section, top + 1e-12)
    assert above[:3] == pytest.approx(below[:3], abs=1e-9)


def test_areas_grow_with_depth(shape):
    depths = np.linspace(0.0, 4.0, 300)
    assert np.all(np.diff([area(shape.section, depth) for depth in depths]) > 0.0)


@pytest.mark.parametrize("weight", [0.1, 0.5, 0.9])
def test_between_trapezoid_and_circle(weight):
    """A circle in a transition is a polygon: areas below the crown to 1 in 10,000."""
    one, other = trapezoid(1.0, 1.0), circle(1.2)
    section = blended(one, other, weight)
    for depth in (0.1, 0.5, 0.61, 0.9, 1.15):
        expected = (1.0 - weight) * area(one, depth) + weight * area(other, depth)
        assert area(section, depth) == pytest.approx(expected, rel=1e-4)


def test_ends_of_a_transition():
    one, other = trapezoid(2.0, 1.5), rectangle(4.0)
    assert blended(one, other, 0.0) is one
    assert blended(one, other, 1.0) is other
    assert blended(one, one.copy(), 0.5) is one


def test_coefficients_of_a_transition():
    section = blended(trapezoid(2.0, 1.5, alpha=1.0, beta=1.0), surveyed(*BENCHES, alpha=1.2, beta=1.1), 0.25)
    assert section[6] == pytest.approx(1.05)
    assert section[7] == pytest.approx(1.025)


def test_sections_in_one_table(shape):
    table = packed([rectangle(1.0), shape.section, surveyed(*BENCHES)])
    for depth in (0.2, 1.0, 4.0):
        assert geometry(table[1], depth) == geometry(shape.section, depth)


@pytest.mark.parametrize(
    ("stations", "levels"),
    [
        ([0, 2, 1, 3], [1, 0, 0.5, 1]),  # overhang
        ([0], [1]),
        ([0, 1], [1, 1]),  # no depth
        ([1, 1], [0, 1]),  # no width
        ([0, 1, 2], [1, 0]),
    ],
)
def test_refused_lines(stations, levels):
    with pytest.raises(ValueError, match="surveyed section needs"):
        surveyed(stations, levels)


@pytest.mark.parametrize(
    "make",
    [
        lambda: trapezoid(-1.0, 1.0),
        lambda: trapezoid(1.0, -0.5),
        lambda: trapezoid(0.0, 0.0),
        lambda: rectangle(0.0),
        lambda: triangle(1.0, top_depth=0.0),
        lambda: circle(0.0),
        lambda: circle(-1.0),
    ],
)
def test_refused_shapes(make):
    with pytest.raises(ValueError, match="needs"):
        make()


@given(
    st.lists(st.tuples(st.floats(0.0, 3.0), st.floats(0.0, 3.0)), min_size=3, max_size=12),
    st.floats(0.001, 4.0),
)
def test_any_surveyed_line(steps, depth):
    stations, levels = np.cumsum([step for step, _ in steps]), np.array([level for _, level in steps])
    assume(np.ptp(stations) > 0.01)
    assume(np.diff(np.sort(levels)).min() > 1e-6)
    assume(np.abs(levels - levels.min() - depth).min() > 1e-6)
    section = surveyed(stations, levels)
    runs = [wetted_runs(stations, levels, depth, vertical) for vertical in (False, True)]
    assert top_width(section, depth) == pytest.approx(runs[0], rel=1e-9, abs=1e-9)
    assert wetted_perimeter(section, depth) == pytest.approx(runs[1], rel=1e-9, abs=1e-9)
    assert math.isfinite(static_moment(section, depth))

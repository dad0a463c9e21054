"""Steady flows found backwards: a depth is chosen, and the bed that makes it an exact solution is computed.

MacDonald, Baines, Nichols & Samuels 1997, J. Hydraul. Eng. 123(11) 1041-1045 (method published; coefficients from
memory: every jump balances to 1e-4, so that they are right). g = 9.80665 in the paper. Any roughness gives an exact
solution. The check points of depth, slope and bed are recomputed.
"""

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import specific_force
from toeline.hydraulics.cross_section import trapezoid
from toeline.hydraulics.gradually_varied_flow import channel

CRITICAL = 0.741617  # (4/g)^(1/3), of 2 m²/s
WIDE = 1e7


class Benchmark(NamedTuple):
    """Discharge, roughness and side slope, and by chainage: depth (complex steps allowed) and bottom width."""

    length: float
    discharge: float
    roughness: float
    side_slope: float
    depth: Callable
    width: Callable

    def slope(self, x):
        """Bed slope of the exact solution; derivatives by complex steps."""
        h, b = self.depth(x), self.width(x)
        h_slope, b_slope = (f(x + 1e-30j).imag / 1e-30 for f in (self.depth, self.width))
        area, top = (b + self.side_slope * h) * h, b + 2.0 * self.side_slope * h
        perimeter = b + 2.0 * h * np.sqrt(1.0 + self.side_slope**2)
        inertia = self.discharge**2 / (GRAVITY * area**3)
        friction = (self.discharge * self.roughness) ** 2 * perimeter ** (4.0 / 3.0) / area ** (10.0 / 3.0)
        return (1.0 - inertia * top) * h_slope + friction - inertia * h * b_slope

    def bed(self, x):
        """Bed above the outlet at nodes x, the slope integrated over every link by five Gauss points."""
        points, weights = np.polynomial.legendre.leggauss(5)
        middle, half = 0.5 * (x[1:] + x[:-1]), 0.5 * np.diff(x)
        falls = half * (self.slope(middle[:, None] + half[:, None] * points) @ weights)
        return np.append(np.cumsum(falls[::-1])[::-1], 0.0)

    def channel(self, x):
        sections = [trapezoid(width, self.side_slope) for width in self.width(x)]
        return channel(x, self.bed(x), sections, self.roughness)

    def force(self, x, depth):
        return specific_force(trapezoid(float(self.width(x)), self.side_slope), self.discharge, depth)


def _upper_and_lower(jump, upper, lower):
    """One depth above the jump's station, another below it."""
    return lambda x: np.where(np.real(x) <= jump, upper(x), lower(np.where(np.real(x) <= jump, jump, x)))


def _series(coefficients, s):
    return sum(a * np.exp(-20.0 * i * s) for i, a in enumerate(coefficients, start=1))


def _powers(coefficients, s):
    return sum(k * s**i for i, k in enumerate(coefficients))


def _constant(value):
    return lambda x: value + 0.0 * x


LONG_WIDE = Benchmark(
    1000.0, 2.0 * WIDE, 0.0218, 0.0,
    _upper_and_lower(
        500.0,
        lambda x: CRITICAL * (0.9 - np.exp(-x / 250.0) / 6.0),
        lambda x: CRITICAL * (
            1.0 + _series((-0.348427, 0.552264, -0.55558), x / 1000.0 - 0.5) + 0.8 * np.exp(x / 1000.0 - 1.0)
        ),
    ),
    _constant(WIDE),
)  # fmt: skip
LONG_TRAPEZOID = Benchmark(
    1000.0, 20.0, 0.02, 1.0,
    _upper_and_lower(
        600.0,
        _upper_and_lower(
            300.0,
            lambda x: 0.723449 * (1.0 - np.tanh(x / 1000.0 - 0.3)),
            lambda x: 0.723449 * (1.0 - np.tanh(6.0 * (x / 1000.0 - 0.3)) / 6.0),
        ),
        lambda x: 0.75 + _series((-0.111051, 0.026876, -0.217567), x / 1000.0 - 0.6) + 0.6 * np.exp(x / 1000.0 - 1.0),
    ),
    _constant(10.0),
)  # fmt: skip
HUMP_RECTANGLE = Benchmark(
    1000.0, 20.0, 0.03, 0.0, lambda x: CRITICAL * (1.0 + 0.5 * np.exp(-16.0 * (x / 1000.0 - 0.5) ** 2)), _constant(10.0)
)
HUMP_WIDE = HUMP_RECTANGLE._replace(discharge=2.0 * WIDE, roughness=0.033, width=_constant(WIDE))
PERIODIC_TRAPEZOID = Benchmark(
    5000.0, 20.0, 0.03, 2.0, lambda x: 9.0 / 8.0 + 0.25 * np.sin(np.pi * x / 500.0), _constant(10.0)
)
PERIODIC_WIDE = PERIODIC_TRAPEZOID._replace(discharge=2.0 * WIDE, side_slope=0.0, width=_constant(WIDE))
SHORT_WIDE = Benchmark(
    100.0, 2.0 * WIDE, 0.0328, 0.0,
    _upper_and_lower(
        200.0 / 3.0,
        lambda x: CRITICAL * (4.0 / 3.0 - x / 100.0) - 9.0 * x / 1000.0 * (x / 100.0 - 2.0 / 3.0),
        lambda x: CRITICAL * _powers((1.4305, 14.492, -21.7112, 0.674202, 0.674202), x / 100.0 - 2.0 / 3.0),
    ),
    _constant(WIDE),
)  # fmt: skip
WAISTED_RECTANGLE = Benchmark(
    200.0, 20.0, 0.03, 0.0,
    _upper_and_lower(
        120.0,
        lambda x: 0.7 + 0.3 * (np.exp(x / 200.0) - 1.0),
        lambda x: np.exp(-0.1 * (x - 120.0)) * _powers((-0.154375, -0.108189, -2.014310), (x - 120.0) / 80.0)
        + 1.5 * np.exp(0.1 * (x / 200.0 - 1.0)),
    ),
    lambda x: 10.0 - 5.0 * np.exp(-10.0 * (x / 200.0 - 0.5) ** 2),
)  # fmt: skip
TWICE_WAISTED_TRAPEZOID = Benchmark(
    400.0, 20.0, 0.03, 2.0,
    _upper_and_lower(
        120.0,
        lambda x: 0.9 + 0.25 * (np.exp(-x / 40.0) - 1.0) + 0.25 * np.exp(15.0 * (x / 400.0 - 0.3)),
        lambda x: np.exp(-0.09 * (x - 120.0)) * _powers((-0.183691, 1.519577, -18.234429), (x - 120.0) / 280.0)
        + 1.5 * np.exp(0.16 * (x / 400.0 - 1.0)) - 0.3 * np.exp(2.0 * (x / 400.0 - 1.0)),
    ),
    lambda x: 10.0 - 5.0 * sum(np.exp(-50.0 * (x / 400.0 - waist) ** 2) for waist in (1.0 / 3.0, 2.0 / 3.0)),
)  # fmt: skip


@pytest.fixture(
    params=[
        (LONG_WIDE, {0: 0.543853, 500: 0.650728, 500 + 1e-9: 0.840609, 1000: 1.334899}),
        (
            LONG_TRAPEZOID,
            {
                0: 0.93420, 100: 0.86624, 200: 0.79555, 300: 0.72345, 400: 0.65869, 500: 0.62293, 600: 0.60929,
                600 + 1e-9: 0.85045, 700: 1.17941, 800: 1.23921, 900: 1.29263, 1000: 1.34996,
            },
        ),
        (HUMP_RECTANGLE, {0: 0.74841, 250: 0.87803, 500: 1.11243, 750: 0.87803, 1000: 0.74841}),
    ],
    ids=["long wide", "long trapezoid", "hump"],
)  # fmt: skip
def macdonald_depths(request):
    """Depths at check points: that the formulas are set down here as they were remembered."""
    return request.param


def test_macdonald_depths(macdonald_depths):
    benchmark, depths = macdonald_depths
    for x, depth in depths.items():
        assert benchmark.depth(float(x)) == pytest.approx(depth, abs=6e-6)


@pytest.fixture(
    params=[
        (
            LONG_TRAPEZOID,
            {
                0: 0.001676, 100: 0.002326, 200: 0.003301, 300: 0.004780, 400: 0.006705, 500: 0.007996, 600: 0.008521,
                700: 0.001525, 800: 0.001223, 900: 0.001145, 1000: 0.001108,
            },
        ),
        (HUMP_RECTANGLE, {0: 0.011395, 250: 0.007325, 500: 0.003299, 750: 0.006457, 1000: 0.011389}),
        (HUMP_WIDE, {0: 0.011448, 250: 0.007154, 500: 0.003054, 750: 0.006287, 1000: 0.011442}),
        (PERIODIC_TRAPEZOID, {0: 0.003344, 125: 0.002229, 250: 0.001050, 375: 0.000319, 500: 0.000912, 750: 0.005098}),
        (PERIODIC_WIDE, {0: 0.003552, 125: 0.002400, 250: 0.001245, 375: 0.000589, 500: 0.001310, 750: 0.005618}),
    ],
    ids=["long trapezoid", "hump rectangle", "hump wide", "periodic trapezoid", "periodic wide"],
)  # fmt: skip
def macdonald_slopes(request):
    """Bed slopes at check points, recomputed."""
    return request.param


def test_macdonald_slopes(macdonald_slopes):
    benchmark, slopes = macdonald_slopes
    for x, slope in slopes.items():
        assert benchmark.slope(float(x)) == pytest.approx(slope, abs=1.1e-6)


def test_macdonald_bed():
    """Bed of the long trapezoid above its outlet, every 100 m, recomputed."""
    bed = LONG_TRAPEZOID.bed(np.linspace(0.0, 1000.0, 101))[::10]
    in_print = [3.7186, 3.5207, 3.2427, 2.8438, 2.2690, 1.5262, 0.6958, 0.3635, 0.2303, 0.1125, 0.0]
    assert bed == pytest.approx(in_print, abs=1e-4)


@pytest.fixture(
    params=[
        (LONG_WIDE, 500.0, 1000.0),
        (LONG_TRAPEZOID, 600.0, 1000.0),
        (LONG_TRAPEZOID, 0.0, 290.0),
        (HUMP_RECTANGLE, 0.0, 1000.0),
        (HUMP_WIDE, 0.0, 1000.0),
        (PERIODIC_TRAPEZOID, 3000.0, 5000.0),
        (PERIODIC_WIDE, 3000.0, 5000.0),
        (SHORT_WIDE, 200.0 / 3.0, 100.0),
        (SHORT_WIDE, 0.0, 40.0),
        (WAISTED_RECTANGLE, 120.0, 200.0),
        (TWICE_WAISTED_TRAPEZOID, 120.0, 400.0),
        (TWICE_WAISTED_TRAPEZOID, 0.0, 40.0),
    ],
    ids=[
        "long wide", "long trapezoid", "long trapezoid above the crest", "hump rectangle", "hump wide",
        "periodic trapezoid", "periodic wide", "short wide", "short wide above the crest", "waisted", "twice waisted",
        "twice waisted above the crest",
    ],
)  # fmt: skip
def macdonald_subcritical(request):
    """A benchmark and the stations between which it is subcritical."""
    return request.param


def _nodes_between(benchmark, first, last, count=161):
    x = np.linspace(first, last, count)
    depths = np.append(benchmark.depth(x[0] + 1e-9), benchmark.depth(x[1:]))
    return x, depths


def test_macdonald_subcritical(macdonald_subcritical, profiles):
    benchmark, first, last = macdonald_subcritical
    x, depths = _nodes_between(benchmark, first, last)
    reach = benchmark.channel(x)
    assert profiles.backwater(reach, depths[-1], benchmark.discharge) == pytest.approx(depths, abs=2e-4)


@pytest.fixture(
    params=[
        (LONG_WIDE, 0.0, 500.0),
        (LONG_TRAPEZOID, 310.0, 600.0),
        (SHORT_WIDE, 50.0, 200.0 / 3.0),
        (WAISTED_RECTANGLE, 0.0, 120.0),
        (TWICE_WAISTED_TRAPEZOID, 70.0, 120.0),
    ],
    ids=["long wide", "long trapezoid", "short wide", "waisted", "twice waisted"],
)
def macdonald_supercritical(request):
    """A benchmark and the stations between which it is supercritical."""
    return request.param


def test_macdonald_supercritical(macdonald_supercritical, profiles):
    benchmark, first, last = macdonald_supercritical
    x, depths = _nodes_between(benchmark, first, last)
    distance, y, _ = profiles.jet_profile(benchmark.channel(x), depths[0], benchmark.discharge, start=first)
    assert distance[-1] == pytest.approx(last)
    assert np.interp(x, distance, y) == pytest.approx(depths, abs=2e-4)


@pytest.fixture(
    params=[
        (LONG_WIDE, 0.0, 500.0, None),
        (LONG_TRAPEZOID, 310.0, 600.0, None),
        (SHORT_WIDE, 50.0, 200.0 / 3.0, 0.947215 * WIDE),
        (WAISTED_RECTANGLE, 0.0, 120.0, 10.3223),
        (TWICE_WAISTED_TRAPEZOID, 70.0, 120.0, 9.00364),
    ],
    ids=["long wide", "long trapezoid", "short wide", "waisted", "twice waisted"],
)
def macdonald_jumps(request):
    """A benchmark, a station in its jet, the station of its jump, and the specific force there where one was
    recomputed.
    """
    return request.param


def test_macdonald_jumps_balance(macdonald_jumps):
    benchmark, _, station, force = macdonald_jumps
    before = benchmark.force(station, float(benchmark.depth(station)))
    after = benchmark.force(station, float(benchmark.depth(station + 1e-9)))
    assert after == pytest.approx(before, rel=1e-4)
    if force is not None:
        assert before == pytest.approx(force, rel=6e-6)


def test_macdonald_jump_station(macdonald_jumps, profiles):
    benchmark, first, station, _ = macdonald_jumps
    x = np.union1d(np.linspace(first, station, 101), np.linspace(station, benchmark.length, 101))
    reach = benchmark.channel(x)
    tail = profiles.backwater(reach, float(benchmark.depth(benchmark.length)), benchmark.discharge)
    jump = profiles.jump(reach, tail, float(benchmark.depth(first)), benchmark.discharge, start=first)
    assert jump.chainage == pytest.approx(station, abs=0.02)

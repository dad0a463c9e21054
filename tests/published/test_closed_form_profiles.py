"""Profiles that can be integrated in closed form: wide channels after Chézy, and a jet on a level floor after
Manning.
"""

import math
from itertools import pairwise

import numpy as np
import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.cross_section import rectangle
from toeline.hydraulics.gradually_varied_flow import REACHED_END, TURNED_CRITICAL, channel

WIDE = 1e7


def bresse_function(ratio):
    """Φ(Y), Y = y/y_n."""
    log = np.log((ratio**2 + ratio + 1.0) / (ratio - 1.0) ** 2) / 6.0
    return log - np.arctan(math.sqrt(3.0) / (2.0 * ratio + 1.0)) / math.sqrt(3.0)


def bresse_distance(ratio, critical_cubed):
    """x·S₀/y_n by Y and (y_c/y_n)³."""
    return ratio - (1.0 - critical_cubed) * bresse_function(ratio)


def wide_chezy_channel(depths, distances, slope, chezy):
    """A channel with nodes where the profile has the given depths. Chézy's law is Manning's with n = y^(1/6)/C."""
    roughness = depths ** (1.0 / 6.0) / chezy
    made = channel(distances, -slope * distances, [rectangle(WIDE)] * depths.size, roughness)
    made.nodes.section[:] = 0
    return made


@pytest.fixture(
    params=[
        (0.5, -0.087751),
        (0.9, 0.613848),
        (1.05, 0.895773),
        (1.1, 0.680589),
        (1.5, 0.254813),
        (2, 0.131788),
        (3, 0.056398),
    ],
    ids=lambda row: f"Y={row[0]}",
)
def bresse_table(request):
    """Y, Φ(Y). Formula from memory (Bresse 1860; Chow 1959, ch. 10), verified against quadrature."""
    return request.param


def test_bresse_table(bresse_table):
    ratio, value = bresse_table
    assert bresse_function(ratio) == pytest.approx(value, abs=6e-7)


def test_bresse_differences():
    """(y_c/y_n)³ = 0.2: Δ = 0.962768 from Y = 1.05 to 1.5, 0.0697462 from 0.1 to 0.55. Recomputed by quadrature."""
    assert bresse_distance(1.5, 0.2) - bresse_distance(1.05, 0.2) == pytest.approx(0.962768, abs=6e-7)
    assert bresse_distance(0.55, 0.2) - bresse_distance(0.1, 0.2) == pytest.approx(0.0697462, abs=6e-8)


NORMAL, SLOPE = 1.25, 0.002


def _bresse_channel(first, last, critical_cubed, nodes=61):
    """y_c³ = q²/g and y_n³ = q²/(C²·S₀), hence C² = g·(y_c/y_n)³/S₀."""
    ratios = np.linspace(first, last, nodes)
    distances = bresse_distance(ratios, critical_cubed) * NORMAL / SLOPE
    chezy = math.sqrt(GRAVITY * critical_cubed / SLOPE)
    discharge = WIDE * math.sqrt(GRAVITY * critical_cubed * NORMAL**3)
    return wide_chezy_channel(ratios * NORMAL, distances - distances[0], SLOPE, chezy), ratios * NORMAL, discharge


@pytest.fixture(
    params=[(1.05, 1.5, 0.2), (0.98, 0.7, 0.2), (1.5, 2.5, 2.0)],
    ids=["backwater on a mild slope", "drawdown on a mild slope", "backwater on a steep slope"],
)
def bresse_subcritical(request):
    """First and last Y in flow direction and (y_c/y_n)³ of the profiles M1, M2 and S1."""
    return request.param


def test_bresse_subcritical(bresse_subcritical, profiles):
    reach, depths, discharge = _bresse_channel(*bresse_subcritical)
    assert profiles.backwater(reach, depths[-1], discharge) == pytest.approx(depths, rel=3e-4)


@pytest.fixture(
    params=[(0.1, 0.55, 0.2), (1.24, 1.02, 2.0), (0.4, 0.97, 2.0)],
    ids=["jet on a mild slope", "drawdown on a steep slope", "jet on a steep slope"],
)
def bresse_supercritical(request):
    """First and last Y in flow direction and (y_c/y_n)³ of the profiles M3, S2 and S3."""
    return request.param


def test_bresse_supercritical(bresse_supercritical, profiles):
    reach, depths, discharge = _bresse_channel(*bresse_supercritical)
    x, y, end = profiles.jet_profile(reach, depths[0], discharge)
    assert end == REACHED_END
    assert np.interp(reach.nodes.chainage, x, y) == pytest.approx(depths, rel=1e-3)


@pytest.fixture(
    params=[(3.0, 0.002, 1.53, 332.1, 347.0), (2.0, 0.002, 1.17, 371.4, 383.0), (2.0, 0.0025, 1.11, 377.0, 389.0)],
    ids=["first year", "second year", "third year"],
)
def examination_pools(request):
    """q m²/s, critical slope after Chézy, depth behind the jump m at S₀ = 0.01; metres to 5 m depth: exact
    (recomputed) and by the level-pool shortcut of the published solutions (open-channel examination), which is 3 to
    4.5 % long.
    """
    return request.param


def test_examination_pools(examination_pools, profiles):
    unit_discharge, critical_slope, behind_jump, exact, shortcut = examination_pools
    critical = (unit_discharge**2 / GRAVITY) ** (1.0 / 3.0)
    normal = critical * (critical_slope / 0.01) ** (1.0 / 3.0)
    depths = np.linspace(behind_jump, 5.0, 121)
    distances = bresse_distance(depths / normal, (critical / normal) ** 3) * normal / 0.01
    pool = wide_chezy_channel(depths, distances - distances[0], 0.01, math.sqrt(GRAVITY / critical_slope))
    assert distances[-1] - distances[0] == pytest.approx(exact, rel=1.5e-3)
    assert 1.02 < shortcut / exact < 1.05
    assert profiles.backwater(pool, 5.0, WIDE * unit_discharge)[0] == pytest.approx(behind_jump, rel=2e-3)


def level_floor_distance(depth, unit_discharge, roughness, gravity):
    """x(y) = −[3/13·y^(13/3) − ¾·(q²/g)·y^(4/3)]/(n·q)² + constant, wide channel on a level floor (derived)."""
    energy = 3.0 / 13.0 * depth ** (13.0 / 3.0) - 0.75 * unit_discharge**2 / gravity * depth ** (4.0 / 3.0)
    return -energy / (roughness * unit_discharge) ** 2


@pytest.fixture
def jet_on_a_level_floor():
    """q = 2 m²/s, n = 0.015, g = 9.81: from 0.15 to 0.30 m in 39.8375 m. Derived, closed form."""
    return 2.0, 0.015, 0.15


def test_jet_on_a_level_floor(jet_on_a_level_floor, units, prismatic, profiles):
    """Half a per cent is what the substeps are made for."""
    unit_discharge, roughness, start = jet_on_a_level_floor
    metric = units(9.81)
    floor = prismatic(rectangle(WIDE), 200.0, 0.0, metric.roughness(roughness))
    x, y, end = profiles.jet_profile(floor, start, WIDE * metric.discharge(unit_discharge))
    exact = level_floor_distance(y, unit_discharge, roughness, 9.81)
    assert end == TURNED_CRITICAL
    assert np.interp(0.30, y, x) == pytest.approx(39.8375, rel=2e-3)
    assert x[1:] == pytest.approx(exact[1:] - exact[0], rel=2e-3)


@pytest.mark.parametrize("length", [0.5, 7.0, 39.8375])
def test_nodes_do_not_change_the_jet(length, jet_on_a_level_floor, units, prismatic, profiles):
    """A node on the way only splits a substep in two."""
    unit_discharge, roughness, start = jet_on_a_level_floor
    metric = units(9.81)
    discharge = WIDE * metric.discharge(unit_discharge)
    ends = []
    for nodes in (2, 12):
        floor = prismatic(rectangle(WIDE), length, 0.0, metric.roughness(roughness), nodes=nodes)
        _, y, end = profiles.jet_profile(floor, start, discharge)
        assert end == REACHED_END
        ends.append(y[-1])
    exact = [level_floor_distance(end, unit_discharge, roughness, 9.81) for end in (start, *ends)]
    for before, after in pairwise((exact[0] + length, *exact[1:])):
        assert after == pytest.approx(before, abs=2e-3 * length)

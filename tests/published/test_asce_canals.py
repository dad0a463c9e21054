"""The two test canals of the ASCE task committee on canal automation: normal depths and backwater of every kind of
pool.

Clemmens, Kacerek, Grawitz & Schuurmans 1998, J. Irrig. Drain. Eng. 124(1) 23-30 (from memory). Geometry published
second-hand: transcribed from Clemmens et al. 2015 (table 1), Bonet et al. 2025 (tables 5-6), Litrico & Fromion
2004. Depths and volumes are recomputed or derived; nothing of the committee's unsteady results is claimed.
"""

from typing import NamedTuple

import numpy as np
import pytest

from toeline.hydraulics.cross_section import area, trapezoid
from toeline.hydraulics.uniform_flow import normal_depth

SIDE_SLOPE = 1.5


class Canal(NamedTuple):
    slope: float
    roughness: float
    bottom_widths: tuple[float, ...]
    low_flows: tuple[float, ...]
    high_flows: tuple[float, ...]
    low_depths: tuple[float, ...]
    high_depths: tuple[float, ...]


CANAL_1 = Canal(
    0.002, 0.014, (1.0, 1.0, 1.0, 0.8, 0.8, 0.8, 0.6, 0.6),
    (0.8, 0.7, 0.6, 0.5, 0.4, 0.3, 0.2, 0.1), (2.0, 1.8, 1.6, 1.4, 1.2, 1.0, 0.8, 0.6),
    (0.3905, 0.3638, 0.3350, 0.3337, 0.2966, 0.2542, 0.2313, 0.1591),
    (0.6248, 0.5928, 0.5587, 0.5622, 0.5211, 0.4759, 0.4664, 0.4054),
)  # fmt: skip
CANAL_2 = Canal(
    0.0001, 0.020, (7.0, 7.0, 7.0, 6.0, 6.0, 5.0, 5.0, 5.0),
    (2.7, 2.5, 2.2, 2.0, 1.7, 1.5, 1.2, 1.0), (11.0, 10.0, 9.0, 8.0, 7.0, 6.0, 5.0, 4.0),
    (0.8375, 0.8008, 0.7433, 0.7657, 0.6967, 0.7157, 0.6290, 0.5657),
    (1.8597, 1.7644, 1.6641, 1.6773, 1.5585, 1.5575, 1.4102, 1.2470),
)  # fmt: skip


@pytest.fixture(params=[CANAL_1, CANAL_2], ids=["canal 1", "canal 2"])
def normal_depths_of_the_test_canals(request):
    """Normal depths at the low and high flows of Litrico & Fromion 2004, recomputed to four decimals."""
    return request.param


def test_normal_depths_of_the_test_canals(normal_depths_of_the_test_canals):
    canal = normal_depths_of_the_test_canals
    for flows, depths in ((canal.low_flows, canal.low_depths), (canal.high_flows, canal.high_depths)):
        found = [
            normal_depth(trapezoid(width, SIDE_SLOPE), canal.roughness, canal.slope, flow)[0]
            for width, flow in zip(canal.bottom_widths, flows, strict=True)
        ]
        assert found == pytest.approx(depths, abs=6e-5)


class Pool(NamedTuple):
    canal: Canal
    bottom_width: float
    length: float
    discharge: float
    tail_depth: float
    head_depth: float
    volume: float


@pytest.fixture(
    params=[
        Pool(CANAL_2, 7.0, 7000.0, 2.7, 2.1, 1.45390, 120_085.6),
        Pool(CANAL_2, 7.0, 3000.0, 2.5, 2.1, 1.81277, 58_316.5),
        Pool(CANAL_2, 7.0, 3000.0, 2.2, 2.1, 1.80991, 58_266.7),
        Pool(CANAL_2, 6.0, 4000.0, 2.0, 1.9, 1.52353, 58_663.9),
        Pool(CANAL_1, 1.0, 100.0, 0.8, 0.9, 0.70388, 177.01),
        Pool(CANAL_1, 1.0, 1200.0, 0.7, 0.9, 0.36381, 873.22),
        Pool(CANAL_1, 1.0, 400.0, 0.6, 0.8, 0.33501, 342.81),
        Pool(CANAL_1, 0.8, 800.0, 0.5, 0.9, 0.33367, 544.55),
    ],
    ids=[f"canal {canal} pool {pool}" for canal in (2, 1) for pool in (1, 2, 3, 4)],
)
def backwater_of_the_test_canals(request):
    """Depth at the head and volume of a pool whose gate holds the target depth, exact steady backwater. Derived."""
    return request.param


def test_backwater_of_the_test_canals(backwater_of_the_test_canals, prismatic, profiles):
    pool = backwater_of_the_test_canals
    section = trapezoid(pool.bottom_width, SIDE_SLOPE)
    channel = prismatic(section, pool.length, pool.canal.slope, pool.canal.roughness, nodes=201)
    depths = profiles.backwater(channel, pool.tail_depth, pool.discharge)
    volume = np.trapezoid([area(section, depth) for depth in depths], channel.nodes.chainage)
    assert depths[0] == pytest.approx(pool.head_depth, abs=2e-5)
    assert volume == pytest.approx(pool.volume, rel=2e-5)

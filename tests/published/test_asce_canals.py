"""Normal depths and backwater of every kind of pool of the two ASCE test canals (geometry and sources: asce_canals.py).

Depths and volumes are recomputed or derived; nothing of the committee's unsteady results is claimed.
"""

from typing import NamedTuple

import numpy as np
import pytest
from tests.published.asce_canals import CANAL_1, CANAL_2, SIDE_SLOPE, TestCanal

from toeline.hydraulics.cross_section import area, trapezoid
from toeline.hydraulics.uniform_flow import normal_depth

NORMAL_DEPTHS = {
    CANAL_1: (
        (0.3905, 0.3638, 0.3350, 0.3337, 0.2966, 0.2542, 0.2313, 0.1591),
        (0.6248, 0.5928, 0.5587, 0.5622, 0.5211, 0.4759, 0.4664, 0.4054),
    ),
    CANAL_2: (
        (0.8375, 0.8008, 0.7433, 0.7657, 0.6967, 0.7157, 0.6290, 0.5657),
        (1.8597, 1.7644, 1.6641, 1.6773, 1.5585, 1.5575, 1.4102, 1.2470),
    ),
}
"""At the low and at the high flows."""


@pytest.fixture(params=[CANAL_1, CANAL_2], ids=["canal 1", "canal 2"])
def normal_depths_of_the_test_canals(request):
    """Normal depths at the low and high flows of Litrico & Fromion 2004, recomputed to four decimals."""
    return request.param


def test_normal_depths_of_the_test_canals(normal_depths_of_the_test_canals):
    canal = normal_depths_of_the_test_canals
    for pools, depths in zip((canal.low, canal.high), NORMAL_DEPTHS[canal], strict=True):
        found = [
            normal_depth(trapezoid(width, SIDE_SLOPE), canal.roughness, canal.slope, flow)[0]
            for width, (flow, _, _) in zip(canal.bottom_widths, pools, strict=True)
        ]
        assert found == pytest.approx(depths, abs=6e-5)


class Pool(NamedTuple):
    canal: TestCanal
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

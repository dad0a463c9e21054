"""Backwater curves worked out in textbooks and courses."""

import numpy as np
import pytest

from toeline.hydraulics.cross_section import rectangle, trapezoid


def _distance_to_depth(channel, depths, depth):
    """How far above the lower end the profile has a depth."""
    return channel.nodes.chainage[-1] - np.interp(depth, depths, channel.nodes.chainage)


@pytest.fixture
def chow_example_10_2(units):
    """b = 20 ft, z = 2, S₀ = 0.0016, n = 0.025, Q = 400 ft³/s, α = 1.10, 5 ft at the dam. From memory (Chow 1959,
    example 10-2): about 2,400 ft to the end of the backwater. Recomputed: the exact integral is 2,328.9 ft to 3.40
    ft and 2,451.8 ft to 1.01·y_n; direct steps with the book's depths give the distances below. Ill-conditioned
    near y_n: ±4 %.
    """
    steps = {4.8: 155.3, 4.6: 317.9, 4.4: 490.7, 4.2: 678.6, 4.0: 890.3, 3.8: 1144.5, 3.6: 1495.0, 3.5: 1768.3}
    return trapezoid(20.0, 2.0, alpha=1.10), units(32.2, 1.49), steps


def test_chow_example_10_2(chow_example_10_2, prismatic, profiles):
    section, us, steps = chow_example_10_2
    channel = prismatic(section, 3000.0, 0.0016, us.roughness(0.025), nodes=201)
    depths = profiles.backwater(channel, 5.0, us.discharge(400.0))
    for depth, distance in steps.items():
        assert _distance_to_depth(channel, depths, depth) == pytest.approx(distance, rel=0.004), depth
    assert _distance_to_depth(channel, depths, 3.40) == pytest.approx(2328.9, rel=0.001)
    assert _distance_to_depth(channel, depths, 1.01 * 3.3560) == pytest.approx(2451.8, rel=0.002)
    assert _distance_to_depth(channel, depths, 1.01 * 3.3560) == pytest.approx(2400.0, rel=0.04)


@pytest.fixture
def maurer_example_5_7(units):
    """b = 3 m, z = 2, n = 0.015, S₀ = 0.0009, Q = 10 m³/s, 1.4 m at the lower end. Published (Maurer, examples
    5.6-5.8, two steps): 1.277009 m at 245.874 m and 1.200592 m at 491.748 m. The exact profile has 1.27672 and
    1.20156 m there, and 1.3 m at 191.415, 1.2 m at 499.210 m (recomputed).
    """
    return trapezoid(3.0, 2.0), units(9.81)


def test_maurer_example_5_7(maurer_example_5_7, prismatic, profiles):
    section, metric = maurer_example_5_7
    channel = prismatic(section, 600.0, 0.0009, metric.roughness(0.015), nodes=201)
    depths = profiles.backwater(channel, 1.4, metric.discharge(10.0))
    at_steps = np.interp([600.0 - 245.874, 600.0 - 491.748], channel.nodes.chainage, depths)
    assert at_steps == pytest.approx([1.277009, 1.200592], rel=1e-3)
    assert at_steps == pytest.approx([1.27672, 1.20156], abs=1e-5)
    assert _distance_to_depth(channel, depths, 1.3) == pytest.approx(191.415, abs=0.01)
    assert _distance_to_depth(channel, depths, 1.2) == pytest.approx(499.210, abs=0.02)


def test_two_steps_of_the_standard_step_method(maurer_example_5_7, prismatic, profiles):
    """With the book's two steps the book's depths come out to 4 mm: the friction is here that of the mean
    conveyance.
    """
    section, metric = maurer_example_5_7
    channel = prismatic(section, 2 * 245.874, 0.0009, metric.roughness(0.015), nodes=3)
    depths = profiles.backwater(channel, 1.4, metric.discharge(10.0))
    assert depths == pytest.approx([1.200592, 1.277009, 1.4], abs=4e-3)


@pytest.fixture
def koutitas_page_85(units):
    """b = 5 m, S₀ = 0.001, n = 0.02, Q = 55.4 m³/s, 8 m at the lower end. Inputs published (Koutitas 1983, p. 85,
    after an open course, g = 9.8); the printed end of −11,393 m lies 12 mm above normal depth and depends on the
    scheme by 10 %. Exact (recomputed): 1568.7 m to 7 m, 3640.7 m to 6 m, 5288.4 m to 5.5 m.
    """
    return rectangle(5.0), units(9.8), {7.0: 1568.7, 6.0: 3640.7, 5.5: 5288.4}


def test_koutitas_page_85(koutitas_page_85, prismatic, profiles):
    section, metric, distances = koutitas_page_85
    channel = prismatic(section, 6000.0, 0.001, metric.roughness(0.02), nodes=201)
    depths = profiles.backwater(channel, 8.0, metric.discharge(55.4))
    for depth, distance in distances.items():
        assert _distance_to_depth(channel, depths, depth) == pytest.approx(distance, abs=0.2)

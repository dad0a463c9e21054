"""Normal and critical depths worked out in textbooks and courses."""

import pytest

from toeline.hydraulics.critical_flow import critical_depth, specific_energy
from toeline.hydraulics.cross_section import rectangle, trapezoid
from toeline.hydraulics.uniform_flow import friction_slope, kinematic_celerity, normal_depth


@pytest.fixture
def chow_example_10_1(units):
    """b = 20 ft, z = 2, S₀ = 0.0016, n = 0.025, Q = 400 ft³/s, α = 1.10. From memory (Chow 1959, examples 10-1 and
    10-2): y_n = 3.36 ft, y_c = 2.22 ft; recomputed with k = 1.49, g = 32.2: 3.3560 and 2.2119 ft.
    """
    return trapezoid(20.0, 2.0, alpha=1.10), units(32.2, 1.49)


def test_chow_example_10_1(chow_example_10_1):
    section, us = chow_example_10_1
    discharge = us.discharge(400.0)
    normal, _ = normal_depth(section, us.roughness(0.025), 0.0016, discharge)
    critical, _ = critical_depth(section, discharge)
    assert normal == pytest.approx(3.36, abs=0.006)
    assert normal == pytest.approx(3.3560, abs=6e-5)
    assert critical == pytest.approx(2.22, abs=0.01)
    assert critical == pytest.approx(2.2119, abs=6e-5)


@pytest.fixture
def maurer_example_5_6(units):
    """b = 3 m, z = 2, n = 0.015, S₀ = 0.0009, Q = 10 m³/s: y_c = 0.8555, y_n = 1.14714 m. Published (Maurer)."""
    return trapezoid(3.0, 2.0), units(9.81)


def test_maurer_example_5_6(maurer_example_5_6):
    section, metric = maurer_example_5_6
    discharge = metric.discharge(10.0)
    assert critical_depth(section, discharge)[0] == pytest.approx(0.8555, abs=6e-5)
    assert normal_depth(section, metric.roughness(0.015), 0.0009, discharge)[0] == pytest.approx(1.14714, abs=6e-6)


@pytest.fixture
def maurer_example_5_1(units):
    """b = 10 ft, z = 2, Q = 225 ft³/s, n = 0.016, S₀ = 0.0006: y_n = 3.406, y_c = 2.154 ft. Published (Maurer, k =
    1.486).
    """
    return trapezoid(10.0, 2.0), units(32.2, 1.486)


def test_maurer_example_5_1(maurer_example_5_1):
    section, us = maurer_example_5_1
    discharge = us.discharge(225.0)
    assert normal_depth(section, us.roughness(0.016), 0.0006, discharge)[0] == pytest.approx(3.406, abs=6e-4)
    assert critical_depth(section, discharge)[0] == pytest.approx(2.154, abs=6e-4)


@pytest.fixture
def maurer_example_5_3(units):
    """b = 20 ft, z = 1, Q = 360 ft³/s, y = 3 ft: E = 3.42, least E = 3.03 ft. Published (Maurer). The slope printed
    beside them is 3 % off by recomputation and not used.
    """
    return trapezoid(20.0, 1.0), units(32.2).discharge(360.0)


def test_maurer_example_5_3(maurer_example_5_3):
    section, discharge = maurer_example_5_3
    assert specific_energy(section, discharge, 3.0) == pytest.approx(3.42, abs=0.006)
    assert specific_energy(section, discharge, critical_depth(section, discharge)[0]) == pytest.approx(3.03, abs=0.006)


@pytest.fixture
def koutitas_channel(units):
    """b = 5 m, S₀ = 0.001, n = 0.02, Q = 55.4 m³/s. Inputs published (Koutitas 1983, after an open course); y_n =
    4.9878 m recomputed.
    """
    return rectangle(5.0), units(9.8)


def test_koutitas_channel(koutitas_channel):
    section, metric = koutitas_channel
    normal, _ = normal_depth(section, metric.roughness(0.02), 0.001, metric.discharge(55.4))
    assert normal == pytest.approx(4.9878, abs=6e-5)


@pytest.fixture
def wide_chezy_channel():
    """C = 50 √m/s, i = 0.002, q = 10 m²/s: y_n = 2.71 m. Published (open-channel examination)."""
    return 50.0, 0.002, 10.0, 2.71


def test_wide_chezy_channel(wide_chezy_channel):
    """Chézy's formula is Manning's with n = y^(1/6)/C: at the printed depth the friction slope must be the bed's."""
    chezy, slope, unit_discharge, depth = wide_chezy_channel
    width = 1e7
    friction = friction_slope(rectangle(width), depth ** (1.0 / 6.0) / chezy, width * unit_discharge, depth)
    assert (friction / slope) ** (1.0 / 3.0) * depth == pytest.approx(2.71, abs=0.006)


@pytest.fixture
def celerity_of_a_canal_pool():
    """b = 7 m, z = 1.5, y = 1.7 m, n = 0.02, S₀ = 0.0001, uniform: c = 0.81855 m/s, c/V = 1.42103. Derived."""
    return trapezoid(7.0, 1.5), 1.7, 0.02, 1e-4


def test_celerity_of_a_canal_pool(celerity_of_a_canal_pool):
    section, depth, roughness, slope = celerity_of_a_canal_pool
    discharge = slope**0.5 / friction_slope(section, roughness, 1.0, depth) ** 0.5
    celerity = kinematic_celerity(section, discharge, depth)
    velocity = discharge / (depth * (7.0 + 1.5 * depth))
    assert celerity == pytest.approx(0.81855, abs=6e-6)
    assert celerity / velocity == pytest.approx(1.42103, abs=6e-6)


@pytest.fixture
def celerity_of_a_wide_channel():
    """Wide channel: c = 5/3·V. Derived (Chow 1959, ch. 18). With V = 0.8 m/s: 1.3333 m/s."""
    return rectangle(1e6), 0.8, 2.0


def test_celerity_of_a_wide_channel(celerity_of_a_wide_channel):
    section, velocity, depth = celerity_of_a_wide_channel
    celerity = kinematic_celerity(section, velocity * 1e6 * depth, depth)
    assert celerity == pytest.approx(1.3333, abs=6e-5)

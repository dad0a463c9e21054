"""The steady state of a prismatic pool against an independent solution of the gradually varied flow equation."""

import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp
from tests.canals import day, prismatic_canal, scenario_of, trapezoid

from toeline import simulate

WIDTH, SIDE, ROUGHNESS, SLOPE, LENGTH, DISCHARGE = 6.0, 1.5, 0.016, 2e-4, 4000.0, 12.0
GRAVITY = 9.80665


@pytest.fixture(params=[2.2, 1.0], ids=["backwater", "drawdown"])
def tail_depth(request):
    """Depth beyond the lower end [m]; normal depth is 1.53 m, critical depth 0.70 m."""
    return request.param


def depth_slope(_, depth):
    """dy/dx = (S₀ − S_f)/(1 − Fr²) in a trapezoid (Chow 1959, ch. 9)."""
    area, top = (WIDTH + SIDE * depth) * depth, WIDTH + 2.0 * SIDE * depth
    perimeter = WIDTH + 2.0 * depth * math.hypot(1.0, SIDE)
    friction = (ROUGHNESS * DISCHARGE) ** 2 * perimeter ** (4.0 / 3.0) / area ** (10.0 / 3.0)
    return (SLOPE - friction) / (1.0 - DISCHARGE**2 * top / (GRAVITY * area**3))


def error_at(folder, tail_depth: float, spacing: float, inflow=DISCHARGE, length: str = "1 h") -> float:
    """Largest error of the levels at the end of a day [m]."""
    canal = prismatic_canal(trapezoid(WIDTH, SIDE, ROUGHNESS), LENGTH, SLOPE, {"kind": "level", "level": tail_depth})
    run = simulate(scenario_of(folder, canal, day(inflow, length=length, period={"spacing": spacing})))
    end = float(run.water_level[-1, -1] - run.bed_level[-1])
    chainage = run.chainage.values[::-1]
    exact = solve_ivp(depth_slope, (LENGTH, 0.0), [end], t_eval=chainage, rtol=1e-11, atol=1e-12).y[0][::-1]
    depth = (run.water_level[-1] - run.bed_level).values.astype(float)
    return float(np.max(np.abs(depth - exact)))


def test_levels_are_right_to_a_millimetre_at_100_m(tmp_path, tail_depth):
    assert error_at(tmp_path, tail_depth, 100.0) <= 1e-3


@pytest.mark.parametrize("coarse", [200.0, 100.0])
def test_error_falls_with_the_square_of_the_spacing(tmp_path, tail_depth, coarse):
    ratio = error_at(tmp_path, tail_depth, coarse) / error_at(tmp_path, tail_depth, 0.5 * coarse)
    assert math.log2(ratio) == pytest.approx(2.0, abs=0.2)


def test_time_loop_comes_to_rest_on_the_same_profile_from_another_flow(tmp_path, tail_depth):
    rise = {"shape": "steps", "values": [["+0 h", 5.0], ["+1 h", DISCHARGE]]}
    assert error_at(tmp_path, tail_depth, 100.0, rise, "48 h") <= 1e-3

"""A small pulse of inflow on fast uniform flow (Froude number 0.5), by its moments.

Between two places a linear wave gains time L/c on the mean and 2DL/c³ on the variance, c and D those of long waves,
whatever the pulse: the two forms of momentum are told apart without a fit. Sources as in test_waves.
"""

import numpy as np
import pytest
from tests.canals import day, prismatic_canal, rectangle, scenario_of

from toeline import simulate

WIDTH, DEPTH, VELOCITY, ROUGHNESS = 1000.0, 2.0, 2.2, 0.02
HYDRAULIC_RADIUS = WIDTH * DEPTH / (WIDTH + 2.0 * DEPTH)
SLOPE = (VELOCITY * ROUGHNESS / HYDRAULIC_RADIUS ** (2.0 / 3.0)) ** 2
DISCHARGE = VELOCITY * WIDTH * DEPTH
FROUDE_SQUARED = VELOCITY**2 / (9.80665 * DEPTH)
KINEMATIC_DIFFUSIVITY = DISCHARGE / (2.0 * WIDTH * SLOPE)
HALF_WIDTH = 1800.0
"""Standard deviation of the pulse [s]."""


@pytest.fixture(scope="module", params=[False, True], ids=["quasi-steady", "local inertia"])
def wave(request, tmp_path_factory):
    """Celerity [m/s], diffusivity [m²/s], and whether local inertia was kept."""
    canal = prismatic_canal(rectangle(WIDTH, ROUGHNESS), 60_000.0, SLOPE, {"kind": "normal depth", "slope": SLOPE})
    settings = {"level_tolerance": 1e-6, "longest_step": "1 min", "spacing": 200.0, "local_inertia": request.param}
    output = {"every": "1 h", "profiles_every": "1 min"}
    made = day(pulse(), length="10 h", period=settings, output=output)
    run = simulate(scenario_of(tmp_path_factory.mktemp("pulse"), canal, made))
    (mean_above, variance_above), (mean_below, variance_below) = (moments(run, x) for x in (10_000.0, 40_000.0))
    celerity = 30_000.0 / (mean_below - mean_above)
    return celerity, (variance_below - variance_above) * celerity**3 / 60_000.0, request.param


def pulse():
    seconds = np.arange(0.0, 10.0 * HALF_WIDTH + 1.0, 60.0)
    share = 1.0 + 0.001 * np.exp(-0.5 * ((seconds - 5.0 * HALF_WIDTH) / HALF_WIDTH) ** 2)
    values = [[f"+{second:g} s", q] for second, q in zip(seconds, DISCHARGE * share, strict=True)]
    return {"shape": "lines", "values": values}


def moments(run, chainage: float) -> tuple[float, float]:
    """Mean [s] and variance [s²] of the time at which the pulse passes."""
    time = (run.profile_time - run.profile_time[0]).values / np.timedelta64(1, "s")
    node = int(np.argmin(np.abs(run.chainage.values - chainage)))
    share = run.discharge.values[:, node] - DISCHARGE
    share = share / share.sum()
    mean = float(np.sum(share * time))
    return mean, float(np.sum(share * (time - mean) ** 2))


def test_celerity_of_a_wide_channel(wave):
    assert wave[0] == pytest.approx(5.0 / 3.0 * VELOCITY, rel=0.01)


def test_diffusivity(wave):
    _, diffusivity, is_inertial = wave
    share = 1.0 - (4.0 / 9.0 if is_inertial else 1.0) * FROUDE_SQUARED
    assert diffusivity == pytest.approx(KINEMATIC_DIFFUSIVITY * share, rel=0.03)

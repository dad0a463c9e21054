"""A small periodic disturbance on uniform flow travels and spreads as theory says.

Celerity 5/3 V (Kleitz-Seddon; wide Manning), diffusivity Q/(2TS₀)·(1 − Fr²) quasi-steady (derived for steady momentum
with one discharge a link), Q/(2TS₀)·(1 − 4/9 Fr²) with local inertia (Dooge; Ponce, from memory, and derived).
"""

import numpy as np
import pytest
from tests.canals import day, prismatic_canal, rectangle, scenario_of

from toeline import simulate

WIDTH, DEPTH, VELOCITY, ROUGHNESS = 400.0, 2.0, 0.8, 0.02
HYDRAULIC_RADIUS = WIDTH * DEPTH / (WIDTH + 2.0 * DEPTH)
SLOPE = (VELOCITY * ROUGHNESS / HYDRAULIC_RADIUS ** (2.0 / 3.0)) ** 2
DISCHARGE = VELOCITY * WIDTH * DEPTH
FROUDE_SQUARED = VELOCITY**2 / (9.80665 * DEPTH)
CELERITY = VELOCITY * (5.0 / 3.0 - 4.0 / 3.0 * DEPTH / (WIDTH + 2.0 * DEPTH))
DIFFUSIVITY = DISCHARGE / (2.0 * WIDTH * SLOPE)


def celerity_and_diffusivity(folder, period_hours: float, inertial: bool) -> tuple[float, float]:
    """Fit c and D of advection and diffusion to the decay and lag of a sine of inflow along a long channel."""
    period, count = period_hours * 3600.0, 144
    angle = 2.0 * np.pi * np.arange(6 * count) / count
    inflow = [[f"+{k * period / count:.0f} s", DISCHARGE * (1.0 + 0.01 * np.sin(a))] for k, a in enumerate(angle)]
    canal = prismatic_canal(rectangle(WIDTH, ROUGHNESS), 200_000.0, SLOPE, {"kind": "normal depth", "slope": SLOPE})
    canal["pools"][0]["target_level"] = DEPTH
    settings = {"spacing": 500.0, "level_tolerance": 1e-6, "local_inertia": inertial, "longest_step": "30 min"}
    output = {"every": "1 h", "profiles_every": "30 min"}
    length = f"{6 * period_hours:.0f} h"
    run = simulate(
        scenario_of(
            folder, canal, day({"shape": "lines", "values": inflow}, length=length, period=settings, output=output)
        )
    )
    return _fitted(run, 2.0 * np.pi / period, after=3.0 * period, until=6.0 * period)


def _fitted(run, frequency: float, after: float, until: float) -> tuple[float, float]:
    time = (run.profile_time - run.profile_time[0]).values / np.timedelta64(1, "s")
    kept = (time >= after) & (time < until)
    basis = np.stack([np.sin(frequency * time[kept]), np.cos(frequency * time[kept]), np.ones(kept.sum())], axis=1)
    (sine, cosine, _), *_ = np.linalg.lstsq(basis, run.water_level.values[kept].astype(float), rcond=None)
    inner = (run.chainage.values > 20_000.0) & (run.chainage.values < 60_000.0)
    place = run.chainage.values[inner]
    decay = -np.polyfit(place, np.log(np.hypot(sine, cosine)[inner]), 1)[0]
    lag = -np.polyfit(place, np.unwrap(np.arctan2(cosine, sine)[inner]), 1)[0]
    wave_number = lag - 1j * decay
    terms = np.array([wave_number, 1j * wave_number**2])
    return tuple(np.linalg.solve(np.array([terms.real, terms.imag]), [frequency, 0.0]))


def test_quasi_steady_wave(tmp_path):
    celerity, diffusivity = celerity_and_diffusivity(tmp_path, 12.0, inertial=False)
    assert celerity == pytest.approx(CELERITY, rel=0.01)
    assert diffusivity == pytest.approx(DIFFUSIVITY * (1.0 - FROUDE_SQUARED), rel=0.01)


def test_wave_with_local_inertia(tmp_path):
    celerity, diffusivity = celerity_and_diffusivity(tmp_path, 36.0, inertial=True)
    assert celerity == pytest.approx(CELERITY, rel=0.01)
    assert diffusivity == pytest.approx(DIFFUSIVITY * (1.0 - 4.0 / 9.0 * FROUDE_SQUARED), rel=0.01)

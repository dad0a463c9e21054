"""The passage of a ramp, on numbers set by hand."""

import numpy as np
import pytest
import xarray as xr

from toeline.findings.ramp import RampPassage, ramp_passage

MINUTES = np.arange(601)
BEGINS = 3600.0
STORED = 0.5 * 90.0 * 60.0
"""m³ of a rise of 0.5 m³/s that comes out an hour and a half later."""


def rise(starts: float, lasts: float = 60.0) -> np.ndarray:
    """From 0 to 1 along a straight line; both in minutes."""
    return np.clip((MINUTES - starts) / lasts, 0.0, 1.0)


@pytest.fixture
def run(run_by_hand) -> xr.Dataset:
    """5 m³/s, and from the first hour on 0.5 more; 90 minutes later all of that leaves, 0.1 of it as a delivery."""
    return run_by_hand(
        MINUTES,
        values={
            "canal_inflow": 5.0 + 0.5 * rise(60.0),
            "canal_outflow": 4.0 + 0.4 * rise(150.0),
            "delivery": (1.0 + 0.1 * rise(150.0))[:, None],
            "pool_losses": 0.0,
            "canal_storage": 7000.0 + STORED * rise(60.0, 150.0),
        },
    )


def passage(run: xr.Dataset) -> RampPassage:
    return ramp_passage(run, BEGINS, 600.0, 1200.0)


def test_a_ramp_that_comes_out_again_is_passed(run):
    found = passage(run)
    assert found.is_passed
    assert (found.rise, found.taken, found.passed_share) == pytest.approx((0.5, 0.1, 1.0))
    assert (found.stored, found.balance) == pytest.approx((STORED, STORED))
    assert (found.half_passed, found.volume_lag) == pytest.approx((5400.0, 5400.0))


def test_outflow_that_changes_before_the_ramp_is_drift(run):
    run["canal_outflow"][:30] += 0.02
    found = passage(run)
    assert (found.drift_share, found.is_passed) == (pytest.approx(0.04), False)


def test_a_ramp_that_is_lost_in_part_is_not_passed(run):
    run["canal_outflow"][:] = 4.0 + 0.3 * rise(150.0)
    found = passage(run)
    assert (found.passed_share, found.is_passed) == (pytest.approx(0.8), False)


def test_volume_that_the_discharges_do_not_explain_is_told(run):
    run["canal_storage"][-1] += 0.01 * STORED
    found = passage(run)
    assert (found.volume_gap_share, found.is_passed) == (pytest.approx(0.01, rel=0.02), False)


def test_an_outflow_that_swings_is_not_passed(run):
    run["canal_outflow"][:] += 0.04 * np.exp(-(((MINUTES - 300.0) / 20.0) ** 2))
    found = passage(run)
    assert (found.fall_back_share, found.is_passed) == (pytest.approx(0.1), False)

"""The mass test, on numbers set by hand."""

import numpy as np
import pytest
import xarray as xr

from toeline.findings.closure import LEDGER_TOLERANCE, POOL_TOLERANCE, closure, volume_passed

MINUTES = np.arange(61)
INFLOW = 2.0 + MINUTES / 60.0
"""m³/s, rising along a straight line: 9000 m³ in the hour."""


@pytest.fixture
def closed(run_by_hand) -> xr.Dataset:
    """The Orchard pool takes in the inflow, delivers 0.5, lets 1 out and stores the rest; the Mill pool passes 1 on."""
    stored = 60.0 * (0.5 * MINUTES + MINUTES**2 / 120.0)
    return run_by_hand(
        MINUTES,
        values={
            "pool_inflow": np.stack([INFLOW, np.ones(61)], axis=1),
            "pool_outflow": 1.0,
            "delivery": 0.5,
            "pool_losses": 0.0,
            "pool_volume": np.stack([1000.0 + stored, np.full(61, 500.0)], axis=1),
            "canal_storage": 1500.0 + stored,
            "canal_inflow_volume": volume_passed(INFLOW, np.arange(61) * np.timedelta64(1, "m")),
        },
    )


def test_volume_passed_is_the_area_under_the_discharge():
    times = np.array([0, 60, 180], "timedelta64[s]")
    assert volume_passed(np.array([1.0, 3.0, 3.0]), times).tolist() == [0.0, 120.0, 480.0]


def test_a_run_that_keeps_its_water_is_closed(closed):
    found = closure(closed)
    assert found.is_closed
    assert found.worst_pool.share < 1e-9
    assert found.canal.handled == pytest.approx(9000.0)


def test_the_worst_residual_counts_though_it_has_gone_at_the_end(closed, at):
    residual = np.zeros(61)
    residual[30] = -2.0 * LEDGER_TOLERANCE * 9000.0
    closed["balance_residual"] = ("time", residual)
    found = closure(closed)
    assert (found.canal.volume.time, found.is_closed) == (at(30), False)
    assert found.canal.share == pytest.approx(2.0 * LEDGER_TOLERANCE)


def test_a_pool_that_loses_water_fails_though_the_ledger_of_the_canal_closes(closed):
    closed["pool_volume"][:, 1] -= np.where(MINUTES > 40, 2.0 * POOL_TOLERANCE * 3600.0, 0.0)
    found = closure(closed)
    assert (found.worst_pool.where, found.is_closed) == ("Mill pool", False)
    assert found.worst_pool.share == pytest.approx(2.0 * POOL_TOLERANCE)


def test_water_over_an_escape_is_no_loss(closed):
    closed["pool_outflow"][:, 1] -= 0.4
    assert not closure(closed).is_closed
    closed["escape_discharge"] = (("time", "escape"), np.full((61, 1), 0.4))
    closed["escape_pool"] = ("escape", ["Mill pool"])
    assert closure(closed).is_closed


def test_a_canal_without_water_is_closed(run_by_hand):
    assert closure(run_by_hand([0, 1], values={"pool_losses": 0.0, "balance_residual": 0.0})).is_closed

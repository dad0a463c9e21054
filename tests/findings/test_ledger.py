"""The water ledger closes on a run whose volumes are known, for the canal and pool by pool."""

import numpy as np
import pytest

from toeline.findings.ledger import acre_feet, ledger


@pytest.fixture
def book(run_by_hand):
    return ledger(
        run_by_hand(
            [0, 60, 120],
            values={
                "canal_inflow_volume": [0.0, 3600.0, 7200.0],
                "canal_outflow_volume": [0.0, 2000.0, 4100.0],
                "delivery_volume": np.array([[0.0, 500.0, 1000.5]]).T,
                "escape_volume": np.array([[0.0, 0.0, 70.0]]).T,
                "pool_inflow_volume": np.array([[0.0, 3600.0, 7200.0], [0.0, 2500.0, 5180.0]]).T,
                "pool_outflow_volume": np.array([[0.0, 2500.0, 5180.0], [0.0, 2000.0, 4100.0]]).T,
                "pool_loss_volume": np.array([[0.0, 9.0, 19.0], [0.0, -40.0, -90.0]]).T,
                "pool_volume": np.array([[10_000.0, 10_600.0, 11_000.0], [8_000.0, 8_500.0, 9_099.0]]).T,
            },
        )
    )


def test_entries_are_volumes_over_the_run(book):
    assert (book.canal.inflow, book.canal.outflow) == (7200.0, 4100.0)
    assert book.canal.deliveries == {"North lateral": 1000.5}
    assert book.canal.escapes == {"Storm escape": 70.0}
    assert book.canal.losses == 19.0 - 90.0
    assert book.canal.storage_change == 2099.0


def test_the_residual_is_what_is_left_over(book):
    assert book.canal.residual == pytest.approx(7200 - 4100 - 1000.5 - 70 + 71 - 2099, abs=1e-9)


def test_every_pool_has_its_own_account_and_residual(book):
    orchard, mill = book.pools["Orchard pool"], book.pools["Mill pool"]
    assert (orchard.delivered, orchard.spilled, mill.delivered, mill.spilled) == (1000.5, 0.0, 0.0, 70.0)
    assert orchard.residual == pytest.approx(7200 - 5180 - 1000.5 - 19 - 1000, abs=1e-9)
    assert mill.residual == pytest.approx(5180 - 4100 - 70 + 90 - 1099, abs=1e-9)


def test_a_run_that_never_made_a_step_has_an_empty_ledger(run_by_hand):
    book = ledger(run_by_hand([], values={}))
    assert (book.canal.inflow, book.canal.delivered, book.canal.residual) == (0.0, 0.0, 0.0)


def test_an_acre_foot_is_43560_cubic_feet():
    """Exact by definition of the international foot, 0.3048 m."""
    assert acre_feet(43_560 * 0.3048**3) == pytest.approx(1.0, rel=1e-12)

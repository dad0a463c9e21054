"""The water ledger closes on a run whose volumes are known."""

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
                "pool_volume": np.array([[10_000.0, 10_600.0, 11_000.0], [8_000.0, 8_500.0, 9_099.0]]).T,
            },
        )
    )


def test_entries_are_volumes_over_the_run(book):
    assert (book.inflow, book.outflow) == (7200.0, 4100.0)
    assert book.deliveries == {"North lateral": 1000.5}
    assert book.storage_changes == {"Orchard pool": 1000.0, "Mill pool": 1099.0}


def test_the_residual_is_what_is_left_over(book):
    assert (book.delivered, book.storage_change) == (1000.5, 2099.0)
    assert book.residual == pytest.approx(0.5, abs=1e-9)


def test_a_run_that_never_made_a_step_has_an_empty_ledger(run_by_hand):
    book = ledger(run_by_hand([], values={}))
    assert (book.inflow, book.delivered, book.residual) == (0.0, 0.0, 0.0)


def test_an_acre_foot_is_43560_cubic_feet():
    """Exact by definition of the international foot, 0.3048 m."""
    assert acre_feet(43_560 * 0.3048**3) == pytest.approx(1.0, rel=1e-12)

"""Spills over escapes: when they begin and end, and how much they let out."""

import numpy as np
import pytest

from toeline.findings.escapes import LEAST_SPILL, escape_spills


def test_spill_begins_and_ends_between_the_rows_by_the_crossing(run_by_hand, at):
    discharge = np.array([[0.0, 2 * LEAST_SPILL, 0.5, 0.0]]).T
    spill = escape_spills(
        run_by_hand(
            [0, 10, 20, 30],
            values={"escape_discharge": discharge, "escape_volume": np.array([[0.0, 0.0, 150.0, 300.0]]).T},
        )
    )[0]
    assert (spill.escape, spill.pool, spill.volume) == ("Storm escape", "Mill pool", 300.0)
    assert len(spill.spills) == 1
    assert spill.spills[0].start == at(5)
    assert at(29) < spill.spills[0].end < at(30)
    assert (spill.greatest.value, spill.greatest.time) == (0.5, at(20))


def test_dry_crest_does_not_spill(run_by_hand):
    spill = escape_spills(run_by_hand([0, 10], values={"escape_discharge": LEAST_SPILL}))[0]
    assert spill.spills == ()


def test_run_without_a_step_has_no_spill(run_by_hand):
    spill = escape_spills(run_by_hand([], values={}))[0]
    assert (spill.volume, spill.spills) == (0.0, ())
    assert spill.greatest.value != pytest.approx(0.0, nan_ok=True)

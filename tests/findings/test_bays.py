"""How unevenly bays that move apart stood open."""

import numpy as np
import pytest

from toeline.findings.bays import uneven_bays


def test_greatest_difference_is_that_of_neighbours(run_by_hand, at):
    openings = np.array([[0.3, 0.3, 0.3], [0.3, 0.6, 0.4], [0.8, 0.6, 0.4]])
    gate = uneven_bays(run_by_hand([0, 10, 20], values={"bay_opening": openings}))[0]
    assert (gate.gate, gate.bays) == ("Mill check", (1, 2))
    assert gate.difference.value == pytest.approx(0.3)
    assert gate.difference.time == at(10)


def test_run_without_a_step_has_no_uneven_bays(run_by_hand):
    assert uneven_bays(run_by_hand([], values={})) == []

"""Moves on the page of a run: every gate in a row, alike refusals of a rule as one line."""

import numpy as np
from tests.report.test_run_summary import section

from toeline.report.run_summary import run_summary

REFUSED = 2


def run_with(invented_run, minutes, status, reasons):
    count = len(minutes)
    return invented_run(
        order_time=np.array(minutes) * 60.0, order_gate=np.full(count, "Middle check", object),
        order_source=np.full(count, "hold upstream level", object), order_kind=np.zeros(count, int),
        order_value=np.full(count, 0.5), order_opening_before=np.full(count, 0.40),
        order_opening_after=np.where(np.array(status) == REFUSED, 0.40, 0.45), order_completed=np.array(minutes) * 60.0,
        order_status=np.array(status), order_reason=np.array(reasons, dtype=object),
    )  # fmt: skip


def test_moves_of_rules_are_reported_by_the_hour(invented_run, metric):
    run = run_with(invented_run, [10, 20, 30], [0, 0, 0], ["", "", ""])
    moves = section(run_summary(run, metric), "Moves")
    assert "Middle check 3 3 0.8 3 from 06:10 0 0.15 m" in moves
    assert "Last check 0 0 0.0 - 0 0.00 m" in moves
    assert section(run_summary(run, metric), "Orders") == "No orders were given."


def test_alike_refusals_are_one_line(invented_run, metric):
    stuck = [f"the leaf is stuck for another {left} min" for left in (90, 85, 80)]
    run = run_with(invented_run, [10, 20, 25, 30], [0, REFUSED, REFUSED, REFUSED], ["", *stuck])
    assert (
        "06:20 to 06:30 Middle check, hold upstream level: 3 moves refused: the leaf is stuck for another 1 h 30 min"
        in section(run_summary(run, metric), "Moves")
    )


def test_a_run_without_moves_has_no_such_section(invented_run, metric):
    assert "MOVES" not in run_summary(invented_run(), metric)

"""Moves of the gates, counted from a list of orders."""

import numpy as np
import pytest
import xarray as xr

from toeline.findings.moves import gate_moves, moves_begun

START = np.datetime64("2031-05-04T00:00:00", "ns")
ACCEPTED, TRIMMED, REFUSED, REPLACED = range(4)


def run(*orders: tuple[str, float, float, float, int, str]) -> xr.Dataset:
    """Orders as gate, minute, opening before and after, status, source."""
    gates, minutes, before, after, status, source = (list(column) for column in zip(*orders, strict=True))
    flags = {"flag_meanings": "accepted trimmed refused replaced"}
    return xr.Dataset(
        {
            "gate": ("gate", ["Upper check", "Lower check"]),
            "bay_gate": ("bay", np.array([], object)),
            "order_gate": ("order", gates),
            "order_bay": ("order", np.zeros(len(gates), np.int32)),
            "order_time": ("order", START + np.array(minutes) * np.timedelta64(60_000_000_000, "ns")),
            "order_opening_before": ("order", np.array(before, np.float32)),
            "order_opening_after": ("order", np.array(after, np.float32)),
            "order_status": ("order", np.array(status, np.int8), flags),
            "order_source": ("order", source),
        }
    )


def test_moves_are_counted_by_gate_and_source():
    upper, lower = gate_moves(
        run(
            ("Upper check", 0, 0.50, 0.55, ACCEPTED, "schedule"),
            ("Upper check", 30, 0.55, 0.60, TRIMMED, "hold discharge"),
            ("Upper check", 40, 0.60, 0.60, REFUSED, "hold discharge"),
            ("Upper check", 50, 0.60, 0.60, ACCEPTED, "schedule"),  # where the leaf stands already
            ("Upper check", 89, 0.60, 0.58, REPLACED, "hold discharge"),
            ("Upper check", 100, 0.58, 0.63, ACCEPTED, "schedule"),
        )
    )
    assert upper.by_source == {"hold discharge": 2, "schedule": 2}
    assert (upper.moves, upper.reversals) == (4, 2)  # up, up, down, up
    assert upper.travel == pytest.approx(0.05 + 0.05 + 0.02 + 0.05)
    assert (lower.moves, lower.busiest, lower.travel) == (0, 0, 0.0)
    assert np.isnat(lower.busiest_from)


def test_the_busiest_hour_begins_with_a_move_and_leaves_its_end_out():
    minutes = (0, 10, 60, 65, 119, 120)  # 60, 65 and 119 within the hour from 60; 120 no more
    [upper, _] = gate_moves(run(*(("Upper check", m, 0.5, 0.6, ACCEPTED, "schedule") for m in minutes)))
    assert upper.busiest == 3
    assert upper.busiest_from == START + np.timedelta64(10, "m")  # 10, 60, 65


def test_reversals_are_counted_leaf_by_leaf():
    two_bays = run(
        ("Upper check", 10, 0.3, 0.4, ACCEPTED, "schedule"),
        ("Upper check", 20, 0.5, 0.4, ACCEPTED, "schedule"),
        ("Upper check", 30, 0.4, 0.5, ACCEPTED, "schedule"),
    )
    two_bays["order_bay"] = ("order", np.array([1, 2, 1], np.int32))
    assert gate_moves(two_bays)[0].reversals == 0


def test_one_order_to_a_gate_whose_bays_move_apart_is_one_move_and_its_travel_that_of_a_leaf():
    two_bays = run(
        ("Upper check", 10, 0.30, 0.40, ACCEPTED, "schedule"),
        ("Upper check", 10, 0.20, 0.30, ACCEPTED, "schedule"),
        ("Upper check", 40, 0.40, 0.46, ACCEPTED, "schedule"),
    )
    two_bays["order_bay"] = ("order", np.array([1, 2, 1], np.int32))
    two_bays["bay_gate"] = ("bay", ["Upper check", "Upper check"])
    [upper, _] = gate_moves(two_bays)
    assert (upper.moves, upper.busiest) == (2, 2)
    assert upper.travel == pytest.approx((0.10 + 0.06 + 0.10) / 2)
    assert moves_begun(two_bays, "Upper check").size == 2

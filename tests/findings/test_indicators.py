"""Indicators of hand-made runs: what is counted, what is left out, and what is said about it."""

import json

import numpy as np
import pytest

from toeline.findings.deliveries import adequacy, dependability, efficiency, equity
from toeline.findings.gate_use import limit_crossings, seconds_avoided, travel
from toeline.findings.indicators import indicators
from toeline.results.variables import FLOW_STATES, JUMP_STATES

MINUTES = [0, 10, 20, 30]
MEASURES = (adequacy, efficiency, dependability, equity)
FREE, NEAR, DROWNED, CLOSED = (FLOW_STATES.index(n) for n in ("free", "near_modular_limit", "drowned", "closed"))


def found(run, name, where=""):
    """The one indicator of that name and place, or None."""
    (indicator,) = [i for i in indicators(run) if (i.name, i.where) == (name, where)] or [None]
    return indicator


@pytest.mark.parametrize("measure", MEASURES)
def test_without_any_demand_there_is_no_measure(measure):
    assert measure(np.full((3, 2), 0.2), np.full((3, 2), np.nan)) is None
    assert measure(np.zeros((3, 2)), np.zeros((3, 2))) is None


@pytest.mark.parametrize("measure", MEASURES)
def test_an_offtake_without_demand_changes_no_measure(measure):
    delivered, required = np.array([[8.0, 5.0], [9.0, 6.0]]), np.array([[10.0, 5.0], [10.0, 8.0]])
    with_orifice = np.column_stack([delivered, [1.0, 2.0]]), np.column_stack([required, [np.nan, 0.0]])
    assert measure(*with_orifice) == pytest.approx(measure(delivered, required))


def test_samples_without_demand_are_left_out():
    delivered, required = np.array([[5.0, 0.0], [10.0, 4.0]]), np.array([[10.0, 0.0], [10.0, 4.0]])
    assert adequacy(delivered, required) == pytest.approx(2.5 / 3)
    assert equity(delivered, required) == pytest.approx(0.0)  # one time alone has two offtakes to compare
    assert dependability(delivered, required) == pytest.approx(0.25 / 0.75)


def test_nothing_delivered_at_all_is_inadequate_and_not_wasteful():
    delivered, required = np.zeros((3, 2)), np.ones((3, 2))
    assert adequacy(delivered, required) == 0.0
    assert efficiency(delivered, required) == 1.0
    assert equity(delivered, required) is None  # 0/0: all are equally without water


def test_more_than_asked_is_adequate_and_inefficient():
    delivered, required = np.full((3, 2), 2.0), np.ones((3, 2))
    assert (adequacy(delivered, required), efficiency(delivered, required)) == (1.0, 0.5)


def test_delivery_indicators_say_what_was_counted(run_by_hand):
    demand = np.array([[0.0], [0.4], [0.4], [0.4]])
    run = run_by_hand(MINUTES, values={"demand": demand, "delivery": demand * 0.5})
    assert found(run, "adequacy").value == pytest.approx(0.5)
    assert found(run, "adequacy").note == (
        "samples: 3, output steps: 4, offtakes with a demand: 1; every sample counts once; "
        "left out, being without demand then: 1"
    )
    assert found(run, "equity") is None
    assert "population" in found(run, "dependability").note


def test_volumes_stand_for_the_time_beside_each_step(run_by_hand):
    demand = np.full((4, 1), 0.5)
    delivery = np.array([[0.5], [0.3], [0.5], [0.4]])
    run = run_by_hand(MINUTES, values={"demand": demand, "delivery": delivery})
    assert found(run, "volume not delivered", "North lateral").value == pytest.approx(0.2 * 600.0 + 0.1 * 300.0)
    assert found(run, "delivery performance ratio").value == pytest.approx(1.0 - 150.0 / 900.0)


def test_tail_end_supply_counts_the_samples_of_the_last_offtake(run_by_hand):
    run = run_by_hand(
        MINUTES, values={"demand": np.full((4, 1), 0.5), "delivery": np.array([[0.5], [0.48], [0.4], [0.0]])}
    )
    assert found(run, "tail-end supply ratio", "North lateral").value == 0.5


def test_a_day_without_demand_has_no_delivery_indicators(run_by_hand):
    names = {indicator.name for indicator in indicators(run_by_hand(MINUTES, values={"demand": np.nan}))}
    assert not names & {"adequacy", "delivery performance ratio", "tail-end supply ratio"}


def test_level_errors_are_parts_of_the_target_depth(run_by_hand):
    minutes = [0, 60, 120, 180]
    run = run_by_hand(
        minutes,
        values={
            "pool_tail_level": np.stack([[102.0, 102.2, 102.1, 102.1], [0, 0, 0, 0]], axis=1),
            "pool_target_level": [102.0, np.nan],
            "node_pool": [0, 0, 1, 1],
            "bed_level": [100.5, 100.0, 90.0, 89.0],
        },
    )
    assert found(run, "maximum absolute level error", "Orchard pool").value == pytest.approx(0.1)
    assert found(run, "integrated absolute level error", "Orchard pool").value == pytest.approx(0.4 / 2.0 / 3.0)
    assert found(run, "steady-state level error", "Orchard pool").value == pytest.approx(0.4 / 3.0 / 2.0)
    assert found(run, "maximum absolute level error", "Mill pool") is None


def test_a_run_shorter_than_two_hours_has_no_steady_state_error(run_by_hand):
    values = {"pool_target_level": [1.0, 1.0], "node_pool": [0, 0, 1, 1], "bed_level": 0.0}
    run = run_by_hand([0, 60, 119], values=values)
    assert found(run, "maximum absolute level error", "Orchard pool").value == pytest.approx(1.0)
    assert found(run, "steady-state level error", "Orchard pool") is None


@pytest.mark.parametrize(
    ("states", "crossings"),
    [
        ([FREE, FREE, FREE], 0),
        ([FREE, DROWNED, FREE], 2),
        ([FREE, NEAR, DROWNED], 1),
        ([FREE, NEAR, FREE, NEAR, FREE], 0),
        ([DROWNED, CLOSED, FREE], 1),
        ([NEAR, NEAR], 0),
    ],
)
def test_only_a_passage_through_the_whole_band_crosses_the_modular_limit(states, crossings):
    states = np.array(states)
    assert limit_crossings(states == FREE, states == DROWNED) == crossings


def test_travel_counts_both_ways():
    assert travel(np.array([0.1, 0.4, 0.2])) == pytest.approx(0.5)


@pytest.mark.parametrize(
    ("openings", "seconds"),
    [
        ([0.25, 0.25], 60.0),  # held inside
        ([0.20, 0.20], 0.0),  # held at the edge
        ([0.10, 0.50], 15.0),  # passed
        ([0.50, 0.25], 12.0),  # stopped inside
        ([0.00, 0.10], 0.0),
    ],
)
def test_time_at_avoided_openings(openings, seconds):
    times = np.array(["2031-05-04T00:00", "2031-05-04T00:01"], "datetime64[ns]")
    assert seconds_avoided(np.array(openings), times, [[0.2, 0.3]]).sum() == pytest.approx(seconds)


def test_hours_of_gates(run_by_hand):
    states = np.stack([[DROWNED, NEAR, NEAR, FREE], [FREE] * 4], axis=1)
    beyond = np.stack([[0, 0, JUMP_STATES.index("beyond_protection"), 0], [0] * 4], axis=1)
    openings = np.stack([[0.25] * 4, [0.9] * 4], axis=1)
    run = run_by_hand(MINUTES, values={"gate_flow_state": states, "jump_state": beyond, "gate_opening": openings})
    run.attrs["avoided_openings"] = json.dumps({"Orchard check": [[0.2, 0.3]]})
    assert found(run, "modular-limit crossings", "Orchard check").value == 1
    assert found(run, "hours near the modular limit", "Orchard check").value == pytest.approx(1 / 3)
    assert found(run, "hours at avoided openings", "Orchard check").value == pytest.approx(0.5)
    assert found(run, "hours at avoided openings", "Mill check") is None
    assert found(run, "hours with a jump beyond protection", "Orchard check").value == pytest.approx(1 / 6)
    assert found(run, "hours of flow: free", "Mill check").value == pytest.approx(0.5)


def limit(kind, value, unit, places, **keys):
    return {"kind": kind, "limit": value, "unit": unit, "places": places, "source": "x"} | keys


def test_limits_give_the_part_used_or_the_room_left(run_by_hand):
    levels = np.stack([[2.0, 2.0, 1.9, 1.9], [2.0] * 4], axis=1)
    run = run_by_hand(MINUTES, values={"pool_tail_level": levels})
    run.attrs["limits"] = json.dumps(
        [
            limit("fall", 0.2, "m", ["Orchard pool"], window=600.0),
            limit("below", 1.5, "m", ["Orchard pool"], measured_from="datum", at="lower end"),
        ]
    )
    used, room = found(run, "part of the limit used: fall in 10 min"), found(run, "room to the limit: level")
    assert (used.value, used.unit, used.better) == (pytest.approx(50.0), "%", "lower")
    assert (room.value, room.unit, room.better) == (pytest.approx(0.4), "m", "higher")
    assert room.note == "Orchard pool, lower end"


def test_limits_of_one_name_are_told_apart(run_by_hand):
    run = run_by_hand(MINUTES, values={})
    falls = [limit("fall", value, "m", ["Orchard pool"], window=600.0) for value in (0.1, 0.2)]
    run.attrs["limits"] = json.dumps(falls)
    names = [indicator.name for indicator in indicators(run) if "limit used" in indicator.name]
    assert names == [f"part of the limit used: fall in 10 min (limit {number} of the canal file)" for number in (1, 2)]


def test_volumes_spilled_and_lost_are_told_where_the_run_has_them(run_by_hand):
    run = run_by_hand(MINUTES, values={})
    assert found(run, "volume lost") is None
    assert found(run.isel(escape=[]), "volume spilled") is None
    with_escapes = run.isel(escape=[0, 0]).assign(
        escape_volume=(("time", "escape"), [[0.0, 1.0], [2.0, 1.0], [3.0, 1.0], [5.0, 2.0]]),
        pool_loss_volume=(("time", "pool"), [[0.0, 0.0], [1.0, 0.0], [2.0, 0.0], [3.0, 4.0]]),
    )
    assert found(with_escapes, "volume lost").value == pytest.approx(7.0)
    assert found(with_escapes.assign_coords(escape=["one", "two"]), "volume spilled").value == pytest.approx(6.0)


def test_every_indicator_is_a_finite_number_and_stands_once(run_by_hand):
    run = run_by_hand(MINUTES, values={"pool_target_level": np.nan, "demand": np.nan})
    found_all = indicators(run)
    assert all(np.isfinite(indicator.value) for indicator in found_all)
    assert len({(indicator.name, indicator.where) for indicator in found_all}) == len(found_all)


def test_a_run_without_a_step_has_none(run_by_hand):
    assert indicators(run_by_hand([], values={})) == []


def test_a_run_of_one_step_has_finite_indicators(run_by_hand):
    values = {"demand": 0.5, "delivery": 0.4, "pool_target_level": 1.0}
    assert all(np.isfinite(indicator.value) for indicator in indicators(run_by_hand([0], values=values)))

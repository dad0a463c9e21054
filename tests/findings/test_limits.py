"""Every kind of limit on hand-made runs with known answers."""

import json

import numpy as np
import pytest

from toeline.findings.incidents import incidents
from toeline.findings.limit_incidents import limit_uses
from toeline.findings.watches import SURGE_BOUND
from toeline.results.variables import FLOW_STATES

MINUTES = [0, 10, 20, 30, 40, 50, 60]
NEAR, FREE = FLOW_STATES.index("near_modular_limit"), FLOW_STATES.index("free")
BOTH_POOLS, BOTH_GATES = ["Orchard pool", "Mill pool"], ["Orchard check", "Mill check"]
SOURCE = "standing order 7"
NO_CALM = np.zeros(7)


def of_first(series):
    """A series at the first of two pools or gates; 0 at the second."""
    return np.stack([np.asarray(series, float), NO_CALM], axis=1)


@pytest.fixture
def limited(run_by_hand):
    """Makes a run with one limit."""

    def make(kind, limit, unit, places, values, profile_minutes=(), **keys):
        run = run_by_hand(MINUTES, profile_minutes, values=values)
        entry = {"kind": kind, "limit": limit, "unit": unit, "places": places, "source": SOURCE} | keys
        run.attrs["limits"] = json.dumps([entry])
        return run

    return make


def test_a_fall_is_found_between_the_steps(limited, at):
    levels = of_first([2.0, 2.0, 2.0, 1.8, 1.6, 1.6, 1.6])
    run = limited("fall", 0.1, "m", BOTH_POOLS, {"pool_tail_level": levels}, window=600.0)
    (incident,) = incidents(run)
    assert (incident.what, incident.where) == ("fall in 10 min over the limit", "Orchard pool, lower end")
    assert (incident.start, incident.end) == (at(25), at(45))
    assert (incident.worst, incident.limit, incident.unit) == (pytest.approx(0.2), 0.1, "m")
    assert (incident.source, incident.window) == (SOURCE, 600.0)


def test_a_rise_is_no_fall(limited):
    levels = of_first([1.0, 1.0, 1.0, 1.2, 1.4, 1.4, 1.4])
    assert incidents(limited("fall", 0.1, "m", BOTH_POOLS, {"pool_head_level": levels}, window=600.0)) == []
    (incident,) = incidents(limited("rise", 0.1, "m", BOTH_POOLS, {"pool_head_level": levels}, window=600.0))
    assert (incident.what, incident.where) == ("rise in 10 min over the limit", "Orchard pool, upper end")


def test_a_fall_as_large_as_the_limit_does_not_pass_it(limited):
    levels = of_first([2.0, 2.0, 2.0, 1.75, 1.75, 1.75, 1.75])
    assert incidents(limited("fall", 0.25, "m", BOTH_POOLS, {"pool_tail_level": levels}, window=600.0)) == []


@pytest.mark.parametrize(
    ("kind", "reference", "limit", "worst", "what"),
    [
        ("above", "datum", 103.15, 103.3, "level over the limit"),
        ("above", "target", 0.15, 0.3, "height above target over the limit"),
        ("above", "bed", 1.15, 1.3, "depth over the limit"),
        ("below", "datum", 102.85, 102.7, "level below the limit"),
        ("below", "target", 0.15, 0.3, "drop below target over the limit"),
        ("below", "bed", 0.85, 0.7, "depth below the limit"),
    ],
)
def test_levels_from_datum_target_and_bed(limited, at, kind, reference, limit, worst, what):
    way = 1.0 if kind == "above" else -1.0
    values = {
        "pool_tail_level": of_first(103.0 + way * np.array([0.0, 0.1, 0.2, 0.3, 0.2, 0.1, 0.0])),
        "pool_target_level": [103.0, np.nan],
        "node_pool": [0, 0, 1, 1],
        "bed_level": [102.5, 102.0, 90.0, 89.0],
    }
    run = limited(kind, limit, "m", ["Orchard pool"], values, measured_from=reference, at="lower end")
    (incident,) = incidents(run)
    assert (incident.what, incident.where) == (what, "Orchard pool, lower end")
    assert (incident.start, incident.end, incident.worst_time) == (at(15), at(45), at(30))
    assert incident.worst == pytest.approx(worst)


def test_a_depth_at_the_upper_end_is_over_the_bed_there(limited):
    values = {
        "pool_head_level": of_first([103.0] * 7),
        "node_pool": [0, 0, 1, 1],
        "bed_level": [102.5, 102.0, 90.0, 89.0],
    }
    run = limited("below", 0.6, "m", ["Orchard pool"], values, measured_from="bed", at="upper end")
    (incident,) = incidents(run)
    assert (incident.where, incident.worst, incident.runs_to_end) == ("Orchard pool, upper end", 0.5, True)


def test_a_pool_without_a_target_is_not_watched_for_it(limited):
    values = {"pool_target_level": np.nan}
    run = limited("above", 0.1, "m", ["Mill pool"], values, measured_from="target", at="lower end")
    assert incidents(run) == []
    (use,) = limit_uses(run)
    assert np.isnan(use.worst.value)


def test_freeboard_has_the_surges_from_both_gates_taken_off_and_shown_apart(limited, at):
    values = {
        "pool_bank_margin": np.add(of_first([0.5] * 7), [0.0, 9.0]),
        "gate_upstream_pool": ["head", "Orchard pool"],
        "gate_downstream_pool": ["Orchard pool", "Mill pool"],
        "surge_height_bound_downstream": np.stack([[0, 0, 0.125, 0.125, 0.125, 0, 0], NO_CALM], axis=1),
        "surge_height_bound_upstream": np.stack([NO_CALM, [0, 0, 0, 0.25, 0.25, -0.5, -0.5]], axis=1),
    }
    (incident,) = incidents(limited("freeboard", 0.25, "m", BOTH_POOLS, values, measured_from="bank"))
    assert (incident.what, incident.where) == ("freeboard to the bank below the limit", "Orchard pool")
    assert (incident.start, incident.end) == (at(30), at(50))  # a surge comes and goes at once
    assert incident.worst == pytest.approx(0.125)
    assert [(measure.name, measure.value) for measure in incident.also] == [(SURGE_BOUND, pytest.approx(0.375))]


def test_velocity_over_the_named_surfaces_alone(limited, at):
    values = {
        "velocity": np.array([[1.0, 1.0, 1.0, 0.0], [3.0, 1.5, 1.0, 0.0], [1.0, 1.0, -2.0, 0.0], [1.0, 1.0, 1.0, 0.0]]),
        "node_pool": [0, 0, 0, 1],
        "surface": [0, 1, 1, 1],
        "chainage": [0.0, 10.0, 20.0, 30.0],
    }
    run = limited("velocity", 1.25, "m s-1", BOTH_POOLS, values, [0, 10, 20, 30], surfaces=["riprap"])
    (incident,) = incidents(run)
    assert (incident.where, incident.worst, incident.chainage) == ("Orchard pool", 2.0, 20.0)
    assert (incident.start, incident.end) == (at(5), at(27.5))


def ordered(run_by_hand, minutes, gate="Orchard check", statuses=None, **limit):
    """A run with moves of 5 cm at the given minutes."""
    count = len(minutes)
    orders = {
        "order_time": np.array(minutes) * 60.0,
        "order_gate": np.array([gate] * count, dtype=object),
        "order_opening_before": np.full(count, 0.4),
        "order_opening_after": np.full(count, 0.45),
        "order_status": np.array(statuses or [0] * count),
    }
    run = run_by_hand(MINUTES, values=orders)
    entry = {"kind": "moves", "unit": "count", "places": BOTH_GATES, "source": SOURCE} | limit
    run.attrs["limits"] = json.dumps([entry])
    return run


def test_moves_count_until_one_window_later(run_by_hand, at):
    run = ordered(run_by_hand, [5, 15, 22, 45], limit=2, window=1200.0)
    (incident,) = incidents(run)
    assert (incident.what, incident.where) == ("moves in 20 min over the limit", "Orchard check")
    assert (incident.start, incident.end, incident.worst) == (at(22), at(25), 3.0)


def test_a_move_exactly_one_window_later_opens_a_new_count(run_by_hand):
    assert incidents(ordered(run_by_hand, [5, 25, 45], limit=1, window=1200.0)) == []


def test_refused_orders_are_no_moves(run_by_hand):
    assert incidents(ordered(run_by_hand, [5, 6], statuses=[0, 2], limit=1, window=1200.0)) == []


def test_head_on_an_offtake(limited, at):
    values = {"offtake_level": [[2.0], [1.8], [1.6], [1.4], [1.6], [1.8], [2.0]], "offtake_sill_level": 1.0}
    (incident,) = incidents(limited("head on offtake", 0.5, "m", ["North lateral"], values))
    assert (incident.what, incident.where) == ("head on the offtake below the limit", "North lateral")
    assert (incident.start, incident.end, incident.worst) == (at(25), at(35), pytest.approx(0.4))


def test_time_near_the_modular_limit_adds_up(limited, at):
    states = np.stack([[FREE, NEAR, NEAR, NEAR, FREE, FREE, FREE], [FREE] * 7], axis=1)
    run = limited("near modular limit", 900.0, "s", BOTH_GATES, {"gate_flow_state": states}, window=3600.0)
    (incident,) = incidents(run)
    assert (incident.what, incident.where) == ("time near the modular limit in 1 h over the limit", "Orchard check")
    assert (incident.start, incident.worst, incident.runs_to_end) == (at(20), 1800.0, True)


def test_time_at_avoided_openings_counts_while_the_leaf_passes(limited):
    """From 0.1 to 0.5 m in ten minutes, and back: a quarter of the way each time is inside the band."""
    openings = np.stack([[0.1, 0.1, 0.5, 0.5, 0.1, 0.1, 0.1], [0.25] * 7], axis=1)
    run = limited("avoided opening", 600.0, "s", BOTH_GATES[:1], {"gate_opening": openings}, window=3600.0)
    run.attrs["avoided_openings"] = json.dumps({"Orchard check": [[0.2, 0.3]]})
    (use,) = limit_uses(run)
    assert use.worst.value == pytest.approx(300.0)
    assert use.share == pytest.approx(0.5)


def test_the_use_of_a_limit_is_told_at_its_worst_place_though_nothing_is_passed(limited, at):
    levels = np.stack([[2.0, 2.0, 2.0, 1.96, 1.96, 1.96, 1.96], [2.0, 1.95, 1.95, 1.95, 1.95, 1.95, 1.95]], axis=1)
    run = limited("fall", 0.1, "m", BOTH_POOLS, {"pool_tail_level": levels}, window=600.0)
    (use,) = limit_uses(run)
    assert (use.where, use.worst.time) == ("Mill pool, lower end", at(10))
    assert (use.share, use.room) == (pytest.approx(0.5), pytest.approx(0.05))
    assert incidents(run) == []


def test_a_file_without_limits_has_none(run_by_hand):
    run = run_by_hand(MINUTES, values={})
    del run.attrs["limits"]
    assert limit_uses(run) == []


def test_limits_of_a_run_without_a_step_are_told_without_a_value(limited):
    run = limited("fall", 0.1, "m", BOTH_POOLS, {}, window=600.0).isel(time=slice(0))
    (use,) = limit_uses(run)
    assert use.where == ""

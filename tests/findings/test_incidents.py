"""Incidents of hand-made runs with known answers."""

import numpy as np
import pytest

from toeline.findings.delivery_incidents import VOLUME_LACKING
from toeline.findings.incidents import incidents
from toeline.findings.jump_incidents import JUMP_END
from toeline.results.variables import JUMP_STATES

MINUTES = [0, 1, 2, 3, 4, 5]
ON, BEYOND, SWEPT = (JUMP_STATES.index(name) for name in ("on_protection", "beyond_protection", "swept_out_of_pool"))


def first_of_two(series):
    """A series at the first gate or pool; nothing at the second."""
    series = np.array(series, dtype=float)
    return np.stack([series, np.full_like(series, np.nan)], axis=1)


@pytest.fixture
def jump_run(run_by_hand):
    def make(states, margins, ends=(np.nan,) * 6, **values):
        return run_by_hand(
            MINUTES,
            values={
                "jump_state": np.stack([states, [0] * 6], axis=1),
                "protection_margin": first_of_two(margins),
                "jump_end_distance": first_of_two(ends),
                "gate_protection_end": [30.0, 25.0],
                **values,
            },
        )

    return make


def test_a_quiet_complete_run_has_no_incidents(run_by_hand):
    assert incidents(run_by_hand(MINUTES, [0, 5], values={})) == []


def test_jump_beyond_protection(jump_run, at):
    states = [ON, ON, BEYOND, BEYOND, ON, ON]
    run = jump_run(states, [0.5, 0.25, -0.25, -0.5, 0.5, 0.5], ends=[20.0, 25.0, 31.0, 34.5, 29.0, 20.0])
    (incident,) = incidents(run)
    assert (incident.what, incident.where) == ("jump beyond protection", "Orchard check")
    assert (incident.start, incident.end, incident.runs_to_end) == (at(1.5), at(3.5), False)
    assert (incident.worst, incident.worst_time, incident.limit, incident.unit) == (-0.5, at(3), 0.0, "m")
    (jump_end,) = incident.also
    assert (jump_end.name, jump_end.value, jump_end.limit) == (JUMP_END, 34.5, 30.0)


def test_gaps_make_separate_incidents_and_the_last_runs_to_the_end(jump_run, at):
    run = jump_run([BEYOND, ON, ON, BEYOND, BEYOND, BEYOND], [-0.1, 0.1, 0.1, -0.1, -0.2, -0.1])
    first, second = incidents(run)
    assert (first.start, first.end, first.runs_to_end) == (at(0), at(0.5), False)
    assert (second.start, second.end, second.runs_to_end) == (at(2.5), at(5), True)


def test_without_a_margin_the_jump_incident_is_timed_by_output_steps(jump_run, at):
    run = jump_run([ON, BEYOND, BEYOND, ON, ON, ON], [np.nan, -0.2, -0.2, np.nan, np.nan, np.nan])
    (incident,) = incidents(run)
    assert (incident.start, incident.end) == (at(1), at(3))


def test_a_jump_without_any_margin_is_still_an_incident(jump_run):
    (incident,) = incidents(jump_run([ON, BEYOND, ON, ON, ON, ON], [np.nan] * 6))
    assert np.isnan(incident.worst)
    assert np.isnat(incident.worst_time)


def test_a_jump_swept_out_is_beyond_protection_too(jump_run, at):
    run = jump_run([ON, BEYOND, SWEPT, SWEPT, BEYOND, ON], [0.1, -0.1, -0.4, -0.3, -0.1, 0.1])
    beyond, swept_out = incidents(run)
    assert (beyond.what, beyond.start, beyond.end) == ("jump beyond protection", at(0.5), at(4.5))
    assert (swept_out.what, swept_out.start, swept_out.end) == ("jump swept out of the pool", at(2), at(4))
    assert swept_out.worst == pytest.approx(-0.4)


@pytest.mark.parametrize("edge", ["bank", "lining"])
def test_water_above_an_edge(run_by_hand, at, edge):
    margins = first_of_two([0.2, 0.1, -0.1, -0.3, -0.1, 0.1])
    (incident,) = incidents(run_by_hand(MINUTES, values={f"pool_{edge}_margin": margins}))
    assert (incident.what, incident.where) == (f"water above the {edge}", "Orchard pool")
    assert incident.worst == pytest.approx(-0.3)
    assert (incident.start, incident.end) == (at(1.5), at(4.5))
    assert f"{edge}_height" in incident.source


def test_water_at_the_edge_is_not_above_it(run_by_hand):
    margins = first_of_two([0.2, 0.0, 0.0, 0.0, 0.1, 0.1])
    assert incidents(run_by_hand(MINUTES, values={"pool_bank_margin": margins})) == []


def test_velocity_over_the_limit_is_found_at_profile_times_by_the_worst_node(run_by_hand, at):
    quiet = [1.0, 1.0, 1.0, 9.0]
    run = run_by_hand(
        MINUTES,
        [0, 10, 20, 30],
        values={
            "velocity": np.array([quiet, [3.5, 2.0, 1.0, 9.0], [1.0, -3.0, 1.0, 9.0], quiet]),
            "velocity_limit": [3.0, 2.5, 2.5, np.nan],
            "node_pool": [0, 0, 1, 1],
            "surface": [0, 2, 2, 2],
            "chainage": [0.0, 100.0, 200.0, 300.0],
        },
    )
    (incident,) = incidents(run)
    assert (incident.where, incident.chainage) == ("Orchard pool", 0.0)
    assert (incident.worst, incident.limit, incident.worst_time) == (3.5, 3.0, at(10))
    assert "surface apron" in incident.source
    assert incident.start == at(7.5)  # the margin falls from 1.5 to -0.5 m/s
    assert incident.end == at(22.5)  # and rises from -0.5 to 1.5 m/s


def test_delivery_shortfall(run_by_hand, at):
    demand = np.array([[0.4, 0.4, 0.9, 0.9, 0.9, 0.4]]).T
    delivery = np.array([[0.4, 0.3995, 0.7, 0.6, 0.9, 0.4]]).T
    (incident,) = incidents(run_by_hand(MINUTES, values={"demand": demand, "delivery": delivery}))
    assert (incident.what, incident.where) == ("delivery shortfall", "North lateral")
    assert (incident.start, incident.worst_time) == (at(2), at(3))  # where the demand jumps
    assert incident.end == at(3 + 0.299 / 0.3)  # where all but a litre per second is delivered
    assert (incident.worst, incident.limit) == (pytest.approx(0.6), pytest.approx(0.9))
    (lacking,) = incident.also
    assert lacking.name == VOLUME_LACKING
    assert lacking.value == pytest.approx((0.2 + 0.3) * 60.0, rel=1e-5)


def test_an_offtake_without_demand_has_no_shortfall(run_by_hand):
    assert incidents(run_by_hand(MINUTES, values={"delivery": 0.1})) == []


@pytest.mark.parametrize("pool", [0, 1])
def test_a_jump_incident_says_that_a_pool_beside_the_gate_was_settling(jump_run, pool):
    settling = np.zeros((6, 2), dtype=int)
    settling[2, pool] = 1
    (incident,) = incidents(jump_run([ON, ON, BEYOND, ON, ON, ON], [0.1, 0.1, -0.1, 0.1, 0.1, 0.1], settling=settling))
    assert incident.settling is True


def test_settling_before_an_incident_does_not_count(jump_run):
    settling = np.zeros((6, 2), dtype=int)
    settling[1] = 1
    (incident,) = incidents(jump_run([ON, ON, BEYOND, ON, ON, ON], [0.1, 0.1, -0.1, 0.1, 0.1, 0.1], settling=settling))
    assert incident.settling is False


def test_a_run_that_stopped_early_says_so_in_its_own_words(run_by_hand, at):
    (incident,) = incidents(run_by_hand(MINUTES, values={}, outcome="stopped at 2031-05-04T00:05Z: interrupted"))
    assert (incident.what, incident.end) == ("run stopped early", at(5))
    assert incident.source == "stopped at 2031-05-04T00:05Z: interrupted"


def test_a_run_killed_before_its_first_step_has_one_incident(run_by_hand):
    assert [i.what for i in incidents(run_by_hand([], values={}, outcome="unfinished"))] == ["run stopped early"]


def test_incidents_come_in_the_order_in_which_they_begin(run_by_hand):
    values = {
        "pool_bank_margin": first_of_two([0.1, 0.1, 0.1, -0.1, -0.1, 0.1]),
        "pool_lining_margin": first_of_two([0.1, -0.1, -0.1, -0.1, -0.1, -0.1]),
    }
    assert [i.what for i in incidents(run_by_hand(MINUTES, values=values))] == [
        "water above the lining",
        "water above the bank",
    ]

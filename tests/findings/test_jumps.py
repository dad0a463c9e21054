"""Hours in every state, gate by gate, both hazards side by side."""

import numpy as np
import pytest

from toeline.findings.jumps import gate_jumps
from toeline.results.variables import JUMP_STATES

STATES = ["drowned", "drowned", "on_apron", "beyond_protection", "swept_out_of_pool"]


@pytest.fixture
def orchard_check(run_by_hand):
    codes = [JUMP_STATES.index(state) for state in STATES]
    run = run_by_hand(
        [0, 60, 120, 180, 240],
        values={
            "jump_state": np.array([codes, [0] * 5]).T,
            "protection_margin": np.array([[0.5, 0.4, 0.1, -0.2, np.nan], [np.nan] * 5]).T,
            "jump_end_distance": np.array([[3.0, 4.0, 12.0, 41.0, np.nan], [np.nan] * 5]).T,
        },
    )
    return gate_jumps(run)[0]


def test_hours_in_every_state_add_up_to_the_run(orchard_check):
    assert orchard_check.jump_state_hours == {
        "none": 0.0, "drowned": 1.5, "on_apron": 1.0, "on_protection": 0.0, "beyond_protection": 1.0,
        "swept_out_of_pool": 0.5,
    }  # fmt: skip
    assert sum(orchard_check.flow_state_hours.values()) == 4.0


def test_both_hazards_have_their_hours(orchard_check):
    assert orchard_check.beyond_protection_hours == pytest.approx(100 / 60)
    assert orchard_check.roller_hours == 2.0


def test_worst_values_come_with_their_times(orchard_check, at):
    assert orchard_check.protection_margin.value == pytest.approx(-0.2)
    assert orchard_check.protection_margin.time == at(180)
    assert (orchard_check.jump_end_distance.value, orchard_check.jump_end_distance.time) == (41.0, at(180))


def test_a_gate_without_any_jump_has_no_worst_value(run_by_hand):
    jumps = gate_jumps(run_by_hand([0, 60], values={}))
    assert [gate.gate for gate in jumps] == ["Orchard check", "Mill check"]
    assert np.isnan(jumps[1].tailwater_margin.value)


def test_a_run_that_never_made_a_step_has_no_hours(run_by_hand):
    assert gate_jumps(run_by_hand([], values={}))[0].roller_hours == 0.0

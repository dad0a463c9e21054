"""Every day of the example canal finds what its header says a planner should find."""

from functools import cache
from pathlib import Path

import numpy as np
import pytest
import xarray as xr

from toeline import load_scenario, simulate
from toeline.findings.incidents import incidents
from toeline.findings.limit_incidents import limit_uses
from toeline.results.variables import FLOW_STATES, JUMP_STATES
from toeline.scenario import plan_names

DAYS = Path(__file__).parents[2] / "scenarios" / "quillmere"
DROWNED, FREE = FLOW_STATES.index("drowned"), FLOW_STATES.index("free")
BEYOND = JUMP_STATES.index("beyond_protection")


@cache
def run_of(day: str, plan: str | None = None) -> xr.Dataset:
    return simulate(load_scenario(DAYS / f"{day}.toml", plan=plan))


def used(run: xr.Dataset) -> dict[str, float]:
    """The used part of every limit that has parts."""
    return {use.limit.subject: use.share for use in limit_uses(run) if use.share is not None}


def minutes_beyond(run: xr.Dataset, gate: str) -> float:
    step = float((run.time[1] - run.time[0]) / np.timedelta64(60, "s"))
    return step * int((run.jump_state.sel(gate=gate) >= BEYOND).sum())


def all_runs():
    for day in sorted(DAYS.glob("*.toml")):
        if day.stem != "canal":
            for plan in plan_names(day) or (None,):
                yield pytest.param(day.stem, plan, id=f"{day.stem}-{plan}" if plan else day.stem)


@pytest.mark.parametrize(("day", "plan"), list(all_runs()))
def test_day_runs_to_its_end_and_closes_its_ledger(day, plan):
    run = run_of(day, plan)
    assert run.attrs["outcome"] == "complete"
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]


def test_steady_day_stays_as_it_began():
    run = run_of("steady")
    assert np.abs(run.water_level - run.water_level[0]).max() < 1e-6
    assert np.abs(run.gate_discharge - run.gate_discharge[0]).max() < 1e-5
    drowned = run.gate_flow_state[0] == DROWNED
    assert run.gate.values[drowned].tolist() == ["Head gate", "Mill check", "Heron check", "Tail gate"]
    assert run.gate.values[run.gate_flow_state[0] == FREE].tolist() == ["Orchard check", "Lower check"]
    assert run.jump_state.sel(gate="Lower check")[0] == JUMP_STATES.index("on_apron")


def test_early_opening_drives_the_jump_beyond_the_protection_for_some_minutes():
    assert 3 <= minutes_beyond(run_of("morning_increase", "early"), "Lower check") <= 15


def test_opening_with_the_water_keeps_every_jump_on_protection():
    run = run_of("morning_increase", "with_the_water")
    assert all(minutes_beyond(run, gate) == 0 for gate in run.gate.values)
    assert run.protection_margin.min() > 0.0


def test_early_opening_draws_the_lower_pool_down_over_the_limit_and_the_other_plan_passes_none():
    early, later = (run_of("morning_increase", plan) for plan in ("early", "with_the_water"))
    falls = {incident.where for incident in incidents(early) if incident.what == "fall in 1 h over the limit"}
    assert "Lower pool, lower end" in falls
    assert used(early)["fall in 1 h"] > 3.0
    assert incidents(later) == []


def test_morning_plans_differ_at_the_lower_check_alone():
    plans = [load_scenario(DAYS / "morning_increase.toml", plan=plan) for plan in ("early", "with_the_water")]
    early, later = ({(order.at, order.gate, order.value) for order in plan.orders} for plan in plans)
    assert {gate for _, gate, _ in early ^ later} == {"Lower check"}


def test_evening_cut_draws_the_jump_back_onto_the_apron_and_no_pool_falls_far():
    run = run_of("evening_cut")
    state = run.jump_state.sel(gate="Lower check")
    assert state[0] == JUMP_STATES.index("on_protection")
    assert state[-1] == JUMP_STATES.index("on_apron")
    fall = run.pool_tail_level[0] - run.pool_tail_level.min("time")
    assert 0.15 < fall.max() < 0.35


def test_evening_cut_comes_near_both_limits_of_falls_and_passes_none():
    run = run_of("evening_cut")
    assert 0.85 < used(run)["fall in 1 h"] < 0.95
    assert 0.85 < used(run)["fall in 24 h"] < 0.98
    assert incidents(run) == []


def test_filling_in_one_step_sends_a_jump_down_the_dry_floor():
    assert 2 <= minutes_beyond(run_of("filling_from_dry", "in_one_step"), "Head gate") <= 15


def test_filling_in_one_step_lets_the_reedbed_pool_fall_back_too_far():
    falls = [i for i in incidents(run_of("filling_from_dry", "in_one_step")) if i.what == "fall in 24 h over the limit"]
    assert {fall.where for fall in falls} == {"Reedbed pool, lower end", "Reedbed pool, upper end"}


def test_filling_in_small_steps_keeps_every_jump_on_protection_and_passes_no_limit():
    run = run_of("filling_from_dry", "in_small_steps")
    assert incidents(run) == []
    assert all(minutes_beyond(run, gate) == 0 for gate in run.gate.values)


@pytest.mark.parametrize("plan", ["in_small_steps", "in_one_step"])
def test_filling_brings_every_pool_near_its_target_and_none_over_its_lining(plan):
    run = run_of("filling_from_dry", plan)
    assert run.canal_storage[0] < 500.0
    assert np.abs(run.pool_tail_level[-1] - run.pool_target_level).max() < 0.2
    assert not [incident for incident in incidents(run) if "lining" in incident.what]

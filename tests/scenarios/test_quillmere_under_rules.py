"""The example canal under each kind of rule with the settings that it has when only the gate is named.

Morning deliveries rise as in the day "morning increase". No rule may hunt: few moves in its busiest hour, few
reversals, and rest at the end of the day.
"""

import shutil
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pytest
import xarray as xr

from toeline import load_scenario, simulate
from toeline.findings.moves import gate_moves

CANAL = Path(__file__).parents[2] / "scenarios" / "quillmere" / "canal.toml"
CHECKS = ("Orchard check", "Mill check", "Heron check", "Lower check")
POOLS = ("Orchard pool", "Mill pool", "Heron pool", "Lower pool", "Reedbed pool")
HEAD = '{ kind = "hold discharge", gate = "Head gate", target = 8.0, feedforward = "volume" }'


def rule(kind: str, place: str, key: str = "gate", more: str = "") -> str:
    return f'{{ kind = "{kind}", {key} = "{place}"{more} }}'


PLANS = {
    "hold upstream level": [HEAD, *(rule("hold upstream level", gate) for gate in (*CHECKS, "Tail gate"))],
    "hold downstream level": [rule("hold downstream level", gate) for gate in ("Head gate", *CHECKS)],
    "hold volume": [rule("hold volume", pool, "pool") for pool in POOLS],
    "gatekeeper rounds": [
        HEAD, *(rule("gatekeeper rounds", gate, more=', every = "4 h"') for gate in (*CHECKS, "Tail gate")),
    ],
}  # fmt: skip

DAY = """
canal = "canal.toml"
title = "Morning increase under a rule"

[period]
start = 2031-05-04T00:00:00+02:00
length = "24 h"

[deliveries]
"North lateral" = [["00:00", 0.4], ["07:00", 0.9]]
"Mill lateral"  = [["00:00", 0.5], ["08:00", 0.8]]
"South lateral" = [["00:00", 0.6], ["10:00", 1.2]]
"Far lateral"   = [["00:00", 0.4], ["11:00", 0.8]]

[start]
state = "steady"
openings = "to hold targets"
inflow = 8.0

[plans.ruled]
rules = [
"""


@cache
def run_under(kind: str) -> xr.Dataset:
    with TemporaryDirectory() as folder:
        shutil.copy(CANAL, folder)
        day = Path(folder) / "day.toml"
        day.write_text(DAY + ",\n".join(PLANS[kind]) + "\n]\n", encoding="utf-8")
        return simulate(load_scenario(day))


@pytest.mark.parametrize("kind", PLANS)
def test_no_rule_hunts(kind):
    run = run_under(kind)
    moves = gate_moves(run)
    assert sum(gate.moves for gate in moves) >= 5
    assert max(gate.busiest for gate in moves) <= 8
    assert max(gate.moves for gate in moves) <= 24  # one an hour
    assert max(gate.reversals for gate in moves) <= 6


@pytest.mark.parametrize("kind", ["hold upstream level", "hold downstream level", "hold volume"])
def test_feedback_comes_to_rest(kind):
    run = run_under(kind)
    last = run.order_time.values >= run.time.values[-1] - np.timedelta64(4, "h")
    assert np.count_nonzero(last) <= 8  # two an hour, all gates together


@pytest.mark.parametrize("kind", ["hold upstream level", "hold downstream level"])
def test_levels_held_are_within_the_band_at_the_end(kind):
    run = run_under(kind)
    error = np.abs(run.pool_tail_level - run.pool_target_level)[-1]
    assert (error <= 0.03).all()


def test_downstream_control_takes_in_what_is_asked_and_upstream_control_lets_the_tail_vary():
    asked = float(run_under("hold downstream level").demand.isel(time=-1).sum() - 1.9)
    down, up = run_under("hold downstream level"), run_under("hold upstream level")
    assert float(down.canal_inflow[-1] - down.canal_inflow[0]) == pytest.approx(asked, rel=0.25)
    spread_up, spread_down = (float(run.canal_outflow.max() - run.canal_outflow.min()) for run in (up, down))
    assert spread_up > 2.0 * spread_down

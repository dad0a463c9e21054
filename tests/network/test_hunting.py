"""Dead bands that a gate's smallest move steps over: the change of level in the end, and whom the caution reaches."""

import numpy as np
import pytest
from tests.canals import day, scenario_of, stepped_canal
from tests.recorded_run import RecordedRun

from toeline.network.hunting import level_change
from toeline.simulate import cautions, ready

MOVE = 0.01
FREE, DROWNED = 2.5, 0.3
"""Drops [m] at the gates that leave them so."""


def scenario(folder, *, drop=FREE, gate=None, rule=None, inflow=4.0, **tables):
    """One pool under hold upstream level."""
    canal = stepped_canal(1, 1500.0, drop=drop, gate={"smallest_move": MOVE, **(gate or {})})
    canal["tail"]["level"] = 1.5 if drop == DROWNED else 0.5
    held = {"kind": "hold upstream level", "gate": "G0", **(rule or {})}
    start = {"start": {"state": "steady", "openings": "to hold targets"}} | tables
    return scenario_of(folder, canal, day(inflow, plans={"held": {"rules": [held]}}, **start))


def headwater(folder, opening, **keys):
    """Level above the gate [m] in the steady state at an opening [m]."""
    start = {"state": "steady", "openings": {"G0": opening}}
    return ready(scenario(folder, start=start, **keys))[2].level[-1]


@pytest.mark.parametrize("drop", [FREE, DROWNED])
def test_change_is_that_between_the_steady_states_before_and_after_the_move(tmp_path, drop):
    network, _, start = ready(scenario(tmp_path, drop=drop))
    opening, levels = float(start.opening[0]), (float(start.level[-1]), 0.5 if drop == FREE else 1.5)
    ends = [headwater(tmp_path, opening + part, drop=drop) for part in (-0.5 * MOVE, 0.5 * MOVE)]
    assert level_change(network, 0, levels, opening, MOVE) == pytest.approx(ends[0] - ends[1], rel=0.02)


def test_free_gate_changes_its_level_by_twice_head_and_move_over_opening(tmp_path):
    """Small openings: the head over the jet is that over the sill."""
    network, *_ = ready(scenario(tmp_path))
    sill = network.tables.gates.sill_level[0]
    assert level_change(network, 0, (sill + 2.0, sill - 1.0), 0.05, 0.005) == pytest.approx(0.4, rel=0.05)


@pytest.mark.parametrize(("levels", "opening"), [((1.0, 1.2), 0.3), ((2.0, 1.0), 0.0)])
def test_gate_under_a_reversed_head_or_closed_has_no_such_change(tmp_path, levels, opening):
    network, *_ = ready(scenario(tmp_path, drop=DROWNED))
    assert level_change(network, 0, levels, opening, MOVE) == 0.0


def test_caution_tells_line_band_change_and_the_band_that_would_do(tmp_path):
    (caution,) = cautions(scenario(tmp_path))
    assert (caution.file, caution.key) == (str(tmp_path / "day.toml"), "plans held rules[1] band")
    assert caution.line is not None
    assert caution.message == (
        "found 0.02 m; a smallest move of G0, 0.01 m, changes the level above it by 0.196 m in the end, which is more "
        "than the band is wide: it may move to and fro without end; 0.099 m would do at the flow of the start"
    )


def test_caution_is_in_the_units_of_the_day(tmp_path):
    inflow, feet = "4 m3/s", {"units": "us customary"}
    (caution,) = cautions(scenario(tmp_path, inflow=inflow, rule={"band": "2 cm"}, **feet))
    assert caution.message.startswith("found 0.0656 ft; a smallest move of G0, 0.0328 ft, changes the level")
    assert "0.33 ft would do" in caution.message


@pytest.mark.parametrize(
    "keys",
    [
        {"rule": {"band": 0.099}},
        {"gate": {"smallest_move": 0.0}},
        {"rule": {"gain": 0.3}},
        {"rule": {"kind": "hold discharge", "target": 4.0}},
        {"rule": {"kind": "gatekeeper rounds", "visits": ["08:00"]}},
        {"start": {"state": "dry"}, "rule": {"gain": 0.3, "reset": "1 h"}},
    ],
    ids=["wide band", "small moves", "no reset", "discharge", "rounds", "dry"],
)
def test_no_caution(tmp_path, keys):
    assert cautions(scenario(tmp_path, **keys)) == []


def test_marks_that_openings_are_rounded_to_count_as_smallest_moves(tmp_path):
    gate = {"smallest_move": 0.0, "scale_mark": 0.02}
    (caution,) = cautions(scenario(tmp_path, gate=gate, rule={"band": 0.099}, round_openings="scale marks"))
    assert "a smallest move of G0, 0.02 m, changes" in caution.message


@pytest.mark.parametrize("drop", [FREE, DROWNED])
def test_gate_moves_for_ever_with_half_the_band_told_and_rests_with_it(tmp_path, drop):
    """A step of inflow, three days: moves of the last one."""
    inflow = {"shape": "steps", "values": [["00:00", 4.0], ["02:00", 4.3]]}
    network, _, start = ready(scenario(tmp_path, drop=drop, inflow=4.3))
    levels = float(start.level[-1]), 0.5 if drop == FREE else 1.5
    least = 0.5 * level_change(network, 0, levels, float(start.opening[0]), MOVE)
    moves = []
    for band in (0.5 * least, least):
        run = RecordedRun(scenario(tmp_path, drop=drop, inflow=inflow, rule={"band": band}, length="72 h"))
        moves.append(np.count_nonzero(run["order_time"] > 48 * 3600.0))
    assert moves[0] > 2
    assert moves[1] == 0

"""What flow and jump do over the plane of tailwater and opening."""

from pathlib import Path

import numpy as np
import pytest

from toeline import load_canal, load_scenario, simulate
from toeline.network.rating import operating_range, rating_table
from toeline.results.variables import JUMP_STATES

CANAL = Path(__file__).parents[2] / "scenarios" / "quillmere" / "canal.toml"
GATE = "Lower check"
HEADWATERS, TAILWATERS, OPENINGS = np.array([100.35]), np.array([98.4, 98.8, 99.2, 100.6]), np.array([0.3, 0.6])


@pytest.fixture(scope="module")
def chart():
    return operating_range(load_canal(CANAL), GATE, HEADWATERS, TAILWATERS, OPENINGS)


def test_discharges_and_limits_are_those_of_the_rating(chart):
    for row in rating_table(load_canal(CANAL), GATE, HEADWATERS, TAILWATERS[:3], OPENINGS):
        here = chart.sel(headwater=row.headwater_level, opening=row.opening)
        assert float(here["discharge"].sel(tailwater=row.tailwater_level)) == row.discharge
        assert float(here["modular_limit_level"]) == row.modular_limit_level
        assert float(here["protection_limit_level"]) == row.protection_limit_level


def test_above_the_headwater_there_is_no_value(chart):
    assert np.isnan(chart["discharge"].sel(tailwater=100.6)).all()


def test_limits_follow_one_another(chart):
    protection, apron, drowning = (chart[f"{of}_level"] for of in ("protection_limit", "apron_limit", "drowning"))
    assert (protection < apron).all()
    assert (apron < drowning).all()


def test_the_time_loop_finds_the_jump_where_the_limits_say():
    # A run has its own tailwater profile, a chart takes it as level: states are compared 1 cm away from every limit.
    run = simulate(
        load_scenario(CANAL.with_name("morning_increase.toml"), plan="early", overrides=['period.length="9 h"'])
    )
    here = run.sel(gate=GATE).isel(time=slice(0, None, 15))
    canal, judged = load_canal(CANAL), 0
    for step in range(here.sizes["time"]):
        now = here.isel(time=step)
        up, down, opening = (
            np.array([float(now[name])]) for name in ("gate_headwater_level", "gate_tailwater_level", "gate_opening")
        )
        chart = operating_range(canal, GATE, up, down, opening)
        limits = [float(chart[f"{of}_level"].values.item()) for of in ("drowning", "apron_limit", "protection_limit")]
        if min(abs(limit - down[0]) for limit in limits) > 0.01:
            expected = ("beyond_protection", "on_protection", "on_apron", "drowned")[
                sum(down[0] > limit for limit in limits)
            ]
            assert JUMP_STATES[int(now["jump_state"])] == expected
            judged += 1
    assert judged >= 5


def test_an_unknown_gate_is_refused():
    with pytest.raises(ValueError, match="no gate named"):
        operating_range(load_canal(CANAL), "Nowhere", HEADWATERS, TAILWATERS, OPENINGS)

"""No growing mode: a steady day stays steady with aprons and transitions, at any step, in both forms of momentum."""

from pathlib import Path

import numpy as np
import pytest
from tests.canals import APRON_AND_RIPRAP, day, scenario_of, stepped_canal

from toeline import load_scenario, simulate

STEADY = Path(__file__).parents[2] / "scenarios" / "quillmere" / "steady.toml"
SUDDEN_WIDENING = [{"length": 18.0, "section": "basin", "surface": "apron"}]
LONG_APRON = [{"length": 40.0, "section": "basin", "surface": "apron"}]
SHORT_TRANSITION = [*LONG_APRON, {"length": 5.0, "section": "canal", "surface": "riprap", "transition": True}]
NARROWS = [
    {"length": 18.0, "section": "canal", "surface": "apron"},
    {"length": 12.0, "section": "basin", "surface": "riprap", "transition": True},
    {"length": 40.0, "section": "basin", "surface": "lining"},
]


def change_of_levels(run) -> float:
    return float(np.abs(run.water_level - run.water_level[0]).max())


@pytest.fixture(params=["1 s", "10 s", "15 min"])
def longest_step(request):
    return request.param


@pytest.fixture(params=[False, True], ids=["quasi-steady", "local inertia"])
def local_inertia(request):
    return request.param


def test_example_canal(longest_step, local_inertia):
    overrides = (
        'period.length="4 h"',
        f'period.longest_step="{longest_step}"',
        f"period.local_inertia={str(local_inertia).lower()}",
    )
    assert change_of_levels(simulate(load_scenario(STEADY, overrides=overrides))) <= 1e-6


def test_sudden_widening_below_every_gate(tmp_path, longest_step, local_inertia):
    canal = stepped_canal(3, 1500.0, floor=SUDDEN_WIDENING)
    period = {"longest_step": longest_step, "local_inertia": local_inertia}
    assert change_of_levels(simulate(scenario_of(tmp_path, canal, day(10.0, length="4 h", period=period)))) <= 1e-6


@pytest.mark.parametrize(
    "floor",
    [APRON_AND_RIPRAP, LONG_APRON, SHORT_TRANSITION, NARROWS],
    ids=["apron and riprap", "long apron", "short transition", "narrows"],
)
def test_faster_flow_over_long_and_short_links_in_turn(tmp_path, floor, longest_step, local_inertia):
    canal = stepped_canal(2, 1000.0, floor=floor, depth=1.4, drop=1.2)
    period = {"longest_step": longest_step, "local_inertia": local_inertia}
    assert change_of_levels(simulate(scenario_of(tmp_path, canal, day(6.0, length="4 h", period=period)))) <= 1e-6


def test_small_disturbance_dies_out_below_a_widening(tmp_path, longest_step, local_inertia):
    canal = stepped_canal(3, 1500.0, floor=SUDDEN_WIDENING)
    pulse = {"shape": "lines", "values": [["00:00", 10.0], ["00:10", 10.0], ["00:15", 10.2], ["00:20", 10.0]]}
    period = {"longest_step": longest_step, "local_inertia": local_inertia}
    run = simulate(scenario_of(tmp_path, canal, day(pulse, length="12 h", period=period)))
    change = np.abs(run.water_level - run.water_level[0]).max("node")
    assert change.max() > 2e-3
    assert change[-1] < 0.1 * change.max()


@pytest.mark.parametrize(
    "openings", [None, {"G0": 0.5, "G1": 0.35, "G2": 0.5}], ids=["openings that hold the targets", "openings given"]
)
def test_with_losses_and_overflowing_escapes(tmp_path, openings):
    canal = stepped_canal(
        3, 1500.0, losses={"seepage": "300 mm/day", "evaporation": "8 mm/day"},
        escapes=[
            {"name": "E0", "pool": "P0", "chainage": 1400.0, "crest_level": 3.3, "length": 8.0},
            {"name": "E1", "pool": "P1", "chainage": 1400.0, "crest_level": 2.85, "length": 10.0, "outside_level": 2.9},
        ],
        offtakes=[{"name": "T0", "pool": "P1", "chainage": 700.0, "kind": "weir", "sill_level": 2.5, "width": 1.0}],
    )  # fmt: skip
    start = {"state": "steady", **({"openings": openings} if openings else {})}
    run = simulate(scenario_of(tmp_path, canal, day(9.0, length="24 h", start=start)))
    assert run.escape_discharge[0].min() > 0.05
    assert change_of_levels(run) <= 1e-6


def test_losses_below_a_reservoir(tmp_path):
    canal = stepped_canal(1, 1000.0, losses={"seepage": "500 mm/day"})
    escape = {"name": "E0", "pool": "P0", "chainage": 990.0, "crest_level": 1.6, "length": 4.0}
    canal |= {"head": {"kind": "reservoir", "level": 4.0}, "escapes": [escape]}
    head = {"bays": 1, "bay_width": 3.0, "sill_level": 1.0, "max_opening": 1.5, "kind": "vertical"}
    canal["gates"].insert(0, {"name": "H", "upstream": "head", "downstream": "P0", **head})
    start = {"state": "steady", "openings": {"H": 0.4, "G0": 0.2}}
    run = simulate(scenario_of(tmp_path, canal, day(length="4 h", start=start)))
    assert run.escape_discharge[0, 0] > 0.1
    assert change_of_levels(run) <= 1e-6

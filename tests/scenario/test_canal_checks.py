"""What must hold between the tables of a canal, and between a day and its canal."""

import pytest

from toeline.scenario import load_canal, load_scenario

TAIL_GATE = """[[gates]]
name = "Tail gate"
upstream = "Mill pool"
downstream = "tail"
kind = "vertical"
bay_width = 3.0
sill_level = 18.8
max_opening = 1.5

"""


def test_gates_out_of_order(folder):
    folder.replace("canal.toml", TAIL_GATE, "")
    folder.replace("canal.toml", '[[gates]]\nname = "Head gate"', TAIL_GATE + '[[gates]]\nname = "Head gate"')

    assert folder.messages() == [
        'canal.toml:52: gates[2] "Head gate": stands above a gate listed before it; allowed: gates from the head down',
        'canal.toml:61: gates[3] "Upper check": stands above a gate listed before it; allowed: gates from the head '
        "down",
    ]


def test_a_canal_whose_last_pool_ends_without_a_gate(folder):
    folder.replace("canal.toml", TAIL_GATE, "")
    folder.replace("canal.toml", "floor_level = 18.7\n", "")

    assert [gate.downstream for gate in load_canal("canal.toml").canal.gates] == ["Upper pool", "Mill pool"]


def test_a_floor_beyond_a_last_gate_that_is_not_there(folder):
    folder.replace("canal.toml", TAIL_GATE, "")

    assert folder.messages()[0] == (
        'canal.toml:99: tail floor_level: not used where no gate has downstream = "tail"; the last pool goes on'
    )


def test_a_head_gate_is_needed_below_a_reservoir_and_an_inflow_above_a_pool(folder):
    folder.replace("canal.toml", 'upstream = "head"\ndownstream = "Upper pool"', 'upstream = "x"\ndownstream = "y"')

    assert folder.messages() == [
        'canal.toml:45: gates[1] "Head gate" upstream: found "x", which is no pool; known: "head", "Upper pool", '
        '"Mill pool"',
    ]


def test_targets_are_needed_where_gates_are_to_hold_them(folder):
    folder.replace("canal.toml", "target_level = 21.8\n", "")

    assert folder.messages() == [
        'day.toml:24: start openings: found "to hold targets", but the canal file gives no target_level for '
        '"Upper pool"'
    ]


def test_a_steady_start_needs_the_opening_of_every_gate(folder):
    folder.replace("day.toml", 'openings = "to hold targets"\ninflow = 8.0', 'openings = { "Head gate" = 0.5 }')

    assert folder.messages() == [
        "day.toml:24: start openings: a steady start needs the opening of every gate; missing: "
        '"Upper check", "Tail gate"'
    ]


def test_an_inflow_is_needed_where_no_reservoir_feeds_the_canal(us_folder):
    us_folder.replace("day.toml", '[inflow]\nfile = "inflow.csv"\n', "")

    assert us_folder.messages(plan=None) == [
        'day.toml: inflow: required with the canal\'s head kind = "inflow", but not given'
    ]


@pytest.mark.parametrize(
    ("added", "message"),
    [
        ("head = 500.0", 'day.toml:4: head: not used with the canal\'s head kind = "inflow", which has no level'),
        ("tail = 499.0", 'day.toml:4: tail: not used with the canal\'s tail kind = "rating"'),
    ],
)
def test_levels_at_an_end_that_has_none_to_give(us_folder, added, message):
    us_folder.replace("day.toml", "[period]", f"{added}\n[period]")

    assert us_folder.messages(plan=None) == [message]


def test_an_inflow_at_the_start_beside_the_inflow_of_the_day(us_folder):
    us_folder.replace("day.toml", 'state = "steady"', 'state = "steady"\ninflow = 100.0')

    assert us_folder.messages(plan=None) == [
        "day.toml:14: start inflow: not used with the canal's head kind = \"inflow\": the day's inflow says it"
    ]


def test_output_coarser_than_the_period(us_folder):
    us_folder.replace("day.toml", 'length = "12 h"', 'length = "5 min"')
    us_folder.replace("day.toml", '[inflow]\nfile = "inflow.csv"', "[inflow]\nvalues = [['00:00', 100]]")

    assert us_folder.messages(plan=None) == [
        "day.toml: output profiles_every: longer than the period; allowed: up to the length of the period"
    ]


@pytest.mark.parametrize(
    ("opening", "is_avoided"), [(0.0, False), (0.03, True), (0.05, False), (0.22, True), (0.3, False)]
)
def test_closed_is_never_an_avoided_opening(folder, opening, is_avoided):
    assert load_canal("canal.toml").canal.gates[1].is_avoided(opening) is is_avoided


@pytest.mark.parametrize(
    ("chainage", "bed"), [(0.0, 20.0), (20.0, 20.0), (520.0, 19.9), (1000.0, 19.804), (2000.0, 19.804)]
)
def test_bed_along_a_pool(folder, chainage, bed):
    assert load_canal("canal.toml").canal.pools[0].bed_at(chainage) == pytest.approx(bed)


def test_sill_at_the_computed_bed_is_not_below_it(folder):
    folder.replace("canal.toml", "sill_level = 19.9", "sill_level = 19.804")

    assert load_scenario("day.toml", plan="proposed").canal.gates[1].sill_level == 19.804

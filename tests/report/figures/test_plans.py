"""Plans of one day side by side."""

import numpy as np
import pytest
from tests.report.figures.drawn import line, panel, texts

from toeline.errors import UsageError
from toeline.report.figures.plans import pictures, plan_names
from toeline.report.style import HAZARD_FLOOR, HAZARD_PEOPLE


@pytest.fixture
def runs(invented_run):
    """In plan early the jump of the Last check is beyond protection for an hour; in plan late never."""
    beyond = np.zeros((49, 2), bool)
    beyond[14:26, 1] = True
    level = np.full((49, 2), 10.0)
    level[20] = 10.5
    early = invented_run(
        attributes={"plan": "early"}, jump_state=np.where(beyond, 4, 1), protection_margin=np.where(beyond, -0.1, 0.3),
        pool_tail_level=level, pool_target_level=np.array([10.2, 10.0]),
    )  # fmt: skip
    return [early, invented_run(attributes={"plan": "late"})]


@pytest.fixture
def picture(runs, metric):
    (found,) = pictures(runs, metric)
    return found


@pytest.mark.parametrize(
    ("column", "early", "late"),
    [(HAZARD_FLOOR.word, [0.0, 11.5 / 12], [0.0, 0.0]), (HAZARD_PEOPLE.word, [4.0, 3.0], [4.0, 4.0])],
)
def test_the_hours_of_both_hazards_stand_gate_by_gate(column, early, late, picture):
    axes = panel(picture.figure, column)
    assert line(axes, "0")[0] == pytest.approx(early)
    assert line(axes, "1")[0] == pytest.approx(late)


def test_plans_do_not_hide_one_another(picture):
    axes = panel(picture.figure, HAZARD_FLOOR.word)
    assert np.all(line(axes, "0")[1] < line(axes, "1")[1])


def test_a_short_hazard_is_written_out(picture):
    assert "57 min" in texts(picture.figure)


def test_through_the_day_it_follows_the_gate_with_the_least_margin(picture):
    axes = panel(picture.figure, "Protection margin of Last check")
    assert line(axes, "0")[1].min() == pytest.approx(-0.1)
    assert line(axes, "1")[1].min() == pytest.approx(0.3)


def test_levels_range_from_lowest_to_highest_from_the_target(picture):
    axes = panel(picture.figure, "lowest and highest level of each pool, from its target")
    assert line(axes, "0")[0] == pytest.approx([-0.2, 0.0, 0.3, 0.5])


def test_tables_have_a_row_for_every_plan_and_place(picture):
    gates = picture.tables[""].csv_text().splitlines()
    assert gates[2] == "plan early,Last check,0.9583,3.0000,-0.1000,2031-05-04T07:10:00+02:00,0.1000"
    assert len(gates) == 1 + 4
    assert picture.tables["pools"].csv_text().splitlines()[1] == "plan early,Upper pool,-0.2000,0.3000"


def test_runs_of_one_plan_are_told_apart(invented_run):
    one, other = invented_run(), invented_run(attributes={"title": "A long morning"})
    assert plan_names([one, other]) == ["A short morning, plan raise", "A long morning, plan raise"]
    assert plan_names([one, one]) == ["1: A short morning, plan raise", "2: A short morning, plan raise"]


def test_runs_of_other_canals_are_refused(runs, metric):
    other = runs[1].assign_coords(gate=["X", "Y"])
    with pytest.raises(UsageError, match="differ in their gates"):
        list(pictures([runs[0], other], metric))


def test_runs_that_begin_at_other_times_are_refused(runs, metric):
    with pytest.raises(UsageError, match="do not begin at the same time"):
        list(pictures([runs[0], runs[1].isel(time=slice(1, None))], metric))


def test_a_run_that_stopped_earlier_is_drawn_as_far_as_it_goes(runs, metric):
    (picture,) = pictures([runs[0].isel(time=slice(0, 10)), runs[1]], metric)
    axes = panel(picture.figure, "Protection margin of Middle check")
    assert (line(axes, "0")[0].size, line(axes, "1")[0].size) == (10, 49)


def test_a_canal_without_gates_says_so(runs, metric):
    (picture,) = pictures([run.isel(gate=slice(0, 0)) for run in runs], metric)
    assert "The canal has no gates." in texts(picture.figure)


def test_no_plan_is_called_safe(picture):
    assert picture.words.endswith("No plan makes the water safe to enter.")

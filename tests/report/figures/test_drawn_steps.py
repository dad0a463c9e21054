"""Of a long run a figure draws some output steps: no extreme is lost, and what is left out is said."""

import numpy as np
import pytest

from toeline.report.figures import drawn_steps as module
from toeline.report.figures.drawn_steps import drawn_steps, shown_rows, steps_note, steps_words
from toeline.report.figures.jump_strip import pictures
from toeline.units import Display, UnitSystem

COUNT = 5_000
TIMES = np.datetime64("2031-05-04", "ns") + np.arange(COUNT) * np.timedelta64(60, "s")


@pytest.fixture
def few(monkeypatch):
    """Twenty points across, drawn so from ten steps on."""
    monkeypatch.setattr(module, "COLUMNS", 20)
    monkeypatch.setattr(module, "MOST_STEPS", 10)


def test_a_run_of_few_steps_is_drawn_as_it_is(invented_run):
    run = invented_run()
    assert drawn_steps(run, "gate_opening") is run
    assert (steps_note(run), steps_words(run)) == ("", "")


def test_every_column_keeps_its_least_and_its_greatest(few):
    values = np.random.default_rng(3).normal(size=COUNT)
    rows = shown_rows(values, TIMES)
    for column in np.array_split(np.arange(COUNT), 20):
        own = values[column[2:-2]]  # a row beside a border may be of the next column
        kept = values[np.intersect1d(rows, column)]
        assert kept.min() <= own.min()
        assert kept.max() >= own.max()
    assert rows.size <= 4 * 20


def test_a_spike_of_one_step_beside_missing_values_is_kept(few):
    values = np.full(COUNT, np.nan)
    values[1234] = 7.0
    assert 1234 in shown_rows(values, TIMES)


def test_a_state_that_lasts_one_step_is_kept_with_the_step_before(few):
    flags = np.zeros((COUNT, 2), np.int8)
    flags[2345, 1] = 3
    rows = shown_rows(flags, TIMES)
    assert {2344, 2345} <= set(rows.tolist())


def test_the_ends_of_the_run_are_drawn(few):
    assert shown_rows(np.zeros(COUNT), TIMES)[[0, -1]].tolist() == [0, COUNT - 1]


def test_a_figure_of_a_long_run_says_what_it_leaves_out_and_lists_what_it_draws(few, invented_run, monkeypatch):
    monkeypatch.setattr(module, "COLUMNS", 4)
    toe = np.random.default_rng(4).uniform(0.0, 9.0, (49, 2))
    (picture,) = pictures(invented_run(jump_toe_distance=toe), Display(UnitSystem.metric))
    listed = len(picture.tables[""].columns[0].cells)
    assert listed < 49
    assert f"Drawn and listed are {listed} of 49 output steps" in picture.words
    assert any(f"drawn: {listed} of 49 output steps" in text.get_text() for text in picture.figure.texts)
    numbers = [float(cell) for cell in picture.tables[""].columns[1].cells]
    assert (max(numbers), min(numbers)) == pytest.approx((toe[:, 0].max(), toe[:, 0].min()), abs=1e-4)

"""Jump strips."""

import numpy as np
import pytest
from matplotlib.axes import Axes
from tests.report.figures.drawn import areas, line, minutes, panel, texts

from toeline.report.figures.jump_strip import pictures
from toeline.report.style import JUMP_STATES, SETTLING
from toeline.units import Display, UnitSystem

FLOOR = {"gate_apron_end": np.array([15.0, 15.0]), "gate_protection_end": np.array([34.0, 34.0])}


def by_gate(quiet: float, other: float, rows: slice, gate: int = 0) -> np.ndarray:
    series = np.full((49, 2), quiet)
    series[rows, gate] = other
    return series


@pytest.fixture
def swept_hour(invented_run):
    """From 07:10 for an hour the jump of the Middle check stands from 30 to 41.2 m, beyond the protected floor."""
    hour = slice(14, 26)
    return invented_run(
        jump_state=by_gate(1, 4, hour), jump_toe_distance=by_gate(0.0, 30.0, hour),
        jump_end_distance=by_gate(9.0, 41.2, hour), settling=by_gate(0, 1, slice(12, 20)), **FLOOR,
    )  # fmt: skip


@pytest.fixture
def strip(swept_hour, metric):
    (picture,) = pictures(swept_hour, metric)
    return picture


def bands(axes: Axes, label: str) -> list[tuple[float, float, float, float]]:
    """The pieces of a jump in its place; the strip of states lies below the panel."""
    return [piece for piece in areas(axes, label) if piece[2] >= 0.0]


def test_every_gate_has_a_panel_with_both_hazards_side_by_side(strip):
    assert "floor: jump beyond protection 1 h   |   people: drowned roller 3 h" in texts(strip.figure)
    assert "floor: jump beyond protection 0 min   |   people: drowned roller 4 h" in texts(strip.figure)
    assert len(strip.figure.axes) == 2


def test_a_jump_is_a_band_from_toe_to_end_while_its_state_lasts(strip):
    axes = panel(strip.figure, "Middle check")
    (beyond,) = bands(axes, JUMP_STATES["beyond_protection"].word)
    left, right, bottom, top = beyond
    assert (minutes(axes, left), minutes(axes, right)) == (70.0, 130.0)
    assert (top, bottom) == (pytest.approx(41.2), 0.0)  # the row that ends the spell closes the band
    assert len(bands(axes, JUMP_STATES["drowned"].word)) == 2


def test_a_short_spell_beyond_the_floor_says_how_far_and_when(strip):
    assert "to 41.20 m at 07:10" in texts(strip.figure)


def test_the_floor_ends_are_drawn_and_named(strip):
    axes = panel(strip.figure, "Last check")
    assert line(axes, "end of the apron")[1][0] == 15.0
    assert line(axes, "end of the protected floor")[1][0] == 34.0
    assert {"apron 15.00 m", "floor 34.00 m"} <= {text.get_text() for text in axes.texts}


def test_settling_is_a_strip_of_its_own_beside_the_jump(strip):
    axes = panel(strip.figure, "Middle check")
    (settling,) = areas(axes, SETTLING.word)
    assert (minutes(axes, settling[0]), minutes(axes, settling[1])) == (57.5, 97.5)
    assert settling[2] > 1.0  # in shares of the height of the panel: above it


def test_a_swept_out_jump_fills_the_height_though_it_has_no_place(invented_run, metric):
    nowhere = by_gate(9.0, np.nan, slice(14, 26))
    run = invented_run(jump_state=by_gate(1, 5, slice(14, 26)), jump_end_distance=nowhere, **FLOOR)
    (picture,) = pictures(run, metric)
    axes = panel(picture.figure, "Middle check")
    (swept,) = bands(axes, JUMP_STATES["swept_out_of_pool"].word)
    assert swept[2:] == axes.get_ylim()


def test_the_table_holds_the_numbers_of_the_dataset(strip, swept_hour):
    columns = {column.header: column.cells for column in strip.tables[""].columns}
    ends = columns["Middle check: end of the jump from the gate [m]"]
    assert [float(cell) for cell in ends] == pytest.approx(swept_hour["jump_end_distance"].values[:, 0])
    assert columns["Middle check: jump"][13:15] == ("drowned", "beyond protection")
    assert columns["Middle check: levels"][11:13] == ("settled", "settling")
    assert columns["time"][14] == "2031-05-04T07:10:00+02:00"


def test_feet_are_drawn_and_told_where_feet_are_asked_for(swept_hour):
    (picture,) = pictures(swept_hour, Display(UnitSystem.us_customary))
    axes = panel(picture.figure, "Middle check")
    assert line(axes, "end of the protected floor")[1][0] == pytest.approx(34.0 / 0.3048)
    assert "Distance below the gate, ft" in texts(picture.figure)
    assert "Middle check: toe of the jump from the gate [ft]" in picture.tables[""].csv_text()


def test_a_run_of_one_step_fills_its_panel(swept_hour, metric):
    (picture,) = pictures(swept_hour.isel(time=slice(0, 1)), metric)
    axes = panel(picture.figure, "Middle check")
    (roller,) = bands(axes, JUMP_STATES["drowned"].word)
    assert roller[:2] == axes.get_xlim()


def test_missing_places_draw_nothing(invented_run, metric):
    (picture,) = pictures(invented_run(jump_end_distance=np.full((49, 2), np.nan), **FLOOR), metric)
    axes = panel(picture.figure, "Middle check")
    assert bands(axes, JUMP_STATES["drowned"].word) == []


def test_a_roller_without_a_known_length_is_told_by_the_strip_of_states(invented_run, metric):
    (picture,) = pictures(invented_run(jump_end_distance=np.full((49, 2), np.nan), **FLOOR), metric)
    axes = panel(picture.figure, "Middle check")
    (strip,) = areas(axes, JUMP_STATES["drowned"].word)
    assert (minutes(axes, strip[0]), minutes(axes, strip[1])) == (0.0, 240.0)
    assert strip[3] < 0.0

"""Tailwater among its limits."""

import numpy as np
import pytest
from tests.report.figures.drawn import areas, line, panel, texts

from toeline.report.figures.tailwater import pictures
from toeline.report.style import DROWNING_LIMIT, HAZARD_FLOOR, MODULAR_LIMIT, PROTECTION_LIMIT, TAILWATER

STEPS = np.arange(49)[:, None] * np.ones((1, 2))


@pytest.fixture
def picture(invented_run, metric):
    run = invented_run(
        gate_tailwater_level=99.0 + 0.01 * STEPS, gate_modular_limit_level=np.full((49, 2), 99.4),
        tailwater_margin=0.01 * STEPS - 0.3, protection_margin=0.01 * STEPS - 0.1,
        gate_discharge=5.0 + 0.05 * STEPS, jump_state=np.where(STEPS < 10, 4, 2),
    )  # fmt: skip
    (found,) = pictures(run, metric)
    return found


@pytest.mark.parametrize(("drawn", "level"), [(MODULAR_LIMIT, 99.4), (DROWNING_LIMIT, 99.3), (PROTECTION_LIMIT, 99.1)])
def test_limits_are_levels_of_the_tailwater_in_both_panels(drawn, level, picture):
    through_time = panel(picture.figure, "Middle check")
    in_plane = picture.figure.axes[1]
    for axes in (through_time, in_plane):
        assert line(axes, drawn.word)[1] == pytest.approx(np.full(49, level))


def test_the_path_in_the_plane_is_tailwater_over_discharge(picture):
    discharge, tailwater = line(picture.figure.axes[1], TAILWATER.word)
    assert (discharge[48], tailwater[48]) == (pytest.approx(7.4), pytest.approx(99.48))


def test_start_and_end_of_the_path_are_marked(picture):
    axes = picture.figure.axes[1]
    assert line(axes, "start of the run")[0] == pytest.approx([5.0])
    assert line(axes, "end of the run")[0] == pytest.approx([7.4])


def test_the_lack_of_tailwater_is_filled_and_its_steps_marked(picture):
    (lack,) = areas(panel(picture.figure, "Middle check"), HAZARD_FLOOR.word)
    assert lack[2:] == (pytest.approx(99.0), pytest.approx(99.1))
    assert line(picture.figure.axes[1], HAZARD_FLOOR.word)[0].size == 10


def test_the_least_margins_are_told(picture):
    assert "Middle check: protection margin at least -0.10 m at 06:00" in picture.words


def test_both_hazards_stand_at_every_gate(picture):
    assert len([text for text in texts(picture.figure) if "floor:" in text and "people:" in text]) == 2


def test_the_table_holds_the_limits(picture):
    columns = {column.header: column.cells for column in picture.tables[""].columns}
    assert columns["Middle check: protection limit [m]"][7] == "99.1000"
    assert columns["Last check: modular limit [m]"][0] == "99.4000"
    assert columns["Last check: discharge [m3/s]"][48] == "7.4000"

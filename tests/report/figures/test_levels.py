"""Levels against targets and limits."""

import json

import numpy as np
import pytest
from tests.report.figures.drawn import areas, line, minutes, panel, texts

from toeline.report.figures.levels import pictures
from toeline.report.style import LIMIT, OVER_EDGE, TARGET, WATER

LEVELS = 100.0 - 0.3 * np.clip((np.arange(49) * 5 - 60.0) / 60.0, 0.0, 1.0)
"""Falls from 100.0 by 0.3 m between 07:00 and 08:00."""


def limit(kind: str, value: float, **more: object) -> dict[str, object]:
    return {"kind": kind, "limit": value, "unit": "m", "places": ["Upper pool"], "source": "example", **more}


def drawn(invented_run, metric, *limits, **given):
    run = invented_run(
        attributes={"limits": json.dumps(limits)},
        pool_tail_level=np.repeat(LEVELS[:, None], 2, axis=1), pool_head_level=np.full((49, 2), 100.5),
        pool_target_level=np.array([99.9, np.nan]),
        pool_lining_margin=np.full((49, 2), 0.4), pool_bank_margin=np.full((49, 2), 0.6),
        lining_level=np.full(4, np.nan), bank_level=np.full(4, np.nan), bed_level=np.full(4, 90.0), **given,
    )  # fmt: skip
    (picture,) = pictures(run, metric)
    return picture


def test_water_and_target_are_lines(invented_run, metric):
    axes = panel(drawn(invented_run, metric).figure, "Upper pool")
    assert line(axes, WATER.word)[1] == pytest.approx(LEVELS)
    assert line(axes, TARGET.word)[1][0] == pytest.approx(99.9)


def test_a_pool_without_a_target_has_no_such_line(invented_run, metric):
    axes = panel(drawn(invented_run, metric).figure, "Lower pool")
    assert TARGET.word not in [one.get_label() for one in axes.lines]


def test_extremes_are_told_from_the_target_with_their_times(invented_run, metric):
    told = "lowest -0.20 m from target at 08:00; highest +0.10 m from target at 06:00"
    assert told in texts(drawn(invented_run, metric).figure)


@pytest.mark.parametrize(
    ("given", "level"),
    [
        (limit("above", 100.2, measured_from="datum", at="lower end"), 100.2),
        (limit("above", 0.25, measured_from="target", at="lower end"), 100.15),
        (limit("below", 0.25, measured_from="target", at="lower end"), 99.65),
        (limit("below", 99.6, measured_from="datum", at="lower end"), 99.6),
    ],
)
def test_a_limit_on_the_level_stands_where_the_water_may_go_to(given, level, invented_run, metric):
    axes = panel(drawn(invented_run, metric, given).figure, "Upper pool")
    assert line(axes, LIMIT.word)[1] == pytest.approx(np.full(49, level))


def test_the_use_of_a_limited_fall_is_drawn_in_percent(invented_run, metric):
    picture = drawn(invented_run, metric, limit("fall", 0.2, window=3600.0))
    below = picture.figure.axes[1]
    x, used = line(below, "fall in 1 h, of 0.20 m")
    assert used.max() == pytest.approx(150.0)
    assert minutes(below, x[np.argmax(used)]) == pytest.approx(120.0)
    assert "fall in 1 h, of 0.20 m" in texts(picture.figure)
    assert "fall in 1 h: 150 % used" in picture.words


def test_without_limits_there_is_no_panel_of_their_use(invented_run, metric):
    picture = drawn(invented_run, metric)
    assert len(picture.figure.axes) == 2
    assert LIMIT.word not in texts(picture.figure)


def test_water_over_the_edge_is_marked_while_it_lasts(invented_run, metric):
    run = invented_run(pool_lining_margin=np.where(np.arange(49)[:, None] < 12, 0.1, [[-0.1, 0.1]]))
    (picture,) = pictures(run, metric)
    axes = panel(picture.figure, "Upper pool")
    (over,) = areas(axes, OVER_EDGE.word)
    assert (minutes(axes, over[0]), minutes(axes, over[1])) == (57.5, 240.0)
    assert list(areas(panel(picture.figure, "Lower pool"), OVER_EDGE.word)) == []


def test_the_table_holds_levels_and_use(invented_run, metric):
    table = drawn(invented_run, metric, limit("fall", 0.2, window=3600.0)).tables[""]
    columns = {column.header: column.cells for column in table.columns}
    assert float(columns["Upper pool: level at the lower end [m]"][24]) == pytest.approx(99.7)
    assert float(columns["Upper pool: fall in 1 h, used of the limit [%]"][24]) == pytest.approx(150.0)
    assert columns["Lower pool: target [m]"][0] == ""

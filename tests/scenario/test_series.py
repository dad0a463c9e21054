"""Series of values during the day."""

import numpy as np
import pytest

from toeline.scenario import Series, load_scenario
from toeline.scenario.series import constant

HOUR = 3_600_000


def series(shape):
    return Series(np.array([HOUR, 3 * HOUR]), np.array([8.0, 12.0]), shape)


@pytest.mark.parametrize(
    ("shape", "hours", "value"),
    [
        ("lines", 0, 8.0),
        ("lines", 1, 8.0),
        ("lines", 2, 10.0),
        ("lines", 3, 12.0),
        ("lines", 24, 12.0),
        ("steps", 0, 8.0),
        ("steps", 1, 8.0),
        ("steps", 2.999, 8.0),
        ("steps", 3, 12.0),
        ("steps", 24, 12.0),
    ],
)
def test_value_at_a_time(shape, hours, value):
    assert series(shape).at(round(hours * HOUR)) == value


def test_a_constant_has_its_value_at_all_times():
    assert [constant(8.0).at(ms) for ms in (0, HOUR)] == [8.0, 8.0]


DELIVERIES = '"North lateral" = [["00:00", 0.4], ["08:00", 0.9]]'


@pytest.mark.parametrize(
    ("written", "times", "values", "shape"),
    [
        ("0.5", [0], [0.5], "steps"),
        ('"500 L/s"', [0], [0.5], "steps"),
        ('[["06:00", 1], ["+7 h", "200 L/s"]]', [6 * HOUR, 7 * HOUR], [1.0, 0.2], "steps"),
        ('{ values = [["06:00", 1]] }', [6 * HOUR], [1.0], "steps"),
        ('{ shape = "lines", values = [["06:00", 1]] }', [6 * HOUR], [1.0], "lines"),
        ('{ shape = "lines", file = "north.csv" }', [0, 6 * HOUR], [0.4, 0.2], "lines"),
        ("[[06:00:00, 1], [2031-05-04T12:00:00+02:00, 2]]", [6 * HOUR, 12 * HOUR], [1.0, 2.0], "steps"),
    ],
)
def test_every_way_of_writing_a_series(folder, tmp_path, written, times, values, shape):
    (tmp_path / "north.csv").write_text("# comment\ntime, value\n\n00:00, 0.4\n06:00, 200 L/s\n", encoding="utf-8")
    folder.replace("day.toml", DELIVERIES, f'"North lateral" = {written}')

    read = load_scenario("day.toml", plan="proposed").day.deliveries["North lateral"]

    assert (read.times.tolist(), read.values.tolist(), read.shape) == (times, values, shape)


def test_levels_run_in_lines_where_no_shape_is_given(folder):
    folder.replace("day.toml", 'shape = "lines"\n', "")

    assert load_scenario("day.toml", plan="proposed").day.head.shape == "lines"


CSV_FAULTS = [
    ("time,value\n", ["north.csv: there are no rows below the header"]),
    ("", ['day.toml:13: deliveries "North lateral" file: found "north.csv"; the file is empty']),
    ("# nothing\n", ['north.csv: the header lacks "time", "value"; columns, separated by commas: time, value']),
    (
        "time,level\n00:00,1\n",
        ['north.csv:1: the header lacks "value"; columns, separated by commas: time, value'],
    ),
    (
        "time,value\n00:00,1\n# comment\n06:00,one\n05:00,2\nnoon,\n",
        [
            'north.csv:4: value: found "one"; allowed: a finite number in m3/s, or text such as "2.5 m3/s" with one of '
            "the units m3/s, L/s, m3/h, m3/day, ML/day, ft3/s, cfs, acre-ft/day",
            'north.csv:6: time: found "noon"; allowed: a time such as "06:30" (on the first day), "+7 h" (from the '
            'start) or "2031-05-04T06:30:00+02:00" (ISO 8601)',
            'north.csv:6: value: found ""; allowed: a finite number in m3/s, or text such as "2.5 m3/s" with one of '
            "the units m3/s, L/s, m3/h, m3/day, ML/day, ft3/s, cfs, acre-ft/day",
        ],
    ),
    (
        "time,value\n06:00,1\n05:00,2\n",
        ['north.csv:3: time: found "05:00", which is not after the time before it; times must rise'],
    ),
    ("time,value\n06:00,-1\n", ["north.csv:2: value: found -1.0; allowed: from 0 m3/s to 10000 m3/s"]),
    (
        "time,value\n06:00,nan\n",
        [
            'north.csv:2: value: found nan; allowed: a finite number in m3/s, or text such as "2.5 m3/s" with one of '
            "the units m3/s, L/s, m3/h, m3/day, ML/day, ft3/s, cfs, acre-ft/day",
        ],
    ),
    ("time,value\n06:00;1\n", ["north.csv:2: found 1 cells; the header has 2: time, value"]),
]


@pytest.mark.parametrize(("text", "messages"), CSV_FAULTS)
def test_a_broken_csv_file_is_refused_with_its_line(folder, tmp_path, text, messages):
    (tmp_path / "north.csv").write_text(text, encoding="utf-8")
    folder.replace("day.toml", DELIVERIES, '"North lateral" = { file = "north.csv" }')

    assert folder.messages() == messages


def test_a_csv_file_that_is_no_text_is_refused_with_its_line(folder, tmp_path):
    (tmp_path / "north.csv").write_bytes(b"time,value\n# d\xe9bit\n00:00,1\n")
    folder.replace("day.toml", DELIVERIES, '"North lateral" = { file = "north.csv" }')

    assert folder.messages() == ["north.csv:2: byte 0xe9 is not UTF-8; save the file as UTF-8 text"]

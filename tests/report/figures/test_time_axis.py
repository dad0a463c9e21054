"""Time axes: local round times, dates, the change of clocks, strips."""

from datetime import UTC, datetime

import numpy as np
import pytest
import xarray as xr
from matplotlib.figure import Figure
from tests.report.figures.drawn import areas, minutes

from toeline.report.figures.time_axis import TimeAxis
from toeline.report.style import SETTLING


def run_over(start: str, hours: float, *, zone: str = "", offset: str = "+00:00", steps: int = 5) -> xr.Dataset:
    """A run with nothing but output steps, from a start in UTC."""
    begin = np.datetime64(start, "ns")
    times = begin + np.arange(steps) * np.timedelta64(round(hours * 3.6e12 / (steps - 1)), "ns")
    return xr.Dataset(coords={"time": times}, attrs={"zone": zone, "utc_offset": offset})


def labels(run: xr.Dataset) -> list[str]:
    axes = Figure().add_subplot()
    TimeAxis(run).apply(axes)
    return [label.get_text() for label in axes.get_xticklabels()]


def test_ticks_stand_at_round_local_times_with_the_date_below_the_first():
    assert labels(run_over("2031-05-03T22:00", 6.0, offset="+02:00"))[:3] == ["00:00\n2031-05-04", "01:00", "02:00"]


def test_the_date_comes_again_with_every_new_day():
    shown = labels(run_over("2031-05-03T22:00", 48.0, offset="+02:00"))
    assert [label for label in shown if "\n" in label] == [
        "00:00\n2031-05-04", "00:00\n2031-05-05", "00:00\n2031-05-06",
    ]  # fmt: skip


def test_ticks_stay_round_when_the_clocks_change():
    # On 2031-03-30 the clocks of Paris go from 02:00 to 03:00 (tz database).
    shown = labels(run_over("2031-03-29T23:00", 23.0, zone="Europe/Paris"))
    assert [label.partition("\n")[0] for label in shown] == [
        "00:00", "03:00", "06:00", "09:00", "12:00", "15:00", "18:00", "21:00", "00:00",
    ]  # fmt: skip


@pytest.mark.parametrize("hours", [0.2, 1.0, 7.0, 24.0, 48.0, 24.0 * 9, 24.0 * 180])
def test_there_are_some_ticks_but_not_too_many(hours):
    assert 1 <= len(labels(run_over("2031-05-04T00:00", hours))) <= 10


def test_a_strip_reaches_half_way_to_the_neighbouring_steps():
    axes, time = Figure().add_subplot(), TimeAxis(run_over("2031-05-04T00:00", 4.0))
    time.apply(axes)
    time.strip(axes, np.array([False, True, True, False, True]), SETTLING, 0.0, 1.0)
    assert [(minutes(axes, left), minutes(axes, right)) for left, right, _, _ in areas(axes, SETTLING.word)] == [
        (30.0, 150.0), (210.0, 240.0),
    ]  # fmt: skip


def test_a_single_step_has_some_width():
    time = TimeAxis(run_over("2031-05-04T00:00", 1.0).isel(time=slice(0, 1)))
    assert np.diff(time.borders) * 1440.0 == pytest.approx([20.0])


def test_positions_are_those_of_utc():
    # matplotlib counts days from 1970-01-01 in UTC (its documentation).
    days = (datetime(2031, 5, 4, tzinfo=UTC) - datetime(1970, 1, 1, tzinfo=UTC)).days
    assert TimeAxis(run_over("2031-05-04T00:00", 1.0, offset="+02:00")).steps[0] == days

"""A time axis in local time, and what stands for spells along it."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from functools import cached_property
from itertools import pairwise
from typing import Any

import numpy as np
import xarray as xr
from matplotlib.axes import Axes
from matplotlib.dates import date2num

from toeline.report.figures.draw import area_look
from toeline.report.figures.sheet import Panel, Sheet
from toeline.report.style import Area
from toeline.results.dataset import timezone_of, utc

MOST_TICKS = 9
_MINUTES = (5, 10, 15, 30, 60, 120, 180, 360, 720)
_DAYS = (1, 2, 5, 10, 20, 30, 60)
LONE_STEP = np.timedelta64(10, "m")
"""For how long a run of one output step is drawn, before and after it."""


@dataclass(frozen=True)
class TimeAxis:
    """The time axis of a run: positions of its output steps, the borders between them, ticks at round local times."""

    run: xr.Dataset

    @cached_property
    def steps(self) -> np.ndarray:
        """Positions of the output steps."""
        return positions(self.run["time"].values)

    @cached_property
    def borders(self) -> np.ndarray:
        """Where each step begins and the last one ends: half way between steps."""
        times = self.run["time"].values
        if len(times) == 1:
            return positions(np.array([times[0] - LONE_STEP, times[0] + LONE_STEP]))
        return positions(np.concatenate((times[:1], times[:-1] + np.diff(times) / 2, times[-1:])))

    def apply(self, axes: Axes, *, labelled: bool = True) -> None:
        """Set limits and ticks; the date stands below the first tick of each day."""
        axes.set_xlim(self.borders[0], self.borders[-1])
        axes.set_xticks([position for position, _ in self._ticks], [text for _, text in self._ticks])
        axes.tick_params(axis="x", labelbottom=labelled)

    def rows(self, sheet: Sheet, count: int, pitch: float, height: float, *, first: float = 0.0) -> Iterator[Axes]:
        """Panels of one height below one another, a pitch apart [inch], with the clock below the last.

        `first` is where they begin below the top of the room for panels.
        """
        for row in range(count):
            axes = sheet.axes(Panel(first + (row + 1) * pitch - height, height))
            self.apply(axes, labelled=row == count - 1)
            yield axes

    def strip(
        self, axes: Axes, holds: np.ndarray, area: Area, bottom: float, height: float, *, above: bool = False
    ) -> None:
        """Fill a strip of a panel while something holds (by output step).

        `bottom` and `height` are values of the vertical axis, or shares of the panel's height with `above`.
        """
        where = [(self.borders[first], self.borders[after] - self.borders[first]) for first, after in _runs(holds)]
        if where:
            place: dict[str, Any] = {"transform": axes.get_xaxis_transform(), "clip_on": False} if above else {}
            axes.broken_barh(where, (bottom, height), label=area.word, **area_look(area), **place)

    @cached_property
    def _ticks(self) -> list[tuple[float, str]]:
        zone = timezone_of(self.run)
        first, last = (utc(time).astimezone(zone) for time in self.run["time"].values[[0, -1]])
        moments = _round_moments(first, last) or [first]
        texts = [moments[0].strftime("%H:%M\n%Y-%m-%d")]
        for before, moment in pairwise(moments):
            texts.append(moment.strftime("%H:%M" if moment.date() == before.date() else "%H:%M\n%Y-%m-%d"))
        return [(_position(moment), text) for moment, text in zip(moments, texts, strict=True)]


def positions(times: np.ndarray | np.datetime64) -> np.ndarray:
    """Positions of instants (datetime64, UTC) along a time axis."""
    found: np.ndarray = date2num(times)  # type: ignore[no-untyped-call]
    return found


def _position(moment: datetime) -> float:
    return float(positions(np.datetime64(moment.astimezone(UTC).replace(tzinfo=None), "ns")))


def _runs(holds: np.ndarray) -> list[tuple[int, int]]:
    """First row of every unbroken run, and the row after it."""
    steps = np.diff(np.concatenate(([0], np.asarray(holds, dtype=np.int8), [0])))
    return list(zip(np.flatnonzero(steps == 1).tolist(), np.flatnonzero(steps == -1).tolist(), strict=True))


def _round_moments(first: datetime, last: datetime) -> list[datetime]:
    """Moments at round local clock times from first to last, few enough to be labelled."""
    elapsed = (last - first).total_seconds() / 60.0
    minutes = next((step for step in _MINUTES if elapsed / step < MOST_TICKS), None)
    if minutes is None:
        days = next((step for step in _DAYS if elapsed / 1440 / step < MOST_TICKS), _DAYS[-1])
        return _every(first, last, timedelta(days=days))
    return _every(first, last, timedelta(minutes=minutes))


def _every(first: datetime, last: datetime, step: timedelta) -> list[datetime]:
    """Clock times a step apart from midnight on, taken on the clock, so that a change of it leaves them round."""
    zone = first.tzinfo
    clock = first.replace(tzinfo=None, hour=0, minute=0, second=0, microsecond=0)
    found = []
    while clock.replace(tzinfo=zone).astimezone(UTC) <= last.astimezone(UTC):
        moment = clock.replace(tzinfo=zone)
        if moment.astimezone(UTC) >= first.astimezone(UTC):
            found.append(moment)
        clock += step
    return found

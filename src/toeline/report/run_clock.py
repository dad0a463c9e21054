"""The instants of a run as people at the canal say them."""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from functools import cached_property

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme
from toeline.report.clock import clock_text, duration_text, later, span_text
from toeline.results.dataset import local_time
from toeline.units import Display, UnitSystem, quantity_text

SPANS_LISTED = 3


@dataclass(frozen=True)
class RunClock:
    """Turns the instants of a run, which are UTC, into local times of its period."""

    run: xr.Dataset

    @cached_property
    def start(self) -> datetime:
        return local_time(self.run, self.run["time"].values[0])

    @cached_property
    def end(self) -> datetime:
        return local_time(self.run, self.run["time"].values[-1])

    def after(self, seconds: float) -> str:
        """The local time so many seconds after the start."""
        return clock_text(later(self.start, seconds), self.start)

    def at(self, instant: np.datetime64) -> str:
        return clock_text(local_time(self.run, instant), self.start)

    def by(self, instant: np.datetime64) -> str:
        """The first full minute that is not before the instant."""
        return self.at(instant - np.timedelta64(1, "ms") + np.timedelta64(30, "s"))

    def span(self, begin: np.datetime64, end: np.datetime64) -> str:
        return span_text(local_time(self.run, begin), local_time(self.run, end), self.start)

    def spans(self, spans: Sequence[tuple[np.datetime64, np.datetime64]]) -> str:
        """Several spans in time order: each of a few, of more how often, between when, and how long in all."""
        lasting = [(begin, end) for begin, end in spans if end > begin]
        if len(lasting) <= SPANS_LISTED:
            return "; ".join(self.span(begin, end) for begin, end in lasting)
        in_all = duration_text(sum((end - begin) / np.timedelta64(1, "s") for begin, end in lasting))
        last = max(end for _, end in lasting)
        return f"{len(lasting)} times between {self.at(lasting[0][0])} and {self.at(last)}, {in_all} in all"

    def window(self, end: np.datetime64, seconds: float) -> str:
        """When a value was found: at an instant, or in the window of some seconds that ends there."""
        if not seconds:
            return f"at {self.at(end)}"
        return f"in the {quantity_text(seconds, 'duration', UnitSystem.metric)} to {self.at(end)}"


def extreme_text(extreme: Extreme, clock: RunClock, display: Display) -> str:
    """A least or greatest length and when it came; "-" where there is none."""
    return timed_text(display.length(extreme.value), extreme, clock)


def timed_text(value: str, extreme: Extreme, clock: RunClock) -> str:
    """The value of an extreme as it is written, and when it came."""
    return value if value == "-" else f"{value} at {clock.at(extreme.time)}"

"""The instants of a run as people at the canal say them."""

from dataclasses import dataclass
from datetime import datetime
from functools import cached_property

import numpy as np
import xarray as xr

from toeline.report.clock import clock_text, later, span_text
from toeline.results.dataset import local_time


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

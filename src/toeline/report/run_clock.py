"""The instants of a run as people at the canal say them."""

from dataclasses import dataclass
from datetime import datetime
from functools import cached_property

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme
from toeline.report.clock import clock_text, span_text
from toeline.results.dataset import local_time
from toeline.units import Display


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

    def at(self, instant: np.datetime64) -> str:
        return clock_text(local_time(self.run, instant), self.start)

    def span(self, begin: np.datetime64, end: np.datetime64) -> str:
        return span_text(local_time(self.run, begin), local_time(self.run, end), self.start)


def extreme_text(extreme: Extreme, clock: RunClock, display: Display) -> str:
    """A least or greatest length and when it came; "-" where there is none."""
    value = display.length(extreme.value)
    return value if value == "-" else f"{value} at {clock.at(extreme.time)}"

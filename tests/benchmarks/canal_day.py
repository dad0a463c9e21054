"""A day ready to be stepped again and again, and what happens in it, for other methods to follow."""

from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
from tests.canals import Table, scenario_of, standard_day

from toeline.engine.run import Run
from toeline.network.build import network_of
from toeline.network.start import starting_state
from toeline.network.timetable import timetable_of

QUIET = {"every": "24 h", "profiles_every": "24 h"}
"""Output that leaves all but the first and the last row out."""


class NoSink:
    """Takes output and forgets it."""

    def write(self, block: dict[str, np.ndarray]) -> None:
        pass


class Profiles:
    """Keeps the long profiles of a run: times [s] and levels [m], shape (times, nodes)."""

    def __init__(self) -> None:
        self.blocks: list[tuple[np.ndarray, np.ndarray]] = []

    def write(self, block: dict[str, np.ndarray]) -> None:
        self.blocks.append((block["profile_time"] / 1000.0, block["water_level"]))

    @property
    def time(self) -> np.ndarray:
        return np.concatenate([time for time, _ in self.blocks])

    @property
    def level(self) -> np.ndarray:
        return np.concatenate([level for _, level in self.blocks])


class Leg(NamedTuple):
    """A part of a day in which the forcing changes linearly."""

    start: float  # s from the start of the day
    length: float  # s
    value: np.ndarray  # forcing at its start, see network.tables
    rate: np.ndarray  # its change a second


class CanalDay:
    """A canal and a day of it as tables of the input files, built once."""

    def __init__(self, folder: Path, canal: Table, day: Table):
        scenario = scenario_of(folder, canal, day)
        self.network = network_of(scenario.canal, scenario.day.period.spacing)
        self.timetable = timetable_of(scenario, self.network)
        self.start = starting_state(scenario, self.network, self.timetable)

    def step(self, sink: Any = None) -> Run:
        """Step the whole day; the output goes to `sink`, or nowhere."""
        run = Run(self.network, self.timetable, sink or NoSink(), self.start)
        run.go()
        return run

    def profiles(self) -> Profiles:
        """Step the whole day and keep its long profiles."""
        sink = Profiles()
        self.step(sink)
        return sink

    def legs(self) -> list[Leg]:
        """Inflows, levels and openings of the day, with gates that move as the run moves them."""
        run = _WatchedRun(self.network, self.timetable, NoSink(), self.start)
        run.go()
        return run.legs

    def state_at_start(self) -> Run:
        """A run that has not been stepped."""
        return Run(self.network, self.timetable, NoSink(), self.start)


class _WatchedRun(Run):
    """Notes the legs that it is stepped through."""

    def __init__(self, *given: Any):
        self.legs: list[Leg] = []
        super().__init__(*given)

    def _advance(self, seconds: float, has_kink: bool) -> int:
        if seconds > 0.0 and self.pace.done[0] == 0.0:
            self.legs.append(Leg(self.time / 1000.0, seconds, self.forcing.value.copy(), self.forcing.rate.copy()))
        return super()._advance(seconds, has_kink)


def standard(folder: Path, *, output: Table | None = None, rules: list[Table] | None = None, **period: Any) -> CanalDay:
    """The standard day; `output` and `rules` stand in place of its own, `period` beside it."""
    canal, day = standard_day(**period)
    day["plans"]["only"]["rules"] = rules or []
    day["output"] = output or day["output"]
    return CanalDay(folder, canal, day)

"""Everything that is known in advance of the day: series, orders, when rules decide, and when the time loop has to stop
for them.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np

from toeline.network.roughness import RoughnessChange, roughness_changes
from toeline.network.tables import (
    FORCING_EVAPORATION,
    FORCING_GATES,
    FORCING_HEAD,
    FORCING_RAIN,
    FORCING_TAIL,
    Network,
)
from toeline.rules.base import CanalFacts
from toeline.scenario import Order, RuleChoice, Scenario, Stuck
from toeline.scenario.canal_facts import canal_facts
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import MARKS_OF_ROUNDING, Day
from toeline.scenario.schema.gates import Gate
from toeline.scenario.series import Series, constant

HOUR_MS = 3_600_000


class Marks(NamedTuple):
    """Openings that a leaf can be set to: multiples of a spacing [m], and what they are called."""

    spacing: float
    name: str


@dataclass(frozen=True)
class Timetable:
    """The day on an integer clock [ms from the start of the period]."""

    start_epoch_ms: int
    length: int
    tolerance: float  # m
    longest_step: int  # ms
    local_inertia: bool
    every: int  # ms, rows
    profiles_every: int  # ms
    series: dict[int, Series]  # by forcing index
    roughness: tuple[RoughnessChange, ...]  # by time, the first at the start
    orders: tuple[Order, ...]  # by time
    rules: tuple[RuleChoice, ...]
    decisions: tuple[np.ndarray, ...]  # ms, by rule
    stuck: tuple[Stuck, ...]
    gates: tuple[Gate, ...]  # of the scenario, for travel, hoist and bands
    marks: tuple[Marks | None, ...]  # by gate, what its openings are rounded to
    canal: CanalFacts  # for rules
    leaf_count: int
    offtake_count: int

    def stops(self) -> np.ndarray:
        """Times [ms] at which the loop has to stop: changes, orders, decisions, whole hours of the clock, the end."""
        first_hour = -self.start_epoch_ms % HOUR_MS
        times = [np.arange(first_hour, self.length, HOUR_MS)]
        times += [np.asarray(series.times) for series in self.series.values()]
        times.append(np.array([order.at for order in self.orders], np.int64))
        times.append(np.array([change.time for change in self.roughness], np.int64))
        times.append(np.array([stuck.begin for stuck in self.stuck], np.int64))
        times += self.decisions
        all_times = np.unique(np.concatenate(times).astype(np.int64))
        inside = all_times[(all_times > 0) & (all_times < self.length)]
        return np.append(inside, self.length)

    def values_at(self, time: int) -> np.ndarray:
        """Forcing [SI] at a time, gate openings left at zero."""
        value = self._constants.copy()
        for index, series in self._changing.items():
            value[index] = series.at(time)
        return value

    def rates_between(self, time: int, until: int) -> np.ndarray:
        """Rates of change [SI a second] between two stops."""
        rate = np.zeros(self.forcing_size)
        for index, series in self._changing.items():
            if series.shape == "lines":
                rate[index] = (series.at(until) - series.at(time)) * 1000.0 / (until - time)
        return rate

    @cached_property
    def _constants(self) -> np.ndarray:
        """The first value of every series, gate openings left at zero."""
        value = np.zeros(self.forcing_size)
        for index, series in self.series.items():
            value[index] = series.values[0]
        return value

    @cached_property
    def _changing(self) -> dict[int, Series]:
        """The series of more than one value."""
        return {index: series for index, series in self.series.items() if series.values.size > 1}

    def demand_of(self, offtake: int) -> Series:
        """Demand at an offtake [m³/s], zero where nothing is asked."""
        series = self.series[FORCING_GATES + self.leaf_count + offtake]
        return constant(0.0) if np.isnan(series.values).any() else series

    @property
    def forcing_size(self) -> int:
        """Head, tail, evaporation, rain, an opening a leaf, a demand and an opening an offtake."""
        return FORCING_GATES + self.leaf_count + 2 * self.offtake_count


def timetable_of(scenario: Scenario, network: Network) -> Timetable:
    """The day of a checked scenario on the integer clock."""
    day, canal = scenario.day, scenario.canal
    period = day.period
    return Timetable(
        start_epoch_ms=round(period.start.timestamp() * 1000),
        length=period.length_ms,
        tolerance=period.level_tolerance,
        longest_step=period.longest_step_ms,
        local_inertia=period.local_inertia,
        every=day.output.finest_ms,
        profiles_every=day.output.profiles_every_ms,
        series=_series(day, canal, network),
        roughness=roughness_changes(canal, period.start, period.length_ms),
        orders=scenario.orders,
        rules=scenario.rules,
        decisions=tuple(
            rule.found.decision_times(rule.given, period.start, period.length_ms) for rule in scenario.rules
        ),
        stuck=scenario.stuck,
        gates=tuple(canal.gates),
        marks=tuple(_marks(day, gate) for gate in canal.gates),
        canal=canal_facts(canal),
        leaf_count=network.leaf_count,
        offtake_count=network.offtake_count,
    )


def _marks(day: Day, gate: Gate) -> Marks | None:
    key = MARKS_OF_ROUNDING.get(day.round_openings or "")
    spacing = getattr(gate, key) if key is not None else None
    return Marks(spacing, f"whole {day.round_openings}") if spacing is not None else None


def _series(day: Day, canal: Canal, network: Network) -> dict[int, Series]:
    """Every forcing but the gate openings as a series, constants too."""
    series = {
        FORCING_HEAD: day.inflow or day.head or constant(canal.head.level or 0.0),
        FORCING_TAIL: day.tail or constant(canal.tail.level or 0.0),
        FORCING_EVAPORATION: day.losses.evaporation or constant(canal.losses.evaporation),
        FORCING_RAIN: day.losses.rain or constant(canal.losses.rain),
    }
    first = FORCING_GATES + network.leaf_count
    count = network.offtake_count
    for k, take in enumerate(canal.offtakes):
        series[first + k] = day.deliveries.get(take.name, constant(0.0 if take.kind == "demand" else np.nan))
        series[first + count + k] = day.offtake_openings.get(take.name, constant(take.opening or 0.0))
    return series

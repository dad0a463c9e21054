"""What a day file says that the results of its period do not show."""

from collections.abc import Iterator

from toeline.errors import Fault
from toeline.scenario.load import Scenario
from toeline.scenario.locate import KeyPath
from toeline.scenario.schema.day import Day
from toeline.scenario.series import Series
from toeline.units import quantity_text

LATE = "the last value begins at the very end of the period: it belongs to the next day, and no result shows it"


def unseen_ends(scenario: Scenario) -> Iterator[Fault]:
    """Rows that stop before the period does, and steps at its very end, each on its line."""
    output, length = scenario.day.output, scenario.day.period.length_ms
    rest = length % output.finest_ms
    if rest:
        key = "events_every" if output.is_thinned else "every"
        found, period, unseen = (
            quantity_text(ms / 1000.0, "duration", scenario.display.system) for ms in (output.finest_ms, length, rest)
        )
        message = (
            f"found {found}, which is no whole part of the period, {period}: what happens in its last {unseen} is "
            "stepped, but no result shows it"
        )
        yield scenario.fault(message, "output", key, file="day")
    for path, series in _series_of(scenario.day):
        if series.shape == "steps" and series.times.size > 1 and series.times[-1] == length:
            yield scenario.fault(LATE, *path, file="day")


def _series_of(day: Day) -> Iterator[tuple[KeyPath, Series]]:
    """All that changes during the day, by key path."""
    alone = {("inflow",): day.inflow, ("head",): day.head, ("tail",): day.tail}
    weather = {("losses", key): getattr(day.losses, key) for key in ("evaporation", "rain")}
    yield from ((path, series) for path, series in (alone | weather).items() if series is not None)
    for key in ("deliveries", "offtake_openings"):
        yield from (((key, name), series) for name, series in getattr(day, key).items())

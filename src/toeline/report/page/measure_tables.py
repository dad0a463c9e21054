"""What a run is measured by: its indicators, and its limits with their sources."""

from collections.abc import Sequence

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.indicators import indicators
from toeline.findings.limit_incidents import limit_uses
from toeline.findings.series import meanings, names
from toeline.report.limits import limit_words
from toeline.report.page.table import Table
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.results.encoding import surface_names_of
from toeline.units import Display

PLACES_ABREAST = 8
"""So many places find room as columns of a table; of more each is a row."""

NO_SAFER = "A value that is better is no safer."


def indicator_tables(run: xr.Dataset, display: Display) -> list[Table]:
    """The indicators, one table for the whole canal, and one each for offtakes, pools and gates; a column each.

    Hours in each state are left out: they have tables of their own.
    """
    found = [one for one in indicators(run) if one.better != "none" or one.unit != "h"]
    groups = {"whole canal": [""], **{f"by {place}": names(run[place]) for place in ("offtake", "pool", "gate")}}
    tables = [
        _indicator_table(heading, [one for one in found if one.where in places], display)
        for heading, places in groups.items()
    ]
    return [table for table in tables if table.rows]


def _indicator_table(heading: str, found: Sequence[Indicator], display: Display) -> Table:
    values = {(one.name, one.where): value_text(one.value, one.unit, display) for one in found}
    listed, places = list(dict.fromkeys(one.name for one in found)), list(dict.fromkeys(one.where for one in found))
    wishes = {one.name: f"{one.name} ({one.better} is better)" if one.better != "none" else one.name for one in found}
    if places == [""]:
        rows: list[tuple[str, ...]] = [(wishes[name], values[name, ""]) for name in listed]
        return Table(f"Indicators, {heading}", ("indicator", "value"), tuple(rows), note=NO_SAFER)
    if len(places) <= PLACES_ABREAST:
        rows = [(wishes[name], *(values.get((name, place), "-") for place in places)) for name in listed]
        return Table(f"Indicators, {heading}", ("indicator", *places), tuple(rows))
    rows = [(place, *(values.get((name, place), "-") for name in listed)) for place in places]
    return Table(f"Indicators, {heading}", ("place", *(wishes[name] for name in listed)), tuple(rows))


def limit_tables(run: xr.Dataset, clock: RunClock, display: Display) -> list[Table]:
    """What every value was held against, and who says so: the owner's limits, then those of the canal itself."""
    return [table for table in (_owner_limits(run, clock, display), _canal_limits(run, display)) if table.rows]


def _owner_limits(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    everything = {kind: names(run[kind]) for kind in ("pool", "gate", "offtake")} | {
        "surface": surface_names_of(run.attrs)
    }
    rows = tuple(
        (
            limit_words(use.limit, everything, display),
            use.limit.source,
            "-" if np.isnan(use.worst.value) else f"{use.where} {clock.window(use.worst.time, use.limit.window)}",
            value_text(use.worst.value, use.limit.unit, display),
            "yes" if use.room < 0.0 else "no",
        )
        for use in limit_uses(run)
    )
    return Table(
        "The owner's limits, and how near the run came",
        ("limit", "source", "nearest", "value", "passed"),
        rows,
        words=3,
    )


def _canal_limits(run: xr.Dataset, display: Display) -> Table:
    rows = [
        ("end of the protected floor", gate, "surfaces of the canal file", display.length(float(end)))
        for gate, end in zip(names(run["gate"]), run["gate_protection_end"].values, strict=True)
    ]
    rows += _velocity_limits(run, display)
    rows += [
        (f"{edge} along the pool", "every pool that has one", f"{edge}_height of the canal file", "-")
        for edge in ("bank", "lining")
        if np.isfinite(run[f"{edge}_level"].values).any()
    ]
    return Table("Limits of the canal file", ("limit", "place", "source", "value"), tuple(rows), words=3)


def _velocity_limits(run: xr.Dataset, display: Display) -> list[tuple[str, str, str, str]]:
    surfaces, limits = run["surface"].values, run["velocity_limit"].values
    known = meanings(run["surface"])
    given = sorted(
        {(int(surface), float(limit)) for surface, limit in zip(surfaces, limits, strict=True) if np.isfinite(limit)}
    )
    return [
        ("velocity", f"over {known[surface]}", "velocity_limit of the canal file", display.velocity(limit))
        for surface, limit in given
    ]

"""The tables of the page: a run's numbers in words, as rows under a heading."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.indicators import indicators
from toeline.findings.jumps import gate_jumps
from toeline.findings.ledger import acre_feet, ledger
from toeline.findings.limit_incidents import limit_uses
from toeline.findings.series import Extreme, meanings, names
from toeline.report.clock import duration_text
from toeline.report.limits import limit_words
from toeline.report.order_words import order_words
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.results.encoding import surface_names_of
from toeline.units import Display

NO_SAFER = "A value that is better is no safer."


@dataclass(frozen=True)
class Table:
    """A table with its caption; the first `words` columns are words, the others numbers."""

    caption: str
    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    words: int = 1
    note: str = ""


def margin_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """How near each gate came, and how far its jump reached."""
    rows = tuple(
        (
            jumps.gate,
            *(
                _extreme(extreme, clock, display)
                for extreme in (jumps.protection_margin, jumps.tailwater_margin, jumps.jump_end_distance)
            ),
        )
        for jumps in gate_jumps(run)
    )
    return Table(
        "Least margins",
        ("gate", "protection margin", "tailwater margin", "jump ends at most"),
        rows,
        note="Protection margin: how far the tailwater could still fall before the jump's end passes the protected "
        "floor; negative: how much is missing. Tailwater margin: how far it stands above the level that drowns the "
        "jump.",
    )


def hour_tables(run: xr.Dataset) -> list[Table]:
    """For how long each gate was in each state; states that no gate was in are left out."""
    jumps = gate_jumps(run)
    return [
        _hour_table("flow", [(gate.gate, gate.flow_state_hours) for gate in jumps]),
        _hour_table("jump", [(gate.gate, gate.jump_state_hours) for gate in jumps]),
    ]


def ledger_table(run: xr.Dataset) -> Table:
    """Where the water came from and went, in both units."""
    water = ledger(run)
    entries = {
        "taken in at the head": water.inflow,
        **{f"delivered, {offtake}": -volume for offtake, volume in water.deliveries.items()},
        "let out at the tail": -water.outflow,
        **{f"kept in {pool}": -change for pool, change in water.storage_changes.items()},
    }
    rows = [(name, _rounded(volume, 0), _rounded(acre_feet(volume), 2)) for name, volume in entries.items()]
    rows.append(("residual", f"{water.residual:.1g}", f"{acre_feet(water.residual):.1g}"))
    return Table(
        "Water ledger", ("", "m³", "acre-ft"), tuple(rows),
        note="The residual is what the other lines leave over: whether the computing lost water.",
    )  # fmt: skip


def order_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """Every order: what was asked, what came of it, and why where that was not the same."""
    statuses, kinds = meanings(run["order_status"]), meanings(run["order_kind"])
    rows = []
    for place in range(run.sizes["order"]):
        order = run.isel(order=place)
        before, after = float(order["order_opening_before"]), float(order["order_opening_after"])
        status, reason = statuses[int(order["order_status"])], str(order["order_reason"].item())
        rows.append(
            (
                clock.at(run["order_time"].values[place]),
                str(order["order_gate"].item()),
                order_words(kinds[int(order["order_kind"])], float(order["order_value"]), display),
                f"{status}: {reason}" if reason else status,
                display.opening(before),
                display.opening(after),
                _instant(run["order_completed"].values[place], clock),
            )
        )
    return Table(
        "Orders", ("time", "gate", "order", "done", "opening before", "after", "leaf stood"), tuple(rows), words=4
    )


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


def _hour_table(subject: str, rows: Sequence[tuple[str, dict[str, float]]]) -> Table:
    states = [state for state in rows[0][1] if any(hours[state] for _, hours in rows)]
    cells = tuple(
        (gate, *(duration_text(hours[state] * 3600) if hours[state] else "-" for state in states))
        for gate, hours in rows
    )
    return Table(
        f"Hours in each state of the {subject}", ("gate", *(state.replace("_", " ") for state in states)), cells
    )


def _extreme(extreme: Extreme, clock: RunClock, display: Display) -> str:
    value = display.length(extreme.value)
    return value if value == "-" else f"{value} at {clock.at(extreme.time)}"


def _instant(instant: np.datetime64, clock: RunClock) -> str:
    return "-" if np.isnat(instant) else clock.at(instant)


def _rounded(value: float, decimals: int) -> str:
    return f"{round(value, decimals) + 0.0:,.{decimals}f}"  # + 0.0 turns -0.0 into 0.0

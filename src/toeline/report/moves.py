"""What the gates were moved, and what rules wanted and did not get, in words."""

import re
from collections.abc import Iterator, Sequence
from itertools import groupby

import numpy as np
import xarray as xr

from toeline.findings.moves import SCHEDULE, GateMoves
from toeline.findings.series import meanings
from toeline.report.layout import INDENT, counted, paragraph, table
from toeline.report.order_words import reason_words
from toeline.report.run_clock import RunClock
from toeline.units import Display

_NUMBER = re.compile(r"\d+(\.\d+)?")


def move_lines(
    run: xr.Dataset, gates: Sequence[GateMoves], clock: RunClock, display: Display, width: int
) -> Iterator[str]:
    """Moves of every gate, then what stood in the way of rules, alike ones together."""
    hours = (run["time"].values[-1] - run["time"].values[0]) / np.timedelta64(1, "h")
    columns = {
        "": [gate.gate for gate in gates],
        "moves": [str(gate.moves) for gate in gates],
        "by rules": [str(_by_rules(gate)) for gate in gates],
        "an hour": [f"{gate.moves / hours:.1f}" if hours > 0.0 else "-" for gate in gates],
        "busiest hour": [f"{gate.busiest} from {clock.at(gate.busiest_from)}" if gate.moves else "-" for gate in gates],
        "back and forth": [str(gate.reversals) for gate in gates],
        "travel": [display.length(gate.travel) for gate in gates],
    }
    if not any(map(_by_rules, gates)):
        del columns["by rules"]
    yield table(tuple(columns), list(zip(*columns.values(), strict=True)), width)
    words = "Back and forth: moves against the one before."
    if "by rules" in columns:
        words += " Many of them tell of a rule that hunts."
    yield paragraph(words, width)
    yield from _hindered(run, clock, display, width)


def _by_rules(gate: GateMoves) -> int:
    return gate.moves - gate.by_source.get(SCHEDULE, 0)


def _hindered(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """Moves of rules that were not made as wanted, those of one gate and one reason as one line."""
    words = meanings(run["order_status"])
    sources, reasons = run["order_source"].values, run["order_reason"].values
    places = [k for k in range(run.sizes["order"]) if reasons[k] and sources[k] != SCHEDULE]
    keys = {
        k: (run["order_gate"].values[k], sources[k], words[int(run["order_status"].values[k])], _alike(reasons[k]))
        for k in places
    }
    times = run["order_time"].values
    for (gate, source, status, _), group in groupby(sorted(places, key=lambda k: keys[k]), key=lambda k: keys[k]):
        alike = list(group)
        begin, end = clock.at(times[alike[0]]), clock.at(times[alike[-1]])
        when = begin if begin == end else f"{begin} to {end}"
        number = f"{counted(len(alike), 'move')} {status}"
        text = f"{when} {gate}, {source}: {number}: {reason_words(reasons[alike[0]], display)}"
        yield paragraph(text, width, hanging=INDENT * 2)


def _alike(reason: str) -> str:
    """A reason without its numbers."""
    return _NUMBER.sub("#", reason)

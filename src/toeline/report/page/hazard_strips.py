"""Floor and people at every gate through the whole run: one strip a gate, drawn by the states of its jump."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr
from markupsafe import Markup, escape

from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import meanings
from toeline.report.clock import duration_text
from toeline.report.page.legend import hatch_fill
from toeline.report.run_clock import RunClock
from toeline.report.style import INK, JUMP_STATES, RULE, Area

WIDTH, HEIGHT = 1000, 22
LEAST_WIDTH = 3.0
"""Of a spell on its strip, in thousandths of the run: shorter ones could not be seen."""


@dataclass(frozen=True)
class HazardStrip:
    """One gate: the hours of both hazards in words, the strip, and the same strip in words."""

    gate: str
    floor: str
    people: str
    drawing: Markup


def hazard_strips(run: xr.Dataset, length: np.timedelta64) -> list[HazardStrip]:
    """All gates from the head down; `length` is the time for which a whole strip stands."""
    return [
        HazardStrip(
            jumps.gate,
            _hours(jumps, "beyond_protection", "swept_out_of_pool"),
            _hours(jumps, "drowned"),
            _drawing(run["jump_state"].isel(gate=place), length, _words(jumps)),
        )
        for place, jumps in enumerate(gate_jumps(run))
    ]


def hours_of_strips(run: xr.Dataset, length: np.timedelta64) -> list[tuple[float, str]]:
    """Where clock times of a run stand under strips of this length, as parts of their width."""
    clock, start = RunClock(run), run["time"].values[0]
    parts = (0.0, 0.25, 0.5, 0.75, 1.0) if length else (0.0,)
    return [(part, clock.at(start + length * round(part * 4) // 4)) for part in parts]


def _drawing(states: xr.DataArray, length: np.timedelta64, words: str) -> Markup:
    known = [JUMP_STATES[meaning] for meaning in meanings(states)]
    pieces = sorted(_pieces(states, length), key=lambda piece: _is_floor_hazard(known[piece[0]], known))
    shapes = "".join(shape for state, begin, end in pieces for shape in _piece(known[state], begin, end, known))
    return Markup(
        f'<svg class="strip" viewBox="0 0 {WIDTH} {HEIGHT}" preserveAspectRatio="none" role="img" '
        f'aria-label="{escape(words)}">'
        f'<rect width="{WIDTH}" height="{HEIGHT}" fill="none" stroke="{RULE}"/>{shapes}</svg>'
    )


def _pieces(states: xr.DataArray, length: np.timedelta64) -> Iterator[tuple[int, float, float]]:
    """Spells of one state, and where they begin and end on the strip; a step stands for half of its neighbours."""
    values, times = states.values, states["time"].values
    if values.size == 1:
        yield int(values[0]), 0.0, float(WIDTH)
        return
    along = (times - times[0]) / length * WIDTH
    changes = np.flatnonzero(np.diff(values)) + 1
    borders = [0.0, *((along[changes - 1] + along[changes]) / 2).tolist(), float(along[-1])]
    for row, begin, end in zip([0, *changes.tolist()], borders, borders[1:], strict=False):
        yield int(values[row]), begin, end


def _piece(area: Area, begin: float, end: float, known: list[Area]) -> Iterator[str]:
    """A spell, drawn wide enough to be seen where the jump leaves the protected floor."""
    width = end - begin
    if _is_floor_hazard(area, known):
        width = max(width, LEAST_WIDTH)
    for fill in (area.colour, hatch_fill(area)):
        yield f'<rect x="{min(begin, WIDTH - width):.1f}" width="{width:.1f}" height="{HEIGHT}" fill="{fill}"/>'
    yield f'<line x1="{begin:.1f}" x2="{begin:.1f}" y2="{HEIGHT}" stroke="{INK}" stroke-width=".6"/>'


def _is_floor_hazard(area: Area, known: list[Area]) -> bool:
    return known.index(area) >= known.index(JUMP_STATES["beyond_protection"])


def _words(jumps: GateJumps) -> str:
    held = (
        f"{JUMP_STATES[state].word} {duration_text(hours * 3600)}"
        for state, hours in jumps.jump_state_hours.items()
        if hours
    )
    return f"{jumps.gate}: {'; '.join(held) or 'one instant'}"


def _hours(jumps: GateJumps, *states: str) -> str:
    hours = sum(jumps.jump_state_hours[state] for state in states)
    return duration_text(hours * 3600) if hours else "-"

"""Tailwater of each gate among the levels that decide what its jump does: too high, and a roller lies at the gate; too
low, and the jump leaves the protected floor.

Left through the run, right in the plane of discharge and tailwater. The limits move with headwater and opening, so that
every point of the path has limits of its own, which stand straight above and below it.
"""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import Extreme, is_any, names
from toeline.findings.settling import gates_settling
from toeline.report.figures.draw import (
    Drawn,
    area_look,
    draw_line,
    empty_note,
    key,
    mark_look,
    panel_title,
    value_range,
    words_of,
)
from toeline.report.figures.drawn_steps import drawn_steps, steps_note, steps_words
from toeline.report.figures.jump_strip import hazard_words
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import NO_GATES, Panel, Sheet, about_run, in_house_style
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.number_table import Column, NumberTable, flag_column, quantity_column, time_column
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.style import (
    DROWNING_LIMIT,
    HAZARD_FLOOR,
    INK,
    MODULAR_LIMIT,
    PROTECTION_LIMIT,
    SETTLING,
    TAILWATER,
    Mark,
    axis_text,
    shown_factor,
)
from toeline.units import Display

NAME = "tailwater"
SERIES = (
    "gate_discharge", "gate_tailwater_level", "gate_modular_limit_level", "tailwater_margin", "protection_margin",
    "jump_state", "settling",
)  # fmt: skip
GATES_ON_A_PAGE = 4
PITCH, HEIGHT, RISE = 2.1, 1.5, -0.2
THROUGH_TIME, IN_PLANE = (0.0, 0.62), (0.72, 0.28)
"""Left edge and width of the two panels of a gate, in shares of the room."""
THIN = 0.8
"""Width of limits in the plane, where they fold [points]."""
LEAST_DISCHARGE = 0.05
"""Room beside the path in the plane, at least [m³/s]: a gate whose discharge stands has no range of its own."""
START = Mark("start of the run", INK, "circle", filled=False)
END = Mark("end of the run", INK, "square")
LIMITS = (MODULAR_LIMIT, DROWNING_LIMIT, PROTECTION_LIMIT)


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The tailwater of all gates, four to a page."""
    groups = pages(range(run.sizes["gate"]), GATES_ON_A_PAGE)
    jumps = gate_jumps(run)
    for page, gates in enumerate(groups):
        here = drawn_steps(run.isel(gate=gates), *SERIES, derived=limit_levels)
        yield _page(here, [jumps[gate] for gate in gates], display, page_name(NAME, page, len(groups)))


def limit_levels(run: xr.Dataset) -> dict[str, np.ndarray]:
    """Levels [m] of the tailwater (as the run) by the word of their limit: at present headwater and opening."""
    tailwater = run["gate_tailwater_level"].values
    return {
        MODULAR_LIMIT.word: run["gate_modular_limit_level"].values,
        DROWNING_LIMIT.word: tailwater - run["tailwater_margin"].values,
        PROTECTION_LIMIT.word: tailwater - run["protection_margin"].values,
    }


@in_house_style
def _page(run: xr.Dataset, jumps: list[GateJumps], display: Display, name: str) -> Picture:
    shown: list[Drawn] = [TAILWATER, *LIMITS, HAZARD_FLOOR, SETTLING, START, END]
    sheet = Sheet(
        "Tailwater and its limits",
        about_run(run_identity(run), steps_note(run)),
        PITCH * max(len(jumps), 1) + RISE + 0.25,
        words_of(shown),
    )
    time, settling = TimeAxis(run), gates_settling(run)
    for row, gate in enumerate(jumps):
        top, here = RISE + (row + 1) * PITCH - HEIGHT, run.isel(gate=row)
        left = sheet.axes(Panel(top, HEIGHT, *THROUGH_TIME))
        right = sheet.axes(Panel(top, HEIGHT, *IN_PLANE))
        right.sharey(left)
        _through_time(left, here, settling[:, row], time, display)
        time.apply(left, labelled=row == len(jumps) - 1)
        _in_plane(right, here, display)
        panel_title(left, gate.gate, lift=11.0)
        panel_title(right, "", hazard_words(gate), lift=11.0)
        if row == len(jumps) - 1:
            right.set_xlabel(axis_text("discharge", "discharge", display))
    if not jumps:
        sheet.say(NO_GATES)
    sheet.side_title(axis_text("tailwater above datum", "length", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(name, sheet.figure, {"": table(run, display)}, words(run, jumps, display) + steps_words(run))


def _through_time(axes: Axes, run: xr.Dataset, settling: np.ndarray, time: TimeAxis, display: Display) -> None:
    factor = shown_factor("length", display)
    tailwater, limits = run["gate_tailwater_level"].values / factor, limit_levels(run)
    for line in LIMITS:
        draw_line(axes, line, time.steps, limits[line.word] / factor)
    draw_line(axes, TAILWATER, time.steps, tailwater)
    lacks = run["protection_margin"].values < 0.0
    look = area_look(HAZARD_FLOOR)
    limit = limits[PROTECTION_LIMIT.word] / factor
    axes.fill_between(time.steps, tailwater, limit, where=lacks, label=HAZARD_FLOOR.word, **look)
    time.strip(axes, settling, SETTLING, 1.02, 0.06, above=True)


def _in_plane(axes: Axes, run: xr.Dataset, display: Display) -> None:
    factor, discharge = (
        shown_factor("length", display),
        run["gate_discharge"].values / shown_factor("discharge", display),
    )
    tailwater, limits = run["gate_tailwater_level"].values / factor, limit_levels(run)
    if not np.isfinite(tailwater).any() or not np.any(discharge):
        empty_note(axes, "no discharge")
    for line in LIMITS:
        draw_line(axes, replace(line, width=THIN), discharge, limits[line.word] / factor)
    draw_line(axes, TAILWATER, discharge, tailwater)
    beyond = is_any(run["jump_state"], "beyond_protection", "swept_out_of_pool")
    axes.plot(discharge[beyond], tailwater[beyond], label=HAZARD_FLOOR.word, marker="o", markersize=4, linestyle="none",
              color=HAZARD_FLOOR.colour, markeredgecolor=INK, markeredgewidth=0.4)  # fmt: skip
    for mark, place in ((START, 0), (END, -1)):
        axes.plot(discharge[[place]], tailwater[[place]], label=mark.word, zorder=5, **mark_look(mark))
    low, high = value_range(discharge)
    room = max(0.08 * (high - low), LEAST_DISCHARGE / shown_factor("discharge", display))
    axes.set_xlim(low - room, high + room)


def words(run: xr.Dataset, jumps: list[GateJumps], display: Display) -> str:
    """How near each gate came to its limits."""
    clock = RunClock(run)
    told = (
        f"{gate.gate}: protection margin at least {_least(gate.protection_margin, clock, display)}, "
        f"tailwater margin at least {_least(gate.tailwater_margin, clock, display)}"
        for gate in jumps
    )
    return f"Tailwater of each gate with its limits, against time and against discharge. {'; '.join(told)}."


def _least(extreme: Extreme, clock: RunClock, display: Display) -> str:
    if np.isnan(extreme.value):
        return "not defined"
    return f"{display.length(extreme.value)} at {clock.at(extreme.time)}"


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """Discharge, tailwater, its limits and the state of the jump, by output step and gate."""
    columns = [time_column(run, run["time"].values)]
    for row, gate in enumerate(names(run["gate"])):
        columns += _gate_columns(gate, run.isel(gate=row), display)
    return NumberTable(tuple(columns))


def _gate_columns(gate: str, run: xr.Dataset, display: Display) -> Iterator[Column]:
    yield quantity_column(f"{gate}: discharge", run["gate_discharge"].values, "discharge", display)
    yield quantity_column(f"{gate}: tailwater", run["gate_tailwater_level"].values, "length", display)
    for word, levels in limit_levels(run).items():
        yield quantity_column(f"{gate}: {word.partition(':')[0]}", levels, "length", display)
    yield flag_column(f"{gate}: jump", run["jump_state"])

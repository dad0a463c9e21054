"""Jump strips: where the jump below each gate stood through the run, on the floor on which it stood."""

from collections.abc import Iterator

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import is_any, meanings_seen, names
from toeline.findings.settling import gates_settling
from toeline.report.clock import duration_text
from toeline.report.figures.draw import Drawn, area_look, draw_level, draw_line, key, margin_note, panel_title, words_of
from toeline.report.figures.drawn_steps import drawn_steps, steps_note, steps_words
from toeline.report.figures.gate_moves import MOVE, move_marks
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import NO_GATES, SMALL_SIZE, Sheet, about_run, in_house_style
from toeline.report.figures.state_strip import state_strip
from toeline.report.figures.time_axis import TimeAxis, positions
from toeline.report.number_table import Column, NumberTable, flag_column, quantity_column, text_column, time_column
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.style import (
    APRON,
    INK,
    JUMP_STATES,
    PAPER,
    PROTECTION,
    SETTLING,
    Area,
    Line,
    axis_text,
    shown_factor,
)
from toeline.units import Display

NAME = "jump_strip"
SERIES = ("jump_toe_distance", "jump_end_distance", "jump_state", "settling")
GATES_ON_A_PAGE = 6
PITCH, HEIGHT, RISE = 1.67, 1.05, -0.17
STATE_BOTTOM, STATE_HEIGHT = -0.16, 0.1
"""The strip that tells the state also where the jump has no place, in shares of the height of a panel."""
FURTHEST = 2.5
"""How far a panel reaches at most, in lengths of the protected floor."""

APRON_END = Line("end of the apron", INK, 0.8, (3.0, 2.0))
PROTECTION_END = Line("end of the protected floor", INK, 1.3, (8.0, 2.0, 1.5, 2.0))
FLOORS = (Area(APRON.word, APRON.colour, opacity=0.28), Area(PROTECTION.word, PROTECTION.colour, "", 0.28))


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The strips of all gates, six to a page."""
    groups = pages(range(run.sizes["gate"]), GATES_ON_A_PAGE)
    jumps = gate_jumps(run)
    for page, gates in enumerate(groups):
        here = drawn_steps(run.isel(gate=gates), *SERIES)
        yield _page(here, [jumps[gate] for gate in gates], display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(run: xr.Dataset, jumps: list[GateJumps], display: Display, name: str) -> Picture:
    states = [JUMP_STATES[state] for state in _states_seen(run)]
    shown: list[Drawn] = [*states, *FLOORS, APRON_END, PROTECTION_END, SETTLING, MOVE]
    sheet = Sheet(
        "Where the jump stood",
        about_run(run_identity(run), steps_note(run)),
        PITCH * max(len(jumps), 1) + 0.1,
        words_of(shown),
    )
    time, settling = TimeAxis(run), gates_settling(run)
    for row, axes in enumerate(time.rows(sheet, len(jumps), PITCH, HEIGHT, first=RISE)):
        axes.tick_params(axis="x", pad=18 if row == len(jumps) - 1 else 3, length=0)
        _panel(axes, run.isel(gate=row), jumps[row], settling[:, row], time, display)
    if not jumps:
        sheet.say(NO_GATES)
    sheet.side_title(axis_text("distance below the gate", "length", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(name, sheet.figure, {"": table(run, display)}, words(jumps) + steps_words(run))


def _panel(
    axes: Axes, run: xr.Dataset, jumps: GateJumps, settling: np.ndarray, time: TimeAxis, display: Display
) -> None:
    factor = shown_factor("length", display)
    apron, protection = (float(run[f"gate_{floor}_end"]) / factor for floor in ("apron", "protection"))
    toe, end = (run[f"jump_{edge}_distance"].values / factor for edge in ("toe", "end"))
    top = _reach(protection, end)
    for floor, start, stop in ((FLOORS[0], 0.0, apron), (FLOORS[1], apron, protection)):
        axes.axhspan(start, stop, **area_look(floor), zorder=0.5)
    for state in _states_seen(run):
        _band(axes, time, run["jump_state"], state, toe, end, top)
    draw_level(axes, APRON_END, apron)
    draw_level(axes, PROTECTION_END, protection)
    draw_line(axes, Line("toe of the jump", INK, 0.7), time.steps, toe)
    draw_line(axes, Line("end of the jump", INK, 1.1), time.steps, np.minimum(end, top))
    time.strip(axes, settling, SETTLING, 1.02, 0.09, above=True)
    state_strip(axes, time, run["jump_state"], JUMP_STATES, "state", STATE_BOTTOM, STATE_HEIGHT)
    move_marks(axes, run)
    if jumps.beyond_protection_hours:
        _furthest_mark(axes, jumps, RunClock(run), display, top)
    axes.set_ylim(0.0, top)
    axes.grid(visible=False)
    margin_note(axes, 1.065, "settling", in_axes=True)
    margin_note(axes, apron, f"apron {display.length(float(run['gate_apron_end']))}")
    if protection > apron:
        margin_note(axes, protection, f"floor {display.length(float(run['gate_protection_end']))}")
    panel_title(axes, jumps.gate, hazard_words(jumps), lift=11.0)


def _furthest_mark(axes: Axes, jumps: GateJumps, clock: RunClock, display: Display, top: float) -> None:
    """Says how far a jump reached that left the protected floor, however short the time."""
    reached = jumps.jump_end_distance
    if np.isnan(reached.value):
        return
    x = float(positions(np.array([reached.time]))[0])
    is_late = x > np.mean(axes.get_xlim())
    axes.annotate(
        f"to {display.length(reached.value)} at {clock.at(reached.time)}",
        (x, min(reached.value / shown_factor("length", display), top)), xytext=(-8 if is_late else 8, -1),
        textcoords="offset points", ha="right" if is_late else "left", va="top", fontsize=SMALL_SIZE, weight="bold",
        bbox={"facecolor": PAPER, "edgecolor": "none", "pad": 1.0, "alpha": 0.85},
    )  # fmt: skip


def _reach(protection: float, end: np.ndarray) -> float:
    """The top of a panel: beyond the protected floor and the jump, but not without bounds."""
    furthest = float(np.nanmax(end)) if np.isfinite(end).any() else 0.0
    floor = protection if protection > 0.0 else max(furthest, 1.0)
    return max(1.25 * floor, min(1.1 * furthest, FURTHEST * floor))


def _band(
    axes: Axes, time: TimeAxis, states: xr.DataArray, state: str, toe: np.ndarray, end: np.ndarray, top: float
) -> None:
    """From toe to end while a state lasts; over the whole panel while the jet sweeps through the pool."""
    holds = is_any(states, state)
    if state == "swept_out_of_pool":
        time.strip(axes, holds, JUMP_STATES[state], 0.0, top)
    elif state != "none":
        low, high = np.minimum(np.nan_to_num(toe), top), np.minimum(end, top)
        reaches = holds | np.concatenate(([False], holds[:-1]))  # up to the next step, so that no gap is left
        x = time.steps
        if x.size == 1:
            x, low, high, reaches = time.borders, *(np.repeat(values, 2) for values in (low, high, reaches))
        area = JUMP_STATES[state]
        axes.fill_between(x, low, high, where=reaches, label=area.word, **area_look(area))


def _states_seen(run: xr.Dataset) -> list[str]:
    return meanings_seen(run["jump_state"])


def hazard_words(jumps: GateJumps) -> str:
    """Both hazards side by side."""
    hazards = jumps.beyond_protection_hours, jumps.roller_hours
    floor, people = (duration_text(hours * 3600) if hours else "0 min" for hours in hazards)
    return f"floor: jump beyond protection {floor}   |   people: drowned roller {people}"


def words(jumps: list[GateJumps]) -> str:
    """What the strips show, gate by gate."""
    told = "; ".join(f"{gate.gate}: {hazard_words(gate).replace('   |   ', ', ')}" for gate in jumps)
    return f"Strips of distance below each gate against time. {told}. No hour is safe to enter the water."


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """Toe, end and state of the jump and whether levels were settling, by output step and gate."""
    columns = [time_column(run, run["time"].values)]
    settling = gates_settling(run)
    for row, gate in enumerate(names(run["gate"])):
        columns += _gate_columns(gate, run.isel(gate=row), settling[:, row], display)
    return NumberTable(tuple(columns))


def _gate_columns(gate: str, run: xr.Dataset, settling: np.ndarray, display: Display) -> Iterator[Column]:
    yield quantity_column(f"{gate}: toe of the jump from the gate", run["jump_toe_distance"].values, "length", display)
    yield quantity_column(f"{gate}: end of the jump from the gate", run["jump_end_distance"].values, "length", display)
    yield flag_column(f"{gate}: jump", run["jump_state"])
    yield text_column(f"{gate}: levels", ["settling" if holds else "settled" for holds in settling])

"""The long profile at a time within the range of the whole run, and below it every gate of it seen from the side."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.jumps import gate_jumps
from toeline.findings.series import meanings, meanings_seen, names
from toeline.report.figures.draw import Drawn, area_look, draw_line, empty_note, key, margin_note, words_of
from toeline.report.figures.gate_side_view import AREAS, LONGEST_NAME, draw_side_view
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import SMALL_SIZE, Panel, Sheet, about_run, in_house_style, shortened
from toeline.report.number_table import NumberTable, flag_column, quantity_column, text_column
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.style import (
    BANK,
    BED,
    DAY_RANGE,
    GROUND,
    JUMP_STATES,
    LEAF,
    LINING,
    TARGET,
    WATER,
    WATER_BODY,
    axis_text,
    shown_factor,
)
from toeline.results.dataset import in_parts, rows_at
from toeline.units import Display, UnitSystem

NAME = "long_profile"
GATES_ON_A_PAGE = 6
TOP, HEIGHT = 0.5, 3.3
VIEW_TOP, VIEW_HEIGHT = 4.95, 1.8
ROOM = 7.1
TARGET_SHARE = 0.25
"""Share of a pool, at its lower end, along which its target is drawn."""
FAR_UNITS = {UnitSystem.metric: ("km", 1000.0), UnitSystem.us_customary: ("1000 ft", 304.8)}
"""Chainage on the axis: name of the unit, and what metres are divided by."""


def pictures(run: xr.Dataset, display: Display, at: np.datetime64 | None = None) -> Iterator[Picture]:
    """The profile nearest to `at` (by itself that of the worst time), with six gates to a page."""
    groups = pages(range(run.sizes["gate"]), GATES_ON_A_PAGE)
    moment = nearest_moment(run, worst_time(run) if at is None else at)
    water = _water(run, moment)
    for page, gates in enumerate(groups):
        yield _page(run, gates, moment, water, display, page_name(NAME, page, len(groups)))


@dataclass(frozen=True)
class Moment:
    """A long profile and an output step: time and row of the profile (None where the run has none), row of the step."""

    time: np.datetime64
    profile: int | None
    step: int


class _Water(NamedTuple):
    """Levels by node [m]: at the moment, and the lowest and the highest of the run; NaN where it has no profile."""

    now: np.ndarray
    lowest: np.ndarray
    highest: np.ndarray

    def at(self, nodes: np.ndarray) -> "_Water":
        return _Water(*(levels[nodes] for levels in self))


def _water(run: xr.Dataset, moment: Moment) -> _Water:
    nothing = np.full(run.sizes["node"], np.nan)
    if moment.profile is None:
        return _Water(nothing, nothing, nothing)
    ranges = [
        (part["water_level"].values.min(axis=0), part["water_level"].values.max(axis=0))
        for part in in_parts(run, "profile_time", "water_level")
    ]
    lowest, highest = zip(*ranges, strict=True)
    now = rows_at(run, "water_level", np.array([moment.profile]))[0]
    return _Water(now, np.minimum.reduce(lowest), np.maximum.reduce(highest))


def worst_time(run: xr.Dataset) -> np.datetime64:
    """When a jump was nearest to leaving the protected floor, or furthest beyond; the end where no gate had a jump."""
    margins = [gate.protection_margin for gate in gate_jumps(run) if np.isfinite(gate.protection_margin.value)]
    return min(margins, key=lambda margin: margin.value).time if margins else run["time"].values[-1]


def nearest_moment(run: xr.Dataset, time: np.datetime64) -> Moment:
    """The long profile and the output step nearest to a time; profiles are mostly further apart."""
    profiles, steps = run["profile_time"].values, run["time"].values
    step = int(np.argmin(np.abs(steps - time)))
    if not profiles.size:
        return Moment(time, None, step)
    profile = int(np.argmin(np.abs(profiles - time)))
    return Moment(profiles[profile], profile, step)


@in_house_style
def _page(run: xr.Dataset, gates: list[int], moment: Moment, water: _Water, display: Display, name: str) -> Picture:
    clock = RunClock(run)
    when, beside = clock.at(moment.time), clock.at(run["time"].values[moment.step])
    states = [JUMP_STATES[state] for state in _states_at(run.isel(gate=gates), moment) if state != "none"]
    shown: list[Drawn] = [WATER, DAY_RANGE, TARGET, LINING, BANK, BED, LEAF, *AREAS, *states]
    sheet = Sheet(f"Long profile at {when}", about_run(run_identity(run)), ROOM, words_of(shown))
    axes = sheet.axes(Panel(TOP, HEIGHT))
    _profile(axes, run, gates, moment, water, display)
    for place, gate in enumerate(gates):
        width = 1.0 / max(len(gates), 4)
        view = sheet.axes(Panel(VIEW_TOP, VIEW_HEIGHT, place * width, width * 0.74))
        draw_side_view(view, run.isel(gate=gate, time=moment.step), display)
        if place == 0:
            view.set_ylabel(axis_text("level", "length", display))
    sheet.heading(VIEW_TOP - 0.36, f"The gates from the side at {beside}, heights stretched")
    sheet.legend([key(thing) for thing in shown])
    tables = {"": table(run, moment, water, display), "gates": gates_table(run.isel(gate=gates), moment, display)}
    return Picture(name, sheet.figure, tables, words(run.isel(gate=gates), moment))


def _profile(axes: Axes, run: xr.Dataset, gates: list[int], moment: Moment, water: _Water, display: Display) -> None:
    far, per_far = FAR_UNITS[display.system]
    factor = shown_factor("length", display)
    nodes = _nodes_of_page(run, gates)
    here = run.isel(node=nodes)
    bottom = float(here["bed_level"].min()) / factor
    top = float(np.nanmax([here["bank_level"].max(), here["lining_level"].max(), _highest(water.at(nodes))])) / factor
    room = 0.06 * (top - bottom) + 0.1
    for pool in np.unique(here["node_pool"].values):
        of_pool = nodes[here["node_pool"].values == pool]
        _pool(axes, run.isel(node=of_pool), water.at(of_pool), display, bottom - room)
    _targets(axes, run, nodes, display)
    _gates(axes, run, gates, moment, display)
    axes.set_ylim(bottom - room, top + room)
    x = here["chainage"].values / per_far
    spread = max(x[-1] - x[0], 0.001)
    axes.set_xlim(x[0] - 0.01 * spread, x[-1] + 0.01 * spread)
    axes.set_xlabel(f"Chainage from the head, {far}")
    axes.set_ylabel(axis_text("level above datum", "length", display))
    if moment.profile is None:
        empty_note(axes, "The run holds no long profile.")


def _nodes_of_page(run: xr.Dataset, gates: list[int]) -> np.ndarray:
    """The nodes between the first gate of a page and the gate after its last; all where all gates are on it."""
    chainage, places = run["chainage"].values, run["gate_chainage"].values
    if len(gates) in (0, run.sizes["gate"]):
        return np.arange(chainage.size)
    start = -np.inf if gates[0] == 0 else places[gates[0] - 1]
    end = np.inf if gates[-1] == places.size - 1 else places[gates[-1] + 1]
    inside = (chainage >= start) & (chainage <= end)
    pools, counts = np.unique(run["node_pool"].values[inside], return_counts=True)
    return np.flatnonzero(inside & np.isin(run["node_pool"].values, pools[counts > 1]))


def _highest(water: _Water) -> float:
    return float(np.nanmax(water.highest)) if np.isfinite(water.highest).any() else np.nan


def _pool(axes: Axes, run: xr.Dataset, water: _Water, display: Display, ground: float) -> None:
    """One pool: its ground and edges, the range of its water and the water line of the moment."""
    factor = shown_factor("length", display)
    x, bed = run["chainage"].values / FAR_UNITS[display.system][1], run["bed_level"].values / factor
    axes.fill_between(x, bed, ground, label=GROUND.word, **area_look(GROUND))
    draw_line(axes, BED, x, bed)
    for line, edge in ((LINING, "lining_level"), (BANK, "bank_level")):
        draw_line(axes, line, x, run[edge].values / factor)
    if not np.isfinite(water.now).any():
        return
    lowest, highest, now = water.lowest / factor, water.highest / factor, water.now / factor
    axes.fill_between(x, lowest, highest, label=DAY_RANGE.word, **area_look(DAY_RANGE))
    axes.fill_between(x, bed, now, label=WATER_BODY.word, **area_look(WATER_BODY))
    draw_line(axes, WATER, x, now)


def _targets(axes: Axes, run: xr.Dataset, nodes: np.ndarray, display: Display) -> None:
    per_far, factor = FAR_UNITS[display.system][1], shown_factor("length", display)
    for pool, target in enumerate(run["pool_target_level"].values):
        inside = nodes[run["node_pool"].values[nodes] == pool]
        if inside.size and np.isfinite(target):
            start, end = run["chainage"].values[inside[[0, -1]]] / per_far
            draw_line(axes, TARGET, np.array([end - TARGET_SHARE * (end - start), end]), np.full(2, target / factor))


def _gates(axes: Axes, run: xr.Dataset, gates: list[int], moment: Moment, display: Display) -> None:
    """Each gate with its sill and its leaf at their heights, its name above, and the state of its jump below."""
    per_far, factor = FAR_UNITS[display.system][1], shown_factor("length", display)
    margin_note(axes, 0.0, f"jump at\n{RunClock(run).at(run['time'].values[moment.step])}", in_axes=True)
    for place in gates:
        gate = run.isel(gate=place, time=moment.step)
        x = float(gate["gate_chainage"]) / per_far
        lip = float(gate["gate_sill_level"] + gate["gate_opening"]) / factor
        leaf_top = max(lip + float(gate["gate_max_opening"]) / factor, float(gate["gate_headwater_level"]) / factor)
        axes.plot([x, x], [lip, leaf_top], color=LEAF.colour, linewidth=3.2, label=LEAF.word)
        axes.plot([x, x], [float(gate["gate_floor_level"]) / factor, float(gate["gate_sill_level"]) / factor],
                  color=GROUND.colour, linewidth=3.2, label="sill")  # fmt: skip
        _gate_label(axes, gate, x)


def _gate_label(axes: Axes, gate: xr.Dataset, x: float) -> None:
    state = meanings(gate["jump_state"])[int(gate["jump_state"])]
    name = shortened(str(gate["gate"].values), LONGEST_NAME)
    axes.text(x, 1.03, name, transform=axes.get_xaxis_transform(), fontsize=SMALL_SIZE, rotation=24,
              ha="left", va="bottom", rotation_mode="anchor")  # fmt: skip
    area = JUMP_STATES[state]
    axes.scatter([x], [0.0], s=70, marker="s", transform=axes.get_xaxis_transform(), clip_on=False, zorder=6,
                 label=f"jump: {area.word}", **(area_look(area) | {"linewidth": 0.8}))  # fmt: skip


def _states_at(run: xr.Dataset, moment: Moment) -> list[str]:
    return meanings_seen(run["jump_state"][moment.step])


def words(run: xr.Dataset, moment: Moment) -> str:
    """What stands where at that time."""
    here, clock = run.isel(time=moment.step), RunClock(run)
    states = meanings(here["jump_state"])
    told = (
        f"{gate}: {JUMP_STATES[states[int(here['jump_state'].values[row])]].word}"
        for row, gate in enumerate(names(here["gate"]))
    )
    return (
        f"Long profile of the canal at {clock.at(moment.time)} with the lowest and highest levels of the run. "
        f"The gates at {clock.at(run['time'].values[moment.step])}: {'; '.join(told)}."
    )


def table(run: xr.Dataset, moment: Moment, water: _Water, display: Display) -> NumberTable:
    """Bed, edges, water at the time and its lowest and highest level of the run, by node."""
    levels = {
        "chainage": run["chainage"].values,
        "bed": run["bed_level"].values,
        "top of the lining": run["lining_level"].values,
        "top of the bank": run["bank_level"].values,
        f"water level at {RunClock(run).at(moment.time)}": water.now,
        "lowest water level": water.lowest,
        "highest water level": water.highest,
    }
    pools = [*names(run["pool"]), "tail"]
    where = text_column("pool", [pools[pool] for pool in run["node_pool"].values.tolist()])
    return NumberTable((where, *(quantity_column(name, values, "length", display) for name, values in levels.items())))


GATE_LENGTHS = {
    "opening": "gate_opening",
    "headwater": "gate_headwater_level",
    "tailwater": "gate_tailwater_level",
    "depth of the jet": "jet_depth",
    "depth of the roller": "roller_depth",
    "toe of the jump from the gate": "jump_toe_distance",
    "end of the jump from the gate": "jump_end_distance",
    "end of the protected floor from the gate": "gate_protection_end",
}


def gates_table(run: xr.Dataset, moment: Moment, display: Display) -> NumberTable:
    """What the side views are drawn from, by gate."""
    here = run.isel(time=moment.step)
    lengths = (quantity_column(name, here[of].values, "length", display) for name, of in GATE_LENGTHS.items())
    return NumberTable((text_column("gate", names(here["gate"])), *lengths, flag_column("jump", here["jump_state"])))

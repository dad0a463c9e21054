"""Gate openings through the run, with the orders that moved them, and below each how the water went through."""

from collections.abc import Iterator

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.limits import avoided_openings
from toeline.findings.moves import SCHEDULE
from toeline.findings.series import is_any, meanings_seen, names
from toeline.report.figures.draw import Drawn, area_look, draw_line, key, mark_look, panel_title, words_of
from toeline.report.figures.drawn_steps import drawn_steps, steps_note, steps_words
from toeline.report.figures.gate_moves import orders_of
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import NO_GATES, Sheet, about_run, in_house_style
from toeline.report.figures.state_strip import state_strip
from toeline.report.figures.time_axis import TimeAxis, positions
from toeline.report.layout import counted
from toeline.report.number_table import NumberTable, flag_column, quantity_column, text_column, time_column
from toeline.report.run_identity import run_identity
from toeline.report.style import (
    AVOIDED,
    BAY_OPENING,
    FLOW_STATES,
    JUMP_STATES,
    OPENING,
    ORDER_STATUSES,
    RULE_MOVE,
    Area,
    Mark,
    axis_text,
    shown_factor,
)
from toeline.units import Display

Bands = list[list[float]]
"""Lower and upper ends of openings [m]."""

NAME = "gate_openings"
SERIES = ("gate_opening", "bay_opening", "gate_discharge", "gate_flow_state", "jump_state")
GATES_ON_A_PAGE = 6
PITCH, HEIGHT = 1.5, 0.85
STRIP = 0.13
STRIPS = ((-0.20, "flow", "gate_flow_state", FLOW_STATES), (-0.36, "jump", "jump_state", JUMP_STATES))
"""Strips below each panel, in shares of its height."""


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The openings of all gates, six to a page."""
    groups = pages(range(run.sizes["gate"]), GATES_ON_A_PAGE)
    for page, gates in enumerate(groups):
        bays = np.flatnonzero(np.isin(run["bay_gate"].values, run["gate"].values[gates]))
        here = drawn_steps(run.isel(gate=gates, bay=bays), *SERIES)
        yield _page(here, display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(run: xr.Dataset, display: Display, name: str) -> Picture:
    gates = names(run["gate"])
    avoided = avoided_openings(run)
    apart = np.isin(run["bay_gate"].values, gates).any()
    lines = [OPENING, BAY_OPENING] if apart else [OPENING]
    shown: list[Drawn] = [*lines, *_marks_seen(run), *([AVOIDED] if avoided else []), *_areas_seen(run)]
    sheet = Sheet(
        "Gate openings, orders and flow",
        about_run(run_identity(run), steps_note(run)),
        PITCH * max(len(gates), 1) + 0.1,
        words_of(shown),
    )
    time = TimeAxis(run)
    for row, axes in enumerate(time.rows(sheet, len(gates), PITCH, HEIGHT, first=-0.25)):
        _panel(axes, run.isel(gate=row), avoided.get(gates[row], []), time, display)
        axes.tick_params(axis="x", pad=34 if row == len(gates) - 1 else 3, length=0)
    if not gates:
        sheet.say(NO_GATES)
    sheet.side_title(axis_text("opening, lip above sill", "length", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(
        name,
        sheet.figure,
        {"": table(run, display), "orders": orders_table(run, display)},
        words(run, display) + steps_words(run),
    )


def _panel(axes: Axes, run: xr.Dataset, avoided: Bands, time: TimeAxis, display: Display) -> None:
    gate, opening = str(run["gate"].values), run["gate_opening"].values
    factor = shown_factor("length", display)
    bays = bays_of(run, gate)
    for bay in bays.T:
        draw_line(axes, BAY_OPENING, time.steps, bay / factor)
    draw_line(axes, OPENING, time.steps, opening / factor)
    orders = orders_of(run, gate)
    for mark, of_mark in marked_orders(orders).items():
        _order_marks(axes, of_mark, mark, factor)
    for low, high in avoided:
        axes.axhspan(low / factor, high / factor, label=AVOIDED.word, **area_look(AVOIDED))
    axes.set_ylim(*_range(np.column_stack((opening, bays)), float(run["gate_max_opening"]), factor))
    for bottom, name, variable, areas in STRIPS:
        state_strip(axes, time, run[variable], areas, name, bottom, STRIP)
    panel_title(axes, gate, _told(opening, orders.sizes["order"], display))


def bays_of(run: xr.Dataset, gate: str) -> np.ndarray:
    """Openings [m] of the bays of a gate that move apart, along time and bay; no column for other gates."""
    openings: np.ndarray = run["bay_opening"].values[:, run["bay_gate"].values == gate]
    return openings


def _bay_names(run: xr.Dataset, gate: str) -> list[str]:
    labels: list[str] = run["bay"].values[run["bay_gate"].values == gate].tolist()
    return labels


def marked_orders(orders: xr.Dataset) -> dict[Mark, xr.Dataset]:
    """Orders by their marks: those of the schedule by what became of them, moves by rules apart."""
    by_plan = orders["order_source"].values == SCHEDULE
    groups = {mark: by_plan & is_any(orders["order_status"], status) for status, mark in ORDER_STATUSES.items()}
    groups[RULE_MOVE] = ~by_plan & ~is_any(orders["order_status"], "refused")
    return {mark: orders.isel(order=np.flatnonzero(holds)) for mark, holds in groups.items() if holds.any()}


def _order_marks(axes: Axes, orders: xr.Dataset, mark: Mark, factor: float) -> None:
    """At the time of each order, at the opening it led to; of one that led to none, at the opening that it found."""
    led_to = orders["order_opening_after"].values
    at = np.where(np.isfinite(led_to), led_to, orders["order_opening_before"].values) / factor
    if at.size:
        axes.plot(positions(orders["order_time"].values), at, label=mark.word, clip_on=False, **mark_look(mark))


def _range(opening: np.ndarray, most: float, factor: float) -> tuple[float, float]:
    """Limits of the vertical axis: what the gate did and some room, never less than a tenth of its travel."""
    if not np.isfinite(opening).any():
        return 0.0, max(most, 0.1) / factor
    low, high = float(np.nanmin(opening)), float(np.nanmax(opening))
    room = max(0.25 * (high - low), 0.05 * most, 0.01)
    return max(low - room, -0.02 * most) / factor, (high + room) / factor


def _told(opening: np.ndarray, orders: int, display: Display) -> str:
    first, last = display.opening(opening[0]), display.opening(opening[-1])
    return f"{first} at the start, {last} at the end; {counted(orders, 'order')}"


def _areas_seen(run: xr.Dataset) -> list[Area]:
    """Flow states, then jump states that look different from them."""
    flow = [FLOW_STATES[state] for state in meanings_seen(run["gate_flow_state"])]
    return flow + [JUMP_STATES[state] for state in meanings_seen(run["jump_state"])]


def _marks_seen(run: xr.Dataset) -> list[Mark]:
    on_page = run.isel(order=np.flatnonzero(np.isin(run["order_gate"].values, names(run["gate"]))))
    return list(marked_orders(on_page))


def words(run: xr.Dataset, display: Display) -> str:
    """What the openings show, gate by gate."""
    told = (
        f"{gate}: {_told(run['gate_opening'].values[:, row], orders_of(run, gate).sizes['order'], display)}"
        for row, gate in enumerate(names(run["gate"]))
    )
    return f"Opening of each gate against time, with strips of the state of its flow and its jump. {'; '.join(told)}."


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """Opening, discharge and states, by output step and gate."""
    columns = [time_column(run, run["time"].values)]
    for row, gate in enumerate(names(run["gate"])):
        here = run.isel(gate=row)
        columns += [
            quantity_column(f"{gate}: opening", here["gate_opening"].values, "length", display),
            *(
                quantity_column(f"{bay}: opening", openings, "length", display)
                for bay, openings in zip(_bay_names(run, gate), bays_of(run, gate).T, strict=True)
            ),
            quantity_column(f"{gate}: discharge", here["gate_discharge"].values, "discharge", display),
            flag_column(f"{gate}: flow", here["gate_flow_state"]),
            flag_column(f"{gate}: jump", here["jump_state"]),
        ]
    return NumberTable(tuple(columns))


def orders_table(run: xr.Dataset, display: Display) -> NumberTable:
    """The orders of the gates of the run, a row each."""
    orders = run.isel(order=np.flatnonzero(np.isin(run["order_gate"].values, names(run["gate"]))))
    return NumberTable((
        time_column(run, orders["order_time"].values),
        text_column("gate", orders["order_gate"].values.tolist()),
        text_column("bay", [str(bay) if bay else "all" for bay in orders["order_bay"].values.tolist()]),
        quantity_column("opening before", orders["order_opening_before"].values, "length", display),
        quantity_column("opening after", orders["order_opening_after"].values, "length", display),
        time_column(run, orders["order_completed"].values, "leaf stands"),
        flag_column("status", orders["order_status"]),
        text_column("given by", orders["order_source"].values.tolist()),
        text_column("reason", orders["order_reason"].values.tolist()),
    ))  # fmt: skip

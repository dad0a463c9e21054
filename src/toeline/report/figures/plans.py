"""Plans of one day side by side: both hazards, least margins, levels, and the gate with the least margin of all."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace

import numpy as np
import xarray as xr
from matplotlib.axes import Axes
from matplotlib.lines import Line2D

from toeline.errors import UsageError
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.series import names
from toeline.report.clock import duration_text
from toeline.report.figures.draw import draw_line, line_look, mark_look, panel_title
from toeline.report.figures.drawn_steps import drawn_steps
from toeline.report.figures.picture import Picture, page_count, page_name, spread
from toeline.report.figures.sheet import NO_GATES, SMALL_SIZE, Panel, Sheet, about_run, in_house_style, shortened
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.number_table import Column, NumberTable, number_column, quantity_column, text_column, time_column
from toeline.report.run_identity import RunIdentity, run_identity
from toeline.report.style import HAZARD_FLOOR, HAZARD_PEOPLE, INK, axis_text, plan_line, plan_mark, shown_factor
from toeline.results.dataset import in_parts
from toeline.units import Display

NAME = "plans"
ROWS_ON_A_PAGE = 16
PITCH, LABELS = 0.3, 0.13
COLUMNS = ((0.0, 0.28), (0.36, 0.28), (0.72, 0.28))
"""Left edge and width of the columns beside one another, in shares of the room right of the names."""
LONGEST_NAME = 28
SPREAD = 0.5
"""Over which share of its row the marks of several plans are spread."""
TOP, TIME_HEIGHT, GAP = 0.25, 1.5, 0.85


def pictures(runs: Sequence[xr.Dataset], display: Display) -> Iterator[Picture]:
    """The comparing figure, sixteen gates or pools to a page. UsageError unless canal and period are the same."""
    check_alike(runs)
    jumps = [gate_jumps(run) for run in runs]
    gate_count, pool_count = runs[0].sizes["gate"], runs[0].sizes["pool"]
    count = page_count(max(gate_count, pool_count), ROWS_ON_A_PAGE)
    both = zip(spread(range(gate_count), count), spread(range(pool_count), count), strict=True)
    for page, (gates, pools) in enumerate(both):
        here = [run.isel(gate=gates, pool=pools) for run in runs]
        of_page = [[jumps_of_run[gate] for gate in gates] for jumps_of_run in jumps]
        yield _page(here, of_page, display, page_name(NAME, page, count))


def check_alike(runs: Sequence[xr.Dataset]) -> None:
    """UsageError unless all runs are of one canal and begin together."""
    first = runs[0]
    for run in runs[1:]:
        for what in ("gate", "pool"):
            if names(run[what]) != names(first[what]):
                raise UsageError(f"runs of {first.attrs['canal']} and {run.attrs['canal']} differ in their {what}s")
        if run["time"].values[0] != first["time"].values[0]:
            raise UsageError("plans are compared over one day: these runs do not begin at the same time")


def plan_names(runs: Sequence[xr.Dataset]) -> list[str]:
    """What each run is called: its plan; where that does not tell them apart, its day and plan."""
    plans = [run_identity(run).plan for run in runs]
    if len(set(plans)) == len(plans):
        return plans
    days = [f"{run.attrs['title']}, {plan}" for run, plan in zip(runs, plans, strict=True)]
    if len(set(days)) == len(days):
        return days
    return [f"{place + 1}: {name}" for place, name in enumerate(days)]


def _identity(runs: Sequence[xr.Dataset]) -> RunIdentity:
    about = [run_identity(run) for run in runs]
    unfinished = [one.outcome for one in about if one.outcome != "complete"]
    versions = dict.fromkeys(one.version for one in about)
    return replace(
        about[0],
        plan="; ".join(plan_names(runs)) if len(runs) <= 3 else f"{len(runs)} plans",
        outcome=unfinished[0] if unfinished else "complete",
        version=", ".join(versions),
    )


@in_house_style
def _page(runs: Sequence[xr.Dataset], jumps: list[list[GateJumps]], display: Display, name: str) -> Picture:
    plans = plan_names(runs)
    gates, pools = names(runs[0]["gate"]), names(runs[0]["pool"])
    gate_height, pool_height = PITCH * max(len(gates), 1), PITCH * max(len(pools), 1)
    pool_top = TOP + gate_height + GAP
    time_top = pool_top + pool_height + GAP + 0.15
    sheet = Sheet("Plans compared", about_run(_identity(runs)), time_top + TIME_HEIGHT + 0.1, plans)
    _gate_rows(sheet, jumps, gates, gate_height, display)
    _pool_rows(sheet, runs, pools, Panel(pool_top, pool_height), display)
    _margin_through_time(sheet, runs, worst_gate(runs), Panel(time_top, TIME_HEIGHT), display)
    sheet.legend([
        Line2D([], [], label=plan, **(line_look(plan_line(place, plan)) | mark_look(plan_mark(place, plan)) | {
            "linestyle": line_look(plan_line(place, plan))["linestyle"]}))
        for place, plan in enumerate(plans)
    ])  # fmt: skip
    tables = {"": gate_table(runs, jumps, display), "pools": pool_table(runs, display)}
    return Picture(name, sheet.figure, tables, words(runs, jumps))


def _gate_rows(sheet: Sheet, jumps: list[list[GateJumps]], gates: list[str], height: float, display: Display) -> None:
    factor = shown_factor("length", display)
    columns: tuple[tuple[str, str, Callable[[GateJumps], float]], ...] = (
        (HAZARD_FLOOR.word, "hours", lambda gate: gate.beyond_protection_hours),
        (HAZARD_PEOPLE.word, "hours", lambda gate: gate.roller_hours),
        ("least protection margin", axis_text("tailwater", "length", display).split(", ")[1],
         lambda gate: gate.protection_margin.value / factor),
    )  # fmt: skip
    for (left, width), (title, unit, value) in zip(COLUMNS, columns, strict=True):
        share = 1.0 - LABELS
        axes = sheet.axes(Panel(TOP, height, LABELS + left * share, width * share))
        for place, of_plan in enumerate(jumps):
            rows = _rows(len(gates), place, len(jumps))
            axes.plot([value(gate) for gate in of_plan], rows, label=str(place), **mark_look(plan_mark(place, "")))
        if title == HAZARD_FLOOR.word:
            _tell_hazards(axes, jumps, value)
        _name_rows(axes, gates if left == 0.0 else [""] * len(gates))
        if unit == "hours":
            axes.set_xlim(left=min(0.0, axes.get_xlim()[0]))
        axes.axvline(0.0, color=INK, linewidth=0.6)
        axes.margins(x=0.1)
        axes.set_xlabel(unit)
        panel_title(axes, title, size=SMALL_SIZE)


def _tell_hazards(axes: Axes, jumps: list[list[GateJumps]], value: Callable[[GateJumps], float]) -> None:
    """The time beside each mark that is not at zero: minutes are hard to read from hours."""
    for place, of_plan in enumerate(jumps):
        for row, gate in zip(_rows(len(of_plan), place, len(jumps)), of_plan, strict=True):
            if hours := value(gate):
                axes.annotate(duration_text(hours * 3600), (hours, row), xytext=(-6, 0), textcoords="offset points",
                              fontsize=SMALL_SIZE, va="center", ha="right")  # fmt: skip


def _rows(count: int, place: int, plans: int) -> np.ndarray:
    """Heights of the marks of one plan: rows one apart, the plans of a row a little below one another."""
    shift = 0.0 if plans == 1 else SPREAD * (place / (plans - 1) - 0.5)
    return np.arange(count) + shift


def _name_rows(axes: Axes, labels: list[str]) -> None:
    axes.set_yticks(range(len(labels)), [shortened(label, LONGEST_NAME) for label in labels])
    axes.set_ylim(max(len(labels), 1) - 0.5, -0.5)
    axes.tick_params(axis="y", length=0)


def _pool_rows(sheet: Sheet, runs: Sequence[xr.Dataset], pools: list[str], panel: Panel, display: Display) -> None:
    """From the lowest to the highest level of each pool, from its target."""
    axes = sheet.axes(Panel(panel.top, panel.height, LABELS, 1.0 - LABELS))
    for place, run in enumerate(runs):
        low, high = (extreme / shown_factor("length", display) for extreme in level_range(run))
        rows = _rows(len(pools), place, len(runs))
        look = line_look(plan_line(place, ""))
        axes.hlines(rows, low, high, color=look["color"], linewidth=2.0, linestyle="solid")
        mark = mark_look(plan_mark(place, ""))
        axes.plot(np.concatenate((low, high)), np.concatenate((rows, rows)), label=str(place), **mark)
    _name_rows(axes, pools)
    axes.axvline(0.0, color=INK, linewidth=0.6)
    axes.set_xlabel(axis_text("level from target", "length", display))
    panel_title(axes, "lowest and highest level of each pool, from its target")


def level_range(run: xr.Dataset) -> tuple[np.ndarray, np.ndarray]:
    """Lowest and highest level at the lower end of each pool, from its target [m]; NaN where it has none."""
    ends: list[tuple[np.ndarray, np.ndarray]] = []
    for part in in_parts(run, "pool", "pool_tail_level"):
        departure = part["pool_tail_level"].values - part["pool_target_level"].values
        ends.append((departure.min(axis=0), departure.max(axis=0)))
    lowest, highest = (np.concatenate(of_parts) for of_parts in zip(*ends, strict=True))
    return lowest, highest


def worst_gate(runs: Sequence[xr.Dataset]) -> int:
    """The gate that has the least protection margin of all plans; the first where no gate has any."""
    least = np.min([_least_margins(run) for run in runs], axis=0)
    return int(np.argmin(least)) if least.size else 0


def _least_margins(run: xr.Dataset) -> np.ndarray:
    parts = in_parts(run, "gate", "protection_margin")
    return np.concatenate([np.nanmin(part["protection_margin"].values, axis=0, initial=np.inf) for part in parts])


def _margin_through_time(sheet: Sheet, runs: Sequence[xr.Dataset], gate: int, panel: Panel, display: Display) -> None:
    if not runs[0].sizes["gate"]:
        sheet.say(NO_GATES)
        return
    axes = sheet.axes(panel)
    for place, run in enumerate(runs):
        drawn = drawn_steps(run.isel(gate=[gate]), "protection_margin")
        margins = drawn["protection_margin"].values[:, 0] / shown_factor("length", display)
        draw_line(axes, plan_line(place, str(place)), TimeAxis(drawn).steps, margins)
    TimeAxis(max(runs, key=lambda run: run["time"].values[-1])).apply(axes)
    axes.axhline(0.0, color=INK, linewidth=0.8)
    axes.set_ylabel(axis_text("tailwater to spare", "length", display))
    gate_name = names(runs[0]["gate"])[gate]
    panel_title(axes, f"Protection margin of {gate_name}", "below 0: the jump ends beyond the protected floor")


def words(runs: Sequence[xr.Dataset], jumps: list[list[GateJumps]]) -> str:
    """Both hazards of every plan, over all gates."""
    told = []
    for plan, of_plan in zip(plan_names(runs), jumps, strict=True):
        floor = sum(gate.beyond_protection_hours for gate in of_plan) * 3600
        people = sum(gate.roller_hours for gate in of_plan) * 3600
        told.append(
            f"{plan}: floor, jumps beyond protection for {duration_text(floor)}; "
            f"people, drowned rollers for {duration_text(people)}, gates added up"
        )
    return f"Plans compared. {'. '.join(told)}. No plan makes the water safe to enter."


def gate_table(runs: Sequence[xr.Dataset], jumps: list[list[GateJumps]], display: Display) -> NumberTable:
    """Hours of both hazards and least margins, a row for every plan and gate."""
    rows = [
        (plan, run, gate)
        for plan, run, of_plan in zip(plan_names(runs), runs, jumps, strict=True)
        for gate in of_plan
    ]  # fmt: skip

    def column(value: Callable[[GateJumps], float]) -> np.ndarray:
        return np.array([value(gate) for _, _, gate in rows])

    times = tuple(
        cell for _, run, gate in rows for cell in time_column(run, np.array([gate.protection_margin.time])).cells
    )
    return NumberTable((
        text_column("plan", [plan for plan, _, _ in rows]),
        text_column("gate", [gate.gate for _, _, gate in rows]),
        number_column("jump beyond protection", "h", column(lambda gate: gate.beyond_protection_hours)),
        number_column("drowned roller", "h", column(lambda gate: gate.roller_hours)),
        quantity_column("least protection margin", column(_least_protection_margin), "length", display),
        Column("time of the least protection margin", "", times),
        quantity_column("least tailwater margin", column(lambda gate: gate.tailwater_margin.value), "length", display),
    ))  # fmt: skip


def _least_protection_margin(gate: GateJumps) -> float:
    return gate.protection_margin.value


def pool_table(runs: Sequence[xr.Dataset], display: Display) -> NumberTable:
    """Lowest and highest level from target, a row for every plan and pool."""
    pools, ranges = names(runs[0]["pool"]), [level_range(run) for run in runs]
    return NumberTable((
        text_column("plan", [plan for plan in plan_names(runs) for _ in pools]),
        text_column("pool", pools * len(runs)),
        quantity_column("lowest level from target", np.concatenate([low for low, _ in ranges]), "length", display),
        quantity_column("highest level from target", np.concatenate([high for _, high in ranges]), "length", display),
    ))  # fmt: skip

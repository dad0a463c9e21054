"""Levels at the lower end of each pool against its target, its lining and the owner's limits, and below each how much
of the limits on falls and rises was used.
"""

from collections.abc import Iterator, Sequence

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.series import greatest, least, names
from toeline.findings.settling import pools_settling
from toeline.report.figures.draw import (
    Drawn,
    draw_level,
    draw_line,
    key,
    margin_note,
    panel_title,
    value_range,
    words_of,
)
from toeline.report.figures.drawn_steps import drawn_steps, steps_note, steps_words
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.pool_limits import PoolLimits, limit_level, limits_by_pool, use_lines, used_share
from toeline.report.figures.sheet import Panel, Sheet, about_run, in_house_style
from toeline.report.figures.time_axis import TimeAxis, positions
from toeline.report.number_table import Column, NumberTable, number_column, quantity_column, text_column, time_column
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.style import (
    BANK,
    BED,
    LIMIT,
    LINING,
    OVER_EDGE,
    SETTLING,
    TARGET,
    WATER,
    Line,
    axis_text,
    shown_factor,
)
from toeline.units import Display

NAME = "levels"
SERIES = ("pool_tail_level", "pool_lining_margin", "pool_bank_margin", "settling")
POOLS_ON_A_PAGE = 6
HEIGHT, ABOVE = 1.15, 0.5
USE_HEIGHT, USE_GAP = 0.42, 0.12
NEAR = 1.0
"""An edge further from the water than so many times the range of its level, and than `LEAST_NEAR`, is left out."""
LEAST_NEAR = 0.25
EDGES = {"lining": LINING, "bank": BANK, "bed": BED}
NO_LIMITS = PoolLimits()


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The levels of all pools, six to a page."""
    groups = pages(range(run.sizes["pool"]), POOLS_ON_A_PAGE)
    for page, pools in enumerate(groups):
        here = drawn_steps(run.isel(pool=pools), *SERIES)
        edges = [pool_edges(run, pool) for pool in pools]
        limits = limits_by_pool(run, names(here["pool"]), here["time"].values)
        of_page = [limits.get(pool, NO_LIMITS) for pool in names(here["pool"])]
        yield _page(here, edges, of_page, display, page_name(NAME, page, len(groups)))


def pool_edges(run: xr.Dataset, pool: int) -> dict[str, float]:
    """Levels at the lower end of a pool [m]: bed, top of the lining and of the bank; NaN where there is none."""
    nodes = np.flatnonzero(run["node_pool"].values == pool)
    return {edge: float(run[f"{edge}_level"].values[nodes[-1]]) if nodes.size else np.nan for edge in EDGES}


@in_house_style
def _page(
    run: xr.Dataset, edges: list[dict[str, float]], limits: list[PoolLimits], display: Display, name: str
) -> Picture:
    uses = use_lines(limits, display)
    shown: list[Drawn] = [WATER, TARGET, LINING, BANK, OVER_EDGE, SETTLING, *uses.values()]
    shown += [LIMIT] if any(of_pool.levels for of_pool in limits) else []
    pitch = ABOVE + HEIGHT + (USE_GAP + USE_HEIGHT if uses else 0.0)
    title = "Water levels at the lower ends of the pools"
    sheet = Sheet(title, about_run(run_identity(run), steps_note(run)), pitch * len(edges) + 0.1, words_of(shown))
    time, settling = TimeAxis(run), pools_settling(run)
    for row, (of_pool, of_edges) in enumerate(zip(limits, edges, strict=True)):
        axes = sheet.axes(Panel(row * pitch + ABOVE, HEIGHT))
        _panel(axes, run.isel(pool=row), of_edges, of_pool, settling[:, row], time, display)
        is_last = row == len(edges) - 1
        time.apply(axes, labelled=is_last and not uses)
        if uses:
            below = sheet.axes(Panel(row * pitch + ABOVE + HEIGHT + USE_GAP, USE_HEIGHT))
            _use_panel(below, of_pool, uses)
            time.apply(below, labelled=is_last)
    sheet.side_title(axis_text("level above datum", "length", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(
        name, sheet.figure, {"": table(run, limits, display)}, words(run, limits, display) + steps_words(run)
    )


def _panel(
    axes: Axes,
    run: xr.Dataset,
    edges: dict[str, float],
    limits: PoolLimits,
    settling: np.ndarray,
    time: TimeAxis,
    display: Display,
) -> None:
    factor = shown_factor("length", display)
    level, target = run["pool_tail_level"].values, float(run["pool_target_level"])
    low, high = value_range(np.append(level, target))
    near = max(NEAR * (high - low), LEAST_NEAR)
    lines = [(EDGES[edge], edge, np.full(level.size, height)) for edge, height in edges.items()]
    lines += [(LIMIT, _limit_note(watch.limit.subject), limit_level(watch, level)) for watch in limits.levels]
    for line, note, heights in lines:
        if ((heights > low - near) & (heights < high + near)).any():
            draw_line(axes, line, time.steps, heights / factor)
            margin_note(axes, heights[-1] / factor, note)
            least_height, greatest_height = value_range(heights)
            low, high = max(min(low, least_height), low - near), min(max(high, greatest_height), high + near)
    draw_level(axes, TARGET, target / factor)
    if np.isfinite(target):
        margin_note(axes, target / factor, "target")
    draw_line(axes, WATER, time.steps, level / factor)
    room = max(0.12 * (high - low), 0.02)
    axes.set_ylim((low - room) / factor, (high + room) / factor)
    time.strip(axes, settling, SETTLING, 1.02, 0.07, above=True)
    time.strip(axes, over_edge(run), OVER_EDGE, 0.0, 0.09, above=True)
    panel_title(axes, str(run["pool"].values), _told(run, RunClock(run), display), lift=10.0)


def _limit_note(subject: str) -> str:
    """What a limit is about, short enough for the margin."""
    return (
        subject.replace("height above target", "most").replace("drop below target", "least").replace(" to the ", ", ")
    )


def _use_panel(axes: Axes, limits: PoolLimits, uses: dict[str, Line]) -> None:
    """How much of each limit on falls and rises was used, in percent of it."""
    most = 100.0
    for watch in limits.changes:
        share = used_share(watch)
        draw_line(axes, uses[watch.limit.subject], positions(watch.times), share)
        most = max(most, float(np.nanmax(share)))
    axes.axhline(100.0, color=LIMIT.colour, linewidth=0.8, label="the whole limit")
    axes.set_ylim(0.0, 1.12 * most)
    reached = f"\n{most:.0f} % at most" if most > 100.0 else ""
    margin_note(axes, 0.5, f"% of limit{reached}", in_axes=True)


def over_edge(run: xr.Dataset) -> np.ndarray:
    """Whether water stood above the lining or the bank somewhere along the pool, by output step."""
    holds: np.ndarray = np.any([run[f"pool_{edge}_margin"].values < 0.0 for edge in ("lining", "bank")], axis=0)
    return holds


def _told(run: xr.Dataset, clock: RunClock, display: Display) -> str:
    times, target = run["time"].values, float(run["pool_target_level"])
    from_level = run["pool_tail_level"].values - (0.0 if np.isnan(target) else target)
    told = []
    for extreme, word in ((least(from_level, times), "lowest"), (greatest(from_level, times), "highest")):
        if np.isfinite(extreme.value):
            told.append(f"{word} {_signed(extreme.value, target, display)} at {clock.at(extreme.time)}")
    edges = [edge for edge in ("lining", "bank") if (run[f"pool_{edge}_margin"].values < 0.0).any()]
    return "; ".join([*told, *(f"above the {edge} for a time" for edge in edges)])


def _signed(value: float, target: float, display: Display) -> str:
    """A height from the target with its sign; the level itself where there is no target."""
    text = display.level(value)
    if np.isnan(target):
        return text
    sign = "" if text.startswith("-") or not float(text.split(" ")[0]) else "+"
    return f"{sign}{text} from target"


def words(run: xr.Dataset, limits: Sequence[PoolLimits], display: Display) -> str:
    """What the levels show, pool by pool."""
    clock, told = RunClock(run), []
    for row, (pool, of_pool) in enumerate(zip(names(run["pool"]), limits, strict=True)):
        used = [f"{watch.limit.subject}: {np.nanmax(used_share(watch)):.0f} % used" for watch in of_pool.changes]
        told.append("; ".join([f"{pool}: {_told(run.isel(pool=row), clock, display)}", *used]))
    return f"Water level at the lower end of each pool against time, with its target. {'. '.join(told)}."


def table(run: xr.Dataset, limits: Sequence[PoolLimits], display: Display) -> NumberTable:
    """Levels, margins and the use of limits, by output step and pool."""
    columns = [time_column(run, run["time"].values)]
    settling = pools_settling(run)
    for row, of_pool in enumerate(limits):
        columns += _pool_columns(run.isel(pool=row), of_pool, settling[:, row], display)
    return NumberTable(tuple(columns))


def _pool_columns(run: xr.Dataset, limits: PoolLimits, settling: np.ndarray, display: Display) -> Iterator[Column]:
    pool, level = str(run["pool"].values), run["pool_tail_level"].values
    heights = {
        "level at the lower end": level,
        "target": np.full(level.size, float(run["pool_target_level"])),
        "lining above water": run["pool_lining_margin"].values,
        "bank above water": run["pool_bank_margin"].values,
        **{f"level at the limit of {watch.limit.subject}": limit_level(watch, level) for watch in limits.levels},
    }
    for name, values in heights.items():
        yield quantity_column(f"{pool}: {name}", values, "length", display)
    steps = positions(run["time"].values)
    for watch in limits.changes:
        at_steps = np.interp(steps, positions(watch.times), used_share(watch))
        yield number_column(f"{pool}: {watch.limit.subject}, used of the limit", "%", at_steps)
    yield text_column(f"{pool}: levels", ["settling" if holds else "settled" for holds in settling])

"""Levels at the lower end of each pool against its target, its lining and the owner's limits."""

from collections.abc import Iterator

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.series import greatest, is_any, least, names
from toeline.report.figures.draw import Drawn, draw_level, draw_line, key, margin_note, panel_title, words_of
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import Sheet, in_house_style
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.number_table import Column, NumberTable, quantity_column, time_column
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.style import BANK, BED, LINING, OVER_EDGE, SETTLING, TARGET, WATER, axis_text, shown_factor
from toeline.units import Display

NAME = "levels"
POOLS_ON_A_PAGE = 6
PITCH, HEIGHT = 1.65, 1.2
NEAR = 1.0
"""An edge further above the water than so many times the range of its level, and than `LEAST_NEAR`, is left out."""
LEAST_NEAR = 0.25


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The levels of all pools, six to a page."""
    groups = pages(range(run.sizes["pool"]), POOLS_ON_A_PAGE)
    for page, pools in enumerate(groups):
        edges = [pool_edges(run, pool) for pool in pools]
        yield _page(run.isel(pool=pools), edges, display, page_name(NAME, page, len(groups)))


def pool_edges(run: xr.Dataset, pool: int) -> dict[str, float]:
    """Levels at the lower end of a pool [m]: bed, top of the lining and of the bank; NaN where there is none."""
    nodes = np.flatnonzero(run["node_pool"].values == pool)
    return {edge: float(run[f"{edge}_level"].values[nodes[-1]]) if nodes.size else np.nan for edge in EDGES}


EDGES = {"lining": LINING, "bank": BANK, "bed": BED}


@in_house_style
def _page(run: xr.Dataset, edges: list[dict[str, float]], display: Display, name: str) -> Picture:
    shown: list[Drawn] = [WATER, TARGET, LINING, BANK, OVER_EDGE, SETTLING]
    sheet = Sheet(
        "Water levels at the lower ends of the pools", run_identity(run), PITCH * len(edges) + 0.1, words_of(shown)
    )
    time = TimeAxis(run)
    for row, axes in enumerate(time.rows(sheet, len(edges), PITCH, HEIGHT)):
        _panel(axes, run.isel(pool=row), edges[row], time, display)
    sheet.side_title(axis_text("level above datum", "length", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(name, sheet.figure, {"": table(run, display)}, words(run, display))


def _panel(axes: Axes, run: xr.Dataset, edges: dict[str, float], time: TimeAxis, display: Display) -> None:
    factor = shown_factor("length", display)
    level, target = run["pool_tail_level"].values, float(run["pool_target_level"])
    low, high = _range(level, target)
    near = max(NEAR * (high - low), LEAST_NEAR)
    for edge, line in EDGES.items():
        if low - near < edges[edge] < high + near:
            draw_level(axes, line, edges[edge] / factor)
            margin_note(axes, edges[edge] / factor, edge)
            low, high = min(low, edges[edge]), max(high, edges[edge])
    draw_level(axes, TARGET, target / factor)
    if np.isfinite(target):
        margin_note(axes, target / factor, "target")
    draw_line(axes, WATER, time.steps, level / factor)
    room = max(0.12 * (high - low), 0.02)
    axes.set_ylim((low - room) / factor, (high + room) / factor)
    time.strip(axes, is_any(run["settling"], "settling"), SETTLING, 1.02, 0.07, above=True)
    time.strip(axes, over_edge(run), OVER_EDGE, 0.0, 0.09, above=True)
    panel_title(axes, str(run["pool"].values), _told(run, RunClock(run), display), lift=10.0)


def over_edge(run: xr.Dataset) -> np.ndarray:
    """Whether water stood above the lining or the bank somewhere along the pool, by output step."""
    holds: np.ndarray = np.any([run[f"pool_{edge}_margin"].values < 0.0 for edge in ("lining", "bank")], axis=0)
    return holds


def _range(level: np.ndarray, target: float) -> tuple[float, float]:
    values = np.append(level, target)
    if not np.isfinite(values).any():
        return 0.0, 1.0
    return float(np.nanmin(values)), float(np.nanmax(values))


def _told(run: xr.Dataset, clock: RunClock, display: Display) -> str:
    times, target = run["time"].values, float(run["pool_target_level"])
    from_level = run["pool_tail_level"].values - (0.0 if np.isnan(target) else target)
    told = []
    for extreme, word in ((least(from_level, times), "lowest"), (greatest(from_level, times), "highest")):
        if np.isfinite(extreme.value):
            told.append(f"{word} {_signed(extreme.value, target, display)} at {clock.at(extreme.time)}")
    over = [
        f"above the {edge} for a time" for edge in ("lining", "bank") if (run[f"pool_{edge}_margin"].values < 0.0).any()
    ]
    return "; ".join([*told, *over])


def _signed(value: float, target: float, display: Display) -> str:
    """A height from the target with its sign; the level itself where there is no target."""
    text = display.level(value)
    if np.isnan(target):
        return text
    sign = "" if text.startswith("-") or not float(text.split(" ")[0]) else "+"
    return f"{sign}{text} from target"


def words(run: xr.Dataset, display: Display) -> str:
    """What the levels show, pool by pool."""
    clock = RunClock(run)
    told = (f"{pool}: {_told(run.isel(pool=row), clock, display)}" for row, pool in enumerate(names(run["pool"])))
    return f"Water level at the lower end of each pool against time, with its target. {'; '.join(told)}."


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """Levels and margins, by output step and pool."""
    columns = [time_column(run, run["time"].values)]
    for row, pool in enumerate(names(run["pool"])):
        here = run.isel(pool=row)
        target = np.full(run.sizes["time"], float(here["pool_target_level"]))
        columns += [
            quantity_column(f"{pool}: level at the lower end", here["pool_tail_level"].values, "length", display),
            quantity_column(f"{pool}: target", target, "length", display),
            quantity_column(f"{pool}: lining above water", here["pool_lining_margin"].values, "length", display),
            quantity_column(f"{pool}: bank above water", here["pool_bank_margin"].values, "length", display),
            Column(
                f"{pool}: levels",
                "",
                tuple("settling" if s else "settled" for s in is_any(here["settling"], "settling")),
            ),
        ]
    return NumberTable(tuple(columns))

"""The water ledger as steps down from what was taken in, through all that it was spent on, to what is unexplained."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr
from matplotlib.axes import Axes
from matplotlib.ticker import StrMethodFormatter

from toeline.findings.ledger import ledger
from toeline.report.figures.draw import area_look, key, panel_title, words_of
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import SMALL_SIZE, Panel, Sheet, about_run, in_house_style, shortened
from toeline.report.number_table import NumberTable, quantity_column, text_column
from toeline.report.run_identity import run_identity
from toeline.report.style import CAME_IN, INK, KEPT, WENT_OUT, Area, axis_text, shown_factor, unit_text
from toeline.report.water import ENTRIES
from toeline.units import Display, UnitSystem

NAME = "ledger"
ENTRIES_ON_A_PAGE = 32
PITCH, BAR = 0.27, 0.62
LABELS = 0.17
"""Room for the names of the entries, as a share of the width."""
LONGEST_NAME = 36
AREAS = (CAME_IN, WENT_OUT, KEPT)


@dataclass(frozen=True)
class Entry:
    """A line of the ledger: its volume [m³], positive what comes in, and what it counts as."""

    name: str
    volume: float
    area: Area


def entries(run: xr.Dataset) -> list[Entry]:
    """All lines of the ledger, in its order; their sum is the residual."""
    account, pools = ledger(run).canal, ledger(run).pools
    return [
        Entry("taken in at the head", account.inflow, CAME_IN),
        *(Entry(f"delivered, {offtake}", -volume, WENT_OUT) for offtake, volume in account.deliveries.items()),
        *(Entry(f"spilled, {escape}", -volume, WENT_OUT) for escape, volume in account.escapes.items()),
        *(Entry(f"lost in {pool}", -of_pool.losses, WENT_OUT) for pool, of_pool in pools.items() if of_pool.losses),
        Entry("let out at the tail", -account.outflow, WENT_OUT),
        *(Entry(f"kept in {pool}", -of_pool.storage_change, KEPT) for pool, of_pool in pools.items()),
    ]


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The ledger from top to bottom, at most 32 entries to a page."""
    listed = entries(run)
    left_over = np.cumsum([entry.volume for entry in listed])
    groups = pages(range(len(listed)), ENTRIES_ON_A_PAGE)
    for page, places in enumerate(groups):
        before = [left_over[place] - listed[place].volume for place in places]
        yield _page(run, [listed[place] for place in places], before, display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(run: xr.Dataset, listed: list[Entry], before: list[float], display: Display, name: str) -> Picture:
    sheet = Sheet("Water ledger", about_run(run_identity(run)), PITCH * (len(listed) + 1) + 0.75, words_of(AREAS))
    axes = sheet.axes(Panel(0.25, PITCH * (len(listed) + 1), LABELS, 1.0 - LABELS))
    _steps(axes, listed, before, display)
    axes.set_xlabel(axis_text("volume", "volume", display))
    residual = ledger(run).canal.residual / shown_factor("volume", display)
    panel_title(axes, "", f"residual {residual:.1g} {unit_text('volume', display)}: whether the computing lost water")
    sheet.legend([key(area) for area in AREAS])
    return Picture(
        name, sheet.figure, {"": table(run, display), "pools": pools_table(run, display)}, words(run, display)
    )


def _steps(axes: Axes, listed: list[Entry], before: list[float], display: Display) -> None:
    factor = shown_factor("volume", display)
    start, step = (np.nan_to_num(volumes) / factor for volumes in (before, [entry.volume for entry in listed]))
    for row, entry in enumerate(listed):
        axes.barh(row, step[row], BAR, start[row], label=entry.area.word, **area_look(entry.area))
        if row:
            axes.plot([start[row]] * 2, [row - 1 - BAR / 2, row + BAR / 2], color=INK, linewidth=0.6)
    reach = np.concatenate((start, start + step, [0.0]))
    room = 0.14 * max(float(np.ptp(reach)), 1e-9)
    for row, entry in enumerate(listed):
        end = max(start[row], start[row] + step[row])
        axes.annotate(_signed(entry.volume, display), (end, row), xytext=(5, 0), textcoords="offset points",
                      fontsize=SMALL_SIZE, va="center")  # fmt: skip
    axes.set_xlim(min(float(reach.min()), 0.0) - 0.02 * room, float(reach.max()) + room)
    axes.xaxis.set_major_formatter(StrMethodFormatter("{x:,.0f}"))
    axes.set_yticks(range(len(listed)), [shortened(entry.name, LONGEST_NAME) for entry in listed])
    axes.set_ylim(len(listed) - 0.4, -0.6)
    axes.tick_params(axis="y", length=0)
    axes.grid(visible=False, axis="y")


def _signed(volume: float, display: Display) -> str:
    decimals = 0 if display.system is UnitSystem.metric else 2
    if np.isnan(volume):
        return "not known"
    number = round(volume / shown_factor("volume", display), decimals) + 0.0  # + 0.0 turns -0.0 into 0.0
    return f"{number:+,.{decimals}f} {unit_text('volume', display)}"


def words(run: xr.Dataset, display: Display) -> str:
    """All lines of the ledger with their volumes."""
    told = "; ".join(f"{entry.name} {_signed(entry.volume, display)}" for entry in entries(run))
    return f"Water ledger of the run. {told}; residual {display.volume(ledger(run).canal.residual)}."


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """The lines of the ledger and the residual; what comes in is positive."""
    listed = entries(run)
    volumes = [entry.volume for entry in listed] + [ledger(run).canal.residual]
    return NumberTable((
        text_column("entry", [*(entry.name for entry in listed), "residual"]),
        quantity_column("volume", np.array(volumes), "volume", display),
    ))  # fmt: skip


def pools_table(run: xr.Dataset, display: Display) -> NumberTable:
    """The account of every pool and of the canal: what came in, where it went, what was kept, what is unexplained."""
    volumes = ledger(run)
    accounts = {**volumes.pools, "canal": volumes.canal}
    columns = {name: [entry(account) for account in accounts.values()] for name, entry in ENTRIES.items()}
    columns["residual"] = [account.residual for account in accounts.values()]
    numbers = (quantity_column(name, np.array(column), "volume", display) for name, column in columns.items())
    return NumberTable((text_column("pool", list(accounts)), *numbers))

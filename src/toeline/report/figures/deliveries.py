"""Deliveries: what each offtake asked for and what it was given, and what the escapes spilled."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.deliveries import SHORTFALL_FROM
from toeline.findings.series import names
from toeline.report.figures.draw import (
    Drawn,
    area_look,
    draw_line,
    empty_note,
    key,
    panel_title,
    value_range,
    words_of,
)
from toeline.report.figures.drawn_steps import drawn_steps, steps_note, steps_words
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import Sheet, about_run, in_house_style
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.number_table import NumberTable, quantity_column, time_column
from toeline.report.run_identity import run_identity
from toeline.report.style import DELIVERY, DEMAND, SHORTFALL, SPILL, Line, axis_text, shown_factor
from toeline.units import Display

NAME = "deliveries"
SERIES = ("demand", "delivery", "escape_discharge")
OUTLETS_ON_A_PAGE = 8
PITCH, HEIGHT = 1.15, 0.8
LEAST_TOP = 0.01
"""Top of a panel in which nothing flows [m³/s]."""


@dataclass(frozen=True)
class Outlet:
    """An offtake or an escape: what was asked (None of an escape) and given [m³/s], by output step, the volume [m³],
    and what was lacking at the worst [m³/s].
    """

    name: str
    pool: str
    demand: np.ndarray | None
    given: np.ndarray
    volume: float
    worst: float = 0.0

    @property
    def line(self) -> Line:
        return SPILL if self.demand is None else DELIVERY

    def told(self, display: Display) -> str:
        """What it was given in all, and how much was lacking at the worst."""
        if self.demand is None:
            return f"{display.volume(self.volume)} spilled"
        given = f"{display.volume(self.volume)} given"
        if np.isnan(self.demand).all():
            return f"{given}; nothing is asked, it follows the level of its pool"
        return given if self.worst <= SHORTFALL_FROM else f"{given}; at worst {display.discharge(self.worst)} short"


def outlets(run: xr.Dataset, drawn: xr.Dataset) -> list[Outlet]:
    """All offtakes, then all escapes, from the head down, with what is drawn of them."""
    worst = [value_range(lacking)[1] for lacking in _lacking(run)[SHORTFALL.word].T]
    return [
        *(
            Outlet(*facts)
            for facts in zip(
                names(run["offtake"]), names(run["offtake_pool"]), drawn["demand"].values.T, drawn["delivery"].values.T,
                _growth(run["delivery_volume"]), worst, strict=True,
            )
        ),
        *(
            Outlet(name, pool, None, given, volume)
            for name, pool, given, volume in zip(
                names(run["escape"]), names(run["escape_pool"]), drawn["escape_discharge"].values.T,
                _growth(run["escape_volume"]), strict=True,
            )
        ),
    ]  # fmt: skip


def _lacking(run: xr.Dataset) -> dict[str, np.ndarray]:
    return {SHORTFALL.word: run["demand"].values - run["delivery"].values}


def _growth(volumes: xr.DataArray) -> list[float]:
    """Last less first value along time [m³], by place."""
    growth: list[float] = (volumes[-1].values - volumes[0].values).tolist()
    return growth


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The deliveries of all offtakes and escapes, eight to a page."""
    offtakes = run.sizes["offtake"]
    groups = pages(range(offtakes + run.sizes["escape"]), OUTLETS_ON_A_PAGE)
    for page, places in enumerate(groups):
        first, after = (places[0], places[-1] + 1) if places else (0, 0)
        here = run.isel(
            offtake=slice(first, min(after, offtakes)),
            escape=slice(max(first - offtakes, 0), max(after - offtakes, 0)),
        )
        drawn = drawn_steps(here, *SERIES, derived=_lacking)
        yield _page(drawn, outlets(here, drawn), display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(run: xr.Dataset, listed: Sequence[Outlet], display: Display, name: str) -> Picture:
    shown: list[Drawn] = [DELIVERY, DEMAND, SHORTFALL]
    shown += [SPILL] if any(outlet.demand is None for outlet in listed) else []
    count = max(len(listed), 1)
    about = about_run(run_identity(run), steps_note(run))
    sheet = Sheet("Deliveries asked for and given", about, PITCH * count + 0.1, words_of(shown))
    time = TimeAxis(run)
    for row, axes in enumerate(time.rows(sheet, count, PITCH, HEIGHT)):
        if listed:
            _panel(axes, listed[row], time, display)
        else:
            empty_note(axes, "The canal has no offtakes.")
    sheet.side_title(axis_text("discharge", "discharge", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(name, sheet.figure, {"": table(run, listed, display)}, words(listed, display) + steps_words(run))


def _panel(axes: Axes, outlet: Outlet, time: TimeAxis, display: Display) -> None:
    factor = shown_factor("discharge", display)
    given, top = outlet.given / factor, LEAST_TOP / factor
    draw_line(axes, outlet.line, time.steps, given)
    if outlet.demand is not None:
        demand, lacks = outlet.demand / factor, outlet.demand - outlet.given > SHORTFALL_FROM
        axes.fill_between(time.steps, given, demand, where=lacks, label=SHORTFALL.word, **area_look(SHORTFALL))
        draw_line(axes, DEMAND, time.steps, demand)
        top = max(top, value_range(demand)[1])
    axes.set_ylim(0.0, 1.2 * max(top, value_range(given)[1]))
    panel_title(axes, f"{outlet.name}, {outlet.pool}", outlet.told(display))


def words(listed: Sequence[Outlet], display: Display) -> str:
    """What the deliveries show, outlet by outlet."""
    told = "; ".join(f"{outlet.name}: {outlet.told(display)}" for outlet in listed) or "There are none"
    return f"Discharge asked for and delivered at each offtake, and spilled over each escape, against time. {told}."


def table(run: xr.Dataset, listed: Sequence[Outlet], display: Display) -> NumberTable:
    """Demand and delivery or spill, by output step."""
    columns = [time_column(run, run["time"].values)]
    for outlet in listed:
        if outlet.demand is not None:
            columns.append(quantity_column(f"{outlet.name}: asked for", outlet.demand, "discharge", display))
        columns.append(quantity_column(f"{outlet.name}: {outlet.line.word}", outlet.given, "discharge", display))
    return NumberTable(tuple(columns))

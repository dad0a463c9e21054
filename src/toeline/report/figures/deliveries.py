"""Deliveries: what each offtake asked for and what it was given."""

from collections.abc import Iterator

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.deliveries import SHORTFALL_FROM
from toeline.findings.series import names
from toeline.report.figures.draw import Drawn, area_look, draw_line, empty_note, key, panel_title, words_of
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import Sheet, about_run, in_house_style
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.number_table import NumberTable, quantity_column, time_column
from toeline.report.run_identity import run_identity
from toeline.report.style import DELIVERY, DEMAND, SHORTFALL, axis_text, shown_factor
from toeline.units import Display

NAME = "deliveries"
OFFTAKES_ON_A_PAGE = 8
PITCH, HEIGHT = 1.15, 0.8


def pictures(run: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The deliveries of all offtakes, eight to a page."""
    groups = pages(range(run.sizes["offtake"]), OFFTAKES_ON_A_PAGE)
    for page, offtakes in enumerate(groups):
        yield _page(run.isel(offtake=offtakes), display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(run: xr.Dataset, display: Display, name: str) -> Picture:
    offtakes = names(run["offtake"])
    shown: list[Drawn] = [DELIVERY, DEMAND, SHORTFALL]
    sheet = Sheet(
        "Deliveries asked for and given",
        about_run(run_identity(run)),
        PITCH * max(len(offtakes), 1) + 0.1,
        words_of(shown),
    )
    time = TimeAxis(run)
    for row, axes in enumerate(time.rows(sheet, max(len(offtakes), 1), PITCH, HEIGHT)):
        if offtakes:
            _panel(axes, run.isel(offtake=row), time, display)
        else:
            empty_note(axes, "The canal has no offtakes.")
    sheet.side_title(axis_text("discharge", "discharge", display))
    sheet.legend([key(thing) for thing in shown])
    return Picture(name, sheet.figure, {"": table(run, display)}, words(run, display))


def _panel(axes: Axes, run: xr.Dataset, time: TimeAxis, display: Display) -> None:
    factor = shown_factor("discharge", display)
    demand, delivery = run["demand"].values / factor, run["delivery"].values / factor
    lacks = run["demand"].values - run["delivery"].values > SHORTFALL_FROM
    axes.fill_between(time.steps, delivery, demand, where=lacks, label=SHORTFALL.word, **area_look(SHORTFALL))
    draw_line(axes, DELIVERY, time.steps, delivery)
    draw_line(axes, DEMAND, time.steps, demand)
    both = np.concatenate((demand, delivery))
    axes.set_ylim(0.0, 1.2 * max(float(np.nanmax(both)) if np.isfinite(both).any() else 0.0, 0.01 / factor))
    panel_title(axes, f"{run['offtake'].values}, {run['offtake_pool'].values}", _told(run, display))


def _told(run: xr.Dataset, display: Display) -> str:
    volumes, lacks = run["delivery_volume"].values, run["demand"].values - run["delivery"].values
    given = f"{display.volume(volumes[-1] - volumes[0])} given"
    if np.isnan(run["demand"].values).all():
        return f"{given}; nothing is asked, it follows the level of its pool"
    worst = float(np.nanmax(lacks))
    return given if worst <= SHORTFALL_FROM else f"{given}; at worst {display.discharge(worst)} short"


def words(run: xr.Dataset, display: Display) -> str:
    """What the deliveries show, offtake by offtake."""
    told = (f"{offtake}: {_told(run.isel(offtake=row), display)}" for row, offtake in enumerate(names(run["offtake"])))
    return f"Discharge asked for and delivered at each offtake against time. {'; '.join(told) or 'No offtakes'}."


def table(run: xr.Dataset, display: Display) -> NumberTable:
    """Demand and delivery, by output step and offtake."""
    columns = [time_column(run, run["time"].values)]
    for row, offtake in enumerate(names(run["offtake"])):
        for variable, told in (("demand", "asked for"), ("delivery", "delivered")):
            columns.append(quantity_column(f"{offtake}: {told}", run[variable].values[:, row], "discharge", display))
    return NumberTable(tuple(columns))

"""Operating chart of a gate: what flow and jump do over the plane of tailwater and opening, at given headwaters.

Drawn from the dataset of a gate's operating range: discharges by headwater, opening and tailwater, and the levels of
the tailwater at which something changes, by headwater and opening.
"""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.report.figures.draw import Drawn, area_look, draw_line, empty_note, key, line_look, panel_title, words_of
from toeline.report.figures.picture import Picture, page_name, pages
from toeline.report.figures.sheet import SMALL_SIZE, About, Panel, Sheet, in_house_style
from toeline.report.number_table import NumberTable, quantity_column, text_column
from toeline.report.style import (
    APRON_LIMIT,
    DISCHARGE,
    DROWNING_LIMIT,
    JUMP_STATES,
    MODULAR_LIMIT,
    PROTECTION_LIMIT,
    Area,
    axis_text,
    shown_factor,
    unit_text,
)
from toeline.units import Display

NAME = "operating_chart"
HEADWATERS_ON_A_PAGE = 3
HEIGHT = 4.2
WIDTHS = {1: (0.0,), 2: (0.0, 0.53), 3: (0.0, 0.35, 0.70)}
"""Left edges of panels, in shares of the room, by their number."""
LIMITS = {
    "modular_limit_level": MODULAR_LIMIT,
    "drowning_level": DROWNING_LIMIT,
    "apron_limit_level": APRON_LIMIT,
    "protection_limit_level": PROTECTION_LIMIT,
}
REGIONS = ("drowned", "on_apron", "on_protection", "beyond_protection")
"""From the highest tailwater down: what the jump does between one limit and the next."""
NEAR = 0.025
"""Half width of the range near the modular limit, in tail depths."""
NEAR_LIMIT = Area("near the modular limit: discharge poorly known", MODULAR_LIMIT.colour, ".", 0.25)
LABEL_SPACING = 4
CAUTIONS = "level tailwater and free flow assumed for the jump; verify gate scale, gauges and one jump in the field"


def pictures(chart: xr.Dataset, display: Display) -> Iterator[Picture]:
    """The chart, three headwaters to a page."""
    groups = pages(range(chart.sizes["headwater"]), HEADWATERS_ON_A_PAGE)
    for page, headwaters in enumerate(groups):
        yield _page(chart.isel(headwater=headwaters), display, page_name(NAME, page, len(groups)))


@in_house_style
def _page(chart: xr.Dataset, display: Display, name: str) -> Picture:
    shown: list[Drawn] = [JUMP_STATES[region] for region in REGIONS]
    shown += [*LIMITS.values(), NEAR_LIMIT, replace(DISCHARGE, word=f"discharge, {unit_text('discharge', display)}")]
    about = About(f"{chart.attrs['canal']}: {chart.attrs['gate']}", CAUTIONS, chart.attrs["source"])
    sheet = Sheet("Operating chart of a gate", about, HEIGHT + 0.7, words_of(shown))
    count = chart.sizes["headwater"]
    for place in range(count):
        left = WIDTHS[count][place]
        width = (WIDTHS[count] + (1.05,))[1] - 0.05 if count > 1 else 1.0
        axes = sheet.axes(Panel(0.3, HEIGHT, left, width))
        _panel(axes, chart.isel(headwater=place), display)
        if place == 0:
            axes.set_ylabel(axis_text("opening, lip above sill", "length", display))
    sheet.legend([key(thing) for thing in shown])
    tables = {"": limits_table(chart, display), "discharge": discharge_table(chart, display)}
    return Picture(name, sheet.figure, tables, words(chart, display))


def _panel(axes: Axes, chart: xr.Dataset, display: Display) -> None:
    factor = shown_factor("length", display)
    openings, headwater = chart["opening"].values / factor, float(chart["headwater"]) / factor
    bottom = chart.attrs["floor_level"] / factor
    for region, (low, high) in region_edges(chart).items():
        area = JUMP_STATES[region]
        holds = np.isfinite(low) & np.isfinite(high) & (high >= low)
        axes.fill_betweenx(openings, low / factor, high / factor, where=holds, label=area.word,
                           **area_look(replace(area, opacity=0.5), density=2))  # fmt: skip
    floor = chart.attrs["floor_level"]
    depth = chart["modular_limit_level"].values - floor
    near = [(floor + depth * share) / factor for share in (1.0 - NEAR, 1.0 + NEAR)]
    axes.fill_betweenx(openings, *near, label=NEAR_LIMIT.word, **area_look(NEAR_LIMIT))
    for variable, line in LIMITS.items():
        draw_line(axes, line, chart[variable].values / factor, openings)
    _discharges(axes, chart, display)
    axes.set_xlim(bottom, headwater)
    axes.grid(visible=False)
    axes.set_ylim(0.0, openings[-1])
    axes.set_xlabel(axis_text("tailwater above datum", "length", display))
    panel_title(axes, f"headwater {display.level(float(chart['headwater']))}")
    if not np.isfinite(chart["discharge"].values).any():
        empty_note(axes, "no flow at this headwater")


def region_edges(chart: xr.Dataset) -> dict[str, tuple[np.ndarray, np.ndarray]]:
    """Lower and upper tailwater [m] of each region by opening (chart of one headwater), within floor and headwater.

    A limit that no tailwater reaches lies at the floor: the jump cannot get so far. Without a free jet there is none.
    """
    floor, headwater = chart.attrs["floor_level"], float(chart["headwater"])
    drowning = chart["drowning_level"].values
    edges = [np.full(drowning.shape, headwater), drowning]
    edges += [np.nan_to_num(chart[f"{end}_limit_level"].values, nan=floor) for end in ("apron", "protection")]
    edges.append(np.full(drowning.shape, floor))
    inside = [np.where(np.isfinite(drowning), np.clip(edge, floor, headwater), np.nan) for edge in edges]
    falling = np.minimum.accumulate(inside, axis=0)
    return {region: (falling[place + 1], falling[place]) for place, region in enumerate(REGIONS)}


def _discharges(axes: Axes, chart: xr.Dataset, display: Display) -> None:
    discharge = chart["discharge"].values / shown_factor("discharge", display)
    if not np.isfinite(discharge).any() or np.nanmax(discharge) <= np.nanmin(discharge):
        return
    factor = shown_factor("length", display)
    look = line_look(DISCHARGE)
    x, y = chart["tailwater"].values / factor, chart["opening"].values / factor
    lines = axes.contour(x, y, np.ma.masked_invalid(discharge), levels=7,
                         colors=look["color"], linewidths=look["linewidth"])  # fmt: skip
    axes.clabel(lines, fontsize=SMALL_SIZE, fmt="%g", colors="black")


def words(chart: xr.Dataset, display: Display) -> str:
    """What is drawn, and the limits at half the travel."""
    told = []
    middle = chart.sizes["opening"] // 2
    opening = display.opening(float(chart["opening"].values[middle]))
    for place, headwater in enumerate(chart["headwater"].values):
        here = chart.isel(headwater=place, opening=middle)
        limits = ", ".join(
            f"{line.word.partition(':')[0]} {display.level(float(here[name]))}" for name, line in LIMITS.items()
        )
        told.append(f"at headwater {display.level(float(headwater))} and opening {opening}: {limits}")
    return f"Operating chart of {chart.attrs['gate']}, opening against tailwater; {'; '.join(told)}."


def limits_table(chart: xr.Dataset, display: Display) -> NumberTable:
    """The tailwater levels at which something changes, by headwater and opening."""
    headwaters, openings = np.meshgrid(chart["headwater"].values, chart["opening"].values, indexing="ij")
    columns = {"headwater": headwaters, "opening": openings}
    columns |= {line.word.partition(":")[0]: chart[name].values for name, line in LIMITS.items()}
    return NumberTable(tuple(quantity_column(name, v.ravel(), "length", display) for name, v in columns.items()))


def discharge_table(chart: xr.Dataset, display: Display) -> NumberTable:
    """Discharge and state of the flow, by headwater, opening and tailwater below it."""
    axes = np.meshgrid(*(chart[name].values for name in ("headwater", "opening", "tailwater")), indexing="ij")
    discharge, states = chart["discharge"].values, chart["flow_state"].values
    there = np.isfinite(discharge)
    meanings = chart["flow_state"].attrs["flag_meanings"].split()
    lengths = (
        quantity_column(name, values[there], "length", display)
        for name, values in zip(("headwater", "opening", "tailwater"), axes, strict=True)
    )
    flow = text_column("flow", [meanings[int(state)].replace("_", " ") for state in states[there]])
    return NumberTable((*lengths, quantity_column("discharge", discharge[there], "discharge", display), flow))

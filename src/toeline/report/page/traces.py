"""One gate through the run: where its jump stood, its tailwater among its limits, its headwater and its opening."""

from collections.abc import Mapping
from dataclasses import dataclass

from bokeh.models import BoxAnnotation, ColumnDataSource, DatetimeTickFormatter, HoverTool, Range1d, Span
from bokeh.plotting import figure

from toeline.report.page.looks import area_look, empty_figure, line_look, source_of, state_look
from toeline.report.style import (
    APRON,
    DROWNING_LIMIT,
    HEADWATER,
    INK,
    MODULAR_LIMIT,
    OPENING,
    PROTECTION,
    PROTECTION_LIMIT,
    SETTLING,
    TAILWATER,
    TARGET,
    Area,
    Line,
    axis_text,
    unit_text,
)
from toeline.units import Display

STRIP_HEIGHT, TAILWATER_HEIGHT, SMALL_HEIGHT = 240, 230, 170
GROUND_OPACITY = 0.5
NUMBERS = ("time", "toe", "end", "tailwater", "modular", "drowning", "protection", "headwater", "opening", "discharge")
WORDS = ("clock", "jump", "flow")
"""What is known of the gate at every output step."""


@dataclass(frozen=True)
class TraceAxes:
    """The axes of a gate's traces; those of several runs share them."""

    times: Range1d
    jump_distances: Range1d
    tailwaters: Range1d
    headwaters: Range1d
    openings: Range1d


@dataclass(frozen=True)
class Traces:
    """The figures, times below one another, and what the browser draws in them.

    `orders` are marks, `bands` outlines from toe to end by state of the jump, `settling` the times of settling; `apron`
    and `protection` the ground of the strip; `cursors` stand at the moment shown.
    """

    figures: list[figure]
    series: ColumnDataSource
    orders: ColumnDataSource
    bands: ColumnDataSource
    settling: ColumnDataSource
    apron: BoxAnnotation
    protection: BoxAnnotation
    target: Span
    cursors: list[Span]


def traces(axes: TraceAxes, display: Display, name: str) -> Traces:
    """Empty traces, their figures named strip_NAME, tailwater_NAME, headwater_NAME and opening_NAME."""
    series = source_of(f"series_{name}", **{column: [] for column in (*NUMBERS, *WORDS)})
    bands, settling = source_of(xs=[], ys=[], colour=[], hatch=[]), source_of(left=[], right=[], top=[])
    distance, level = (axis_text(words, "length", display) for words in ("distance from the gate", "level"))
    strip = _over_time(STRIP_HEIGHT, axes.times, axes.jump_distances, distance, f"strip_{name}")
    tailwater = _over_time(TAILWATER_HEIGHT, axes.times, axes.tailwaters, level, f"tailwater_{name}")
    headwater = _over_time(SMALL_HEIGHT, axes.times, axes.headwaters, level, f"headwater_{name}")
    opening = _over_time(
        SMALL_HEIGHT, axes.times, axes.openings, axis_text("opening", "length", display), f"opening_{name}"
    )
    protection, apron = (_ground(strip, area) for area in (PROTECTION, APRON))
    _draw_jump(strip, series, bands, settling, display)
    limits = {"modular": MODULAR_LIMIT, "drowning": DROWNING_LIMIT, "protection": PROTECTION_LIMIT}
    _draw_lines(tailwater, series, {"tailwater": TAILWATER, **limits}, display)
    _draw_lines(headwater, series, {"headwater": HEADWATER}, display)
    target = Span(location=0.0, dimension="width", **line_look(TARGET))
    headwater.add_layout(target)
    _draw_lines(opening, series, {"opening": OPENING}, display)
    orders = _draw_orders(opening)
    figures = [strip, tailwater, headwater, opening]
    return Traces(
        figures, series, orders, bands, settling, apron, protection, target, [_cursor(drawn) for drawn in figures]
    )


def _over_time(height: int, times: Range1d, values: Range1d, label: str, name: str) -> figure:
    drawn = empty_figure(
        height, "width", x_range=times, y_range=values, x_axis_type="datetime", y_axis_label=label, name=name
    )
    drawn.xaxis.formatter = DatetimeTickFormatter(
        minutes="%H:%M", hourmin="%H:%M", hours="%H:%M", days="%d %b", months="%b %Y", strip_leading_zeros=False
    )
    return drawn


def _ground(strip: figure, area: Area) -> BoxAnnotation:
    look = area_look(area) | {"fill_alpha": GROUND_OPACITY}
    ground = BoxAnnotation(bottom=0, top=0, level="underlay", line_color=None, **look)
    strip.add_layout(ground)
    return ground


def _cursor(drawn: figure) -> Span:
    cursor = Span(location=0.0, dimension="height", line_color=INK, line_width=1.5, level="overlay")
    drawn.add_layout(cursor)
    return cursor


def _draw_jump(
    strip: figure, series: ColumnDataSource, bands: ColumnDataSource, settling: ColumnDataSource, display: Display
) -> None:
    strip.patches("xs", "ys", source=bands, line_color=None, **state_look())
    ends = strip.line("time", "end", source=series, line_color=INK, line_width=1.2)
    strip.line("time", "toe", source=series, line_color=INK, line_width=1.8)
    strip.quad("left", "right", "top", 0, source=settling, line_color=None, **area_look(SETTLING))
    unit = unit_text("length", display)
    told = [("", "@clock"), ("", "@jump"), ("toe", f"@toe{{0.00}} {unit}"), ("end", f"@end{{0.00}} {unit}")]
    strip.add_tools(HoverTool(renderers=[ends], tooltips=told, mode="vline"))


def _draw_orders(drawn: figure) -> ColumnDataSource:
    """Marks at the openings that orders led to, by what became of them."""
    orders = source_of(time=[], opening=[], marker=[], colour=[], filling=[], words=[])
    marks = drawn.scatter(
        "time", "opening", marker="marker", size=10, source=orders, line_color="colour", fill_color="filling"
    )
    drawn.add_tools(HoverTool(renderers=[marks], tooltips=[("", "@words")], mode="mouse"))
    return orders


def _draw_lines(drawn: figure, series: ColumnDataSource, lines: Mapping[str, Line], display: Display) -> None:
    unit = unit_text("length", display)
    first, *_ = [drawn.line("time", name, source=series, **line_look(line)) for name, line in lines.items()]
    told = [
        ("", "@clock"),
        *((name, f"@{name}{{0.00}} {unit}") for name in lines),
        ("", "@flow"),
        ("discharge", f"@discharge{{0.000}} {unit_text('discharge', display)}"),
    ]
    drawn.add_tools(HoverTool(renderers=[first], tooltips=told, mode="vline"))

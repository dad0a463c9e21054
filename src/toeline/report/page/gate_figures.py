"""What one gate shows of one run: the water below it at a moment, and its jump, tailwater, headwater and opening.

The browser fills the figures with the gate that is looked at; figures of several runs share their axes.
"""

from dataclasses import dataclass

from bokeh.models import (
    BoxAnnotation,
    ColumnDataSource,
    DatetimeTickFormatter,
    HoverTool,
    PanTool,
    Range1d,
    Span,
    WheelZoomTool,
)
from bokeh.plotting import figure

from toeline.report.page.looks import area_look, empty_figure, line_look, source_of
from toeline.report.style import (
    APRON,
    BED,
    FAINT_INK,
    GROUND,
    HEADWATER,
    INK,
    LEAF,
    DROWNING_LIMIT,
    MODULAR_LIMIT,
    OPENING,
    PROTECTION,
    PROTECTION_LIMIT,
    SETTLING,
    TAILWATER,
    TARGET,
    WATER,
    WATER_BODY,
    axis_text,
    unit_text,
)
from toeline.units import Display

CLOSE_UP_HEIGHT, STRIP_HEIGHT, TAILWATER_HEIGHT, SMALL_HEIGHT = 330, 240, 230, 170


@dataclass(frozen=True)
class GateAxes:
    """Axes that the figures of all runs share."""

    times: Range1d
    distances: Range1d
    close_up_levels: Range1d
    jump_distances: Range1d
    tailwaters: Range1d
    headwaters: Range1d
    openings: Range1d


@dataclass(frozen=True)
class CloseUp:
    """The water at the gate at a moment; `shapes` are outlines by their name."""

    figure: figure
    shapes: dict[str, ColumnDataSource]


@dataclass(frozen=True)
class Traces:
    """The figures over time, with what is drawn in them: values at every output step, the jump's bands, the ground.

    `cursors` stand at the moment shown.
    """

    strip: figure
    tailwater: figure
    headwater: figure
    opening: figure
    series: ColumnDataSource
    bands: ColumnDataSource
    settling: ColumnDataSource
    apron: BoxAnnotation
    protection: BoxAnnotation
    target: Span
    cursors: list[Span]


def gate_axes(begin: float, end: float) -> GateAxes:
    """Axes for times from begin to end [ms]; the others follow the gate that is looked at."""
    return GateAxes(Range1d(begin, end, bounds=(begin, end)), *(Range1d(0.0, 1.0) for _ in range(6)))


def close_up(axes: GateAxes, display: Display, name: str) -> CloseUp:
    """The gate cut along the canal, heights and distances each to scale."""
    drawn = empty_figure(
        CLOSE_UP_HEIGHT, x_range=axes.distances, y_range=axes.close_up_levels, name=name,
        x_axis_label=axis_text("distance from the gate", "length", display), y_axis_label=axis_text("level", "length", display),
    )  # fmt: skip
    pan, zoom = PanTool(), WheelZoomTool(modifiers="ctrl")
    drawn.add_tools(pan, zoom)
    drawn.toolbar.update(active_drag=pan, active_scroll=zoom)
    looks = {
        "water": area_look(WATER_BODY),
        "jet": area_look(WATER_BODY) | {"fill_alpha": 0.75},
        "roller": {"fill_color": "colour", "fill_alpha": 0.85, "hatch_pattern": "hatch", "hatch_color": INK, "hatch_scale": 9},
        "ground": area_look(GROUND),
        "apron": area_look(APRON),
        "protection": area_look(PROTECTION),
        "leaf": area_look(LEAF),
    }
    shapes = {name: source_of(xs=[], ys=[], colour=[], hatch=[]) for name in looks}
    for name, look in looks.items():
        drawn.patches("xs", "ys", source=shapes[name], line_color=None, **look)
    limits = {"surface": WATER, "floor": BED, "modular": MODULAR_LIMIT, "drowning": DROWNING_LIMIT, "protection_limit": PROTECTION_LIMIT}
    for name, line in limits.items():
        shapes[name] = source_of(x=[], y=[])
        drawn.line("x", "y", source=shapes[name], **line_look(line))
    return CloseUp(drawn, shapes)


def traces(axes: GateAxes, display: Display, name: str) -> Traces:
    """The gate through the run, times below one another."""
    columns = ("time", "clock", "toe", "end", "tailwater", "modular", "drowning", "protection", "headwater", "opening", "discharge")
    series = source_of(f"series_{name}", **{column: [] for column in columns}, jump=[], flow=[])
    bands = source_of(xs=[], ys=[], colour=[], hatch=[])
    settling = source_of(left=[], right=[], top=[])
    strip = _over_time(STRIP_HEIGHT, axes, axes.jump_distances, axis_text("distance from the gate", "length", display), f"strip_{name}")
    tailwater = _over_time(TAILWATER_HEIGHT, axes, axes.tailwaters, axis_text("level", "length", display), f"tailwater_{name}")
    headwater = _over_time(SMALL_HEIGHT, axes, axes.headwaters, axis_text("level", "length", display), f"headwater_{name}")
    opening = _over_time(SMALL_HEIGHT, axes, axes.openings, axis_text("opening", "length", display), f"opening_{name}")
    apron, protection = (BoxAnnotation(bottom=0, top=0, level="underlay", line_color=None, **area_look(area) | {"fill_alpha": 0.5}) for area in (APRON, PROTECTION))
    strip.add_layout(protection)
    strip.add_layout(apron)
    _draw_jump(strip, series, bands, settling, display)
    _draw_levels(tailwater, series, {"tailwater": TAILWATER, "modular": MODULAR_LIMIT, "drowning": DROWNING_LIMIT, "protection": PROTECTION_LIMIT}, display)
    _draw_levels(headwater, series, {"headwater": HEADWATER}, display)
    target = Span(location=0.0, dimension="width", **line_look(TARGET))
    headwater.add_layout(target)
    _draw_levels(opening, series, {"opening": OPENING}, display)
    figures = (strip, tailwater, headwater, opening)
    cursors = [Span(location=0.0, dimension="height", line_color=INK, line_width=1.5, level="overlay") for _ in figures]
    for drawn, cursor in zip(figures, cursors, strict=True):
        drawn.add_layout(cursor)
    return Traces(*figures, series, bands, settling, apron, protection, target, cursors)


def _draw_jump(
    strip: figure, series: ColumnDataSource, bands: ColumnDataSource, settling: ColumnDataSource, display: Display
) -> None:
    strip.patches("xs", "ys", source=bands, line_color=None, fill_color="colour", hatch_pattern="hatch", hatch_color=INK, hatch_alpha=0.45, hatch_scale=7)
    ends = strip.line("time", "end", source=series, line_color=INK, line_width=1.2)
    strip.line("time", "toe", source=series, line_color=INK, line_width=1.8)
    strip.quad("left", "right", "top", 0, source=settling, line_color=None, **area_look(SETTLING))
    unit = unit_text("length", display)
    told = [("", "@clock"), ("", "@jump"), ("toe", f"@toe{{0.00}} {unit}"), ("end", f"@end{{0.00}} {unit}")]
    strip.add_tools(HoverTool(renderers=[ends], tooltips=told, mode="vline"))


def _draw_levels(drawn: figure, series: ColumnDataSource, lines: dict[str, object], display: Display) -> None:
    unit = unit_text("length", display)
    drawn_lines = [drawn.line("time", name, source=series, **line_look(line)) for name, line in lines.items()]
    told = [("", "@clock"), *((name, f"@{name}{{0.00}} {unit}") for name in lines), ("", "@flow"), ("discharge", f"@discharge{{0.000}} {unit_text('discharge', display)}")]
    drawn.add_tools(HoverTool(renderers=drawn_lines[:1], tooltips=told, mode="vline"))


def _over_time(height: int, axes: GateAxes, values: Range1d, label: str, name: str) -> figure:
    drawn = empty_figure(height, x_range=axes.times, y_range=values, x_axis_type="datetime", y_axis_label=label, name=name)
    drawn.xaxis.formatter = DatetimeTickFormatter(
        minutes="%H:%M", hourmin="%H:%M", hours="%H:%M", days="%a %d %b", months="%b %Y", strip_leading_zeros=False
    )
    pan, zoom = PanTool(dimensions="width"), WheelZoomTool(dimensions="width", modifiers="ctrl")
    drawn.add_tools(pan, zoom)
    drawn.toolbar.update(active_drag=pan, active_scroll=zoom)
    return drawn

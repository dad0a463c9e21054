"""One gate cut along the canal at a moment: leaf, floor and water, and the jump or roller below."""

from dataclasses import dataclass

from bokeh.models import ColumnDataSource, Range1d
from bokeh.plotting import figure

from toeline.report.page.looks import area_look, empty_figure, line_look, source_of, state_look
from toeline.report.style import (
    APRON,
    BED,
    DROWNING_LIMIT,
    GROUND,
    LEAF,
    MODULAR_LIMIT,
    PROTECTION,
    PROTECTION_LIMIT,
    WATER,
    WATER_BODY,
    axis_text,
)
from toeline.units import Display

HEIGHT = 330
JET_OPACITY = 0.75


@dataclass(frozen=True)
class CloseUp:
    """The figure, and what the browser draws in it: outlines and lines by their names."""

    figure: figure
    shapes: dict[str, ColumnDataSource]


def close_up(distances: Range1d, levels: Range1d, display: Display, name: str) -> CloseUp:
    """An empty cut; `distances` are from the gate, downstream positive."""
    drawn = empty_figure(
        HEIGHT,
        "both",
        x_range=distances,
        y_range=levels,
        x_axis_label=axis_text("distance from the gate", "length", display),
        y_axis_label=axis_text("level", "length", display),
        name=name,
    )
    return CloseUp(drawn, _draw_areas(drawn) | _draw_lines(drawn))


def _draw_areas(drawn: figure) -> dict[str, ColumnDataSource]:
    looks = {
        "water": area_look(WATER_BODY),
        "jet": area_look(WATER_BODY) | {"fill_alpha": JET_OPACITY},
        "roller": state_look(),
        "ground": area_look(GROUND),
        "apron": area_look(APRON),
        "protection": area_look(PROTECTION),
        "leaf": area_look(LEAF),
    }
    shapes = {name: source_of(xs=[], ys=[], colour=[], hatch=[]) for name in looks}
    for name, look in looks.items():
        drawn.patches("xs", "ys", source=shapes[name], line_color=None, **look)
    return shapes


def _draw_lines(drawn: figure) -> dict[str, ColumnDataSource]:
    lines = {
        "surface": WATER,
        "floor": BED,
        "modular": MODULAR_LIMIT,
        "drowning": DROWNING_LIMIT,
        "protection_limit": PROTECTION_LIMIT,
    }
    shapes = {name: source_of(x=[], y=[]) for name in lines}
    for name, line in lines.items():
        drawn.line("x", "y", source=shapes[name], **line_look(line))
    return shapes

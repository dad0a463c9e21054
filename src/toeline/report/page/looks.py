"""The style of results as bokeh wants it."""

from typing import Any, Literal

from bokeh.models import ColumnDataSource, PanTool, WheelZoomTool
from bokeh.plotting import figure

from toeline.report.style import FAINT_INK, INK, PAPER, RULE, Area, Line

FONT = "system-ui, 'Segoe UI', Roboto, 'Helvetica Neue', sans-serif"
PIXELS_OF_POINT = 4 / 3
MARKERS = {
    "circle": "circle",
    "square": "square",
    "triangle": "triangle",
    "diamond": "diamond",
    "cross": "x",
    "plus": "cross",
}
"""Shapes of the style by the names that bokeh has for them."""

JUMP_MARKERS = {
    "none": "dash",
    "drowned": "circle_x",
    "on_apron": "triangle",
    "on_protection": "diamond",
    "beyond_protection": "star",
    "swept_out_of_pool": "asterisk",
}
"""The mark of each jump state, told apart without its colour."""


def line_look(line: Line) -> dict[str, Any]:
    """How a line is drawn."""
    dash = [max(1, round(length * PIXELS_OF_POINT)) for length in line.dash]
    return {"line_color": line.colour, "line_width": line.width * PIXELS_OF_POINT, "line_dash": dash or "solid"}


def area_look(area: Area) -> dict[str, Any]:
    """How a filled area is drawn."""
    return {
        "fill_color": area.colour,
        "fill_alpha": area.opacity,
        "hatch_pattern": area.hatch or " ",
        "hatch_color": INK,
        "hatch_alpha": 0.45,
        "hatch_scale": 8,
        "hatch_weight": 0.8,
    }


def state_look() -> dict[str, Any]:
    """How areas are drawn that each have the look of a state, in columns `colour` and `hatch`."""
    return {"fill_color": "colour", "hatch_pattern": "hatch", "hatch_color": INK, "hatch_alpha": 0.45, "hatch_scale": 8}


def empty_figure(height: int, pans: Literal["width", "both"], **options: Any) -> figure:
    """A figure as wide as its place, with quiet axes and no tool bar; drag pans, Ctrl and the wheel zoom.

    On a touch screen a stroke up or down still moves the page.
    """
    drawn = figure(
        height=height, sizing_mode="stretch_width", toolbar_location=None, tools="", background_fill_color=PAPER,
        border_fill_color=PAPER, outline_line_color=None, min_border_left=84, min_border_right=24, **options,
    )  # fmt: skip
    pan, zoom = PanTool(dimensions=pans), WheelZoomTool(dimensions=pans, modifiers="ctrl")
    drawn.add_tools(pan, zoom)
    drawn.toolbar.update(active_drag=pan, active_scroll=zoom)
    drawn.stylesheets = [".bk-events { touch-action: pan-y !important; }"]
    drawn.yaxis.axis_label_standoff = 8
    drawn.grid.grid_line_color = RULE
    for axis in drawn.axis:
        axis.update(
            axis_label_text_font=FONT, axis_label_text_font_style="normal", axis_label_text_font_size="13px",
            axis_label_text_color=INK, major_label_text_font=FONT, major_label_text_font_size="12px",
            major_label_text_color=INK, axis_line_color=FAINT_INK, major_tick_line_color=FAINT_INK,
            minor_tick_line_color=None,
        )  # fmt: skip
    return drawn


def source_of(label: str | None = None, /, **columns: Any) -> ColumnDataSource:
    """Columns to be drawn; by its label a reader of the page finds them again."""
    return ColumnDataSource(columns, name=label)

"""Lines, areas and marks of the style, drawn into panels, and their keys in a legend."""

from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.lines import Line2D
from matplotlib.patches import Patch

from toeline.report.figures.sheet import SMALL_SIZE, TEXT_SIZE
from toeline.report.style import FAINT_INK, INK, PAPER, Area, Line, Mark

Drawn = Line | Area | Mark
"""Anything of the style that can stand in a legend."""
HATCH_DENSITY = 3
_SHAPES = {"circle": "o", "square": "s", "triangle": "^", "diamond": "D", "cross": "X", "plus": "P"}


def line_look(line: Line) -> dict[str, Any]:
    """A line of the style as matplotlib takes it."""
    dash = (0, tuple(length / line.width for length in line.dash)) if line.dash else "solid"
    return {"color": line.colour, "linewidth": line.width, "linestyle": dash}


def area_look(area: Area, density: int = HATCH_DENSITY) -> dict[str, Any]:
    """An area of the style as matplotlib takes it; the hatch is drawn in ink and keeps its strength."""
    return {
        "facecolor": (area.colour, area.opacity), "edgecolor": INK, "linewidth": 0.0,
        "hatch": area.hatch * density or None,
    }  # fmt: skip


def mark_look(mark: Mark) -> dict[str, Any]:
    """A mark of the style as matplotlib takes it."""
    return {
        "marker": _SHAPES[mark.shape], "color": mark.colour, "markersize": 5.5, "linestyle": "none",
        "markerfacecolor": mark.colour if mark.filled else "white", "markeredgewidth": 0.9,
    }  # fmt: skip


def draw_line(axes: Axes, line: Line, x: np.ndarray, y: np.ndarray, **how: Any) -> None:
    """A line, its label the word of the style; a single point is drawn as a dot."""
    finite = np.isfinite(np.asarray(y, float))
    alone = finite & ~np.roll(finite, 1) & ~np.roll(finite, -1) if len(finite) > 1 else finite
    axes.plot(x, y, label=line.word, **line_look(line), **how)
    if alone.any():
        axes.plot(np.asarray(x)[alone], np.asarray(y)[alone], marker="o", markersize=4.5, linestyle="none",
                  color=line.colour, label=f"_{line.word}")  # fmt: skip


def draw_level(axes: Axes, line: Line, value: float) -> None:
    """A line across the whole panel at one value; none where there is no value."""
    if np.isfinite(value):
        axes.axhline(value, label=line.word, **line_look(line))


def line_key(line: Line) -> Artist:
    return Line2D([], [], label=line.word, **line_look(line))


def area_key(area: Area) -> Artist:
    look = area_look(area) | {"linewidth": 0.5}
    return Patch(label=area.word, **look)


def mark_key(mark: Mark) -> Artist:
    return Line2D([], [], label=mark.word, **mark_look(mark))


def key(thing: Drawn) -> Artist:
    """The key of a legend for anything of the style."""
    if isinstance(thing, Line):
        return line_key(thing)
    return area_key(thing) if isinstance(thing, Area) else mark_key(thing)


def words_of(things: Sequence[Drawn]) -> list[str]:
    return [thing.word for thing in things]


def panel_title(axes: Axes, name: str, told: str = "", *, lift: float = 4.0, size: float = TEXT_SIZE) -> None:
    """The name of a panel above its left corner, and what is to be told of it at the right."""
    axes.annotate(name, (0, 1), xytext=(0, lift), xycoords="axes fraction", textcoords="offset points",
                  fontsize=size, weight="bold", va="bottom")  # fmt: skip
    if told:
        axes.annotate(told, (1, 1), xytext=(0, lift), xycoords="axes fraction", textcoords="offset points",
                      fontsize=SMALL_SIZE, va="bottom", ha="right")  # fmt: skip


def margin_note(axes: Axes, y: float, text: str, *, in_axes: bool = False) -> None:
    """Small words just right of a panel, at a value of its vertical axis or at a share of its height."""
    transform = axes.transAxes if in_axes else axes.get_yaxis_transform()
    axes.text(1.008, y, text, transform=transform, fontsize=SMALL_SIZE, color=FAINT_INK, va="center", clip_on=False)


def value_range(values: np.ndarray) -> tuple[float, float]:
    """Least and greatest of the finite values; 0 and 0 where there is none."""
    finite = values[np.isfinite(values)]
    return (float(finite.min()), float(finite.max())) if finite.size else (0.0, 0.0)


def empty_note(axes: Axes, text: str) -> None:
    """Says in the middle of a panel why nothing is drawn there."""
    axes.text(0.5, 0.5, text, transform=axes.transAxes, fontsize=TEXT_SIZE, color=FAINT_INK, ha="center", va="center",
              bbox={"facecolor": PAPER, "edgecolor": "none"})  # fmt: skip

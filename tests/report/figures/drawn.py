"""Reading a figure back: its texts, and the lines, areas and strips of a panel by their label."""

from collections.abc import Iterator

import matplotlib.text
import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import PolyCollection
from matplotlib.figure import Figure


def texts(figure: Figure) -> list[str]:
    """Everything that is written on a figure."""
    return [text.get_text() for text in figure.findobj(matplotlib.text.Text) if text.get_text()]


def panel(figure: Figure, name: str) -> Axes:
    """The first panel that carries a text."""
    return next(axes for axes in figure.axes if name in [text.get_text() for text in axes.texts])


def line(axes: Axes, label: str) -> tuple[np.ndarray, np.ndarray]:
    """Horizontal and vertical positions of the one line of that label."""
    (found,) = [line for line in axes.lines if line.get_label() == label]
    return np.asarray(found.get_xdata(), float), np.asarray(found.get_ydata(), float)


def areas(axes: Axes, label: str) -> Iterator[tuple[float, float, float, float]]:
    """Left, right, bottom and top of every filled piece of that label."""
    for collection in axes.collections:
        if isinstance(collection, PolyCollection) and collection.get_label() == label:
            for path in collection.get_paths():
                box = path.get_extents()
                yield box.x0, box.x1, box.y0, box.y1


def minutes(axes: Axes, x: float) -> float:
    """How long after the left end of its panel a place on a time axis is."""
    return round((x - axes.get_xlim()[0]) * 1440.0, 3)

"""When the leaf of a gate moved, marked on a time axis."""

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.report.figures.draw import mark_look
from toeline.report.figures.time_axis import positions
from toeline.report.style import INK, Mark

MOVE = Mark("an order moves the gate", INK, "triangle")


def orders_of(run: xr.Dataset, gate: str) -> xr.Dataset:
    """The orders of one gate."""
    return run.isel(order=np.flatnonzero(run["order_gate"].values == gate))


def move_marks(axes: Axes, run: xr.Dataset) -> None:
    """A small mark at the foot of the panel of a gate for every order that moved it."""
    orders = orders_of(run, str(run["gate"].values))
    moves = orders["order_opening_after"].values != orders["order_opening_before"].values
    at = positions(orders["order_time"].values[moves])
    look = mark_look(MOVE) | {"markersize": 4.0}
    axes.plot(at, np.zeros(at.size), transform=axes.get_xaxis_transform(), clip_on=False, label=MOVE.word, **look)

"""A strip below a panel in time that tells the states of a flag by their areas."""

from collections.abc import Mapping

import xarray as xr
from matplotlib.axes import Axes
from matplotlib.patches import Rectangle

from toeline.findings.series import is_any, meanings_seen
from toeline.report.figures.draw import margin_note
from toeline.report.figures.time_axis import TimeAxis
from toeline.report.style import FAINT_INK, Area


def state_strip(
    axes: Axes, time: TimeAxis, flags: xr.DataArray, areas: Mapping[str, Area], name: str, bottom: float, height: float
) -> None:
    """Draw the strip of one flag series (by output step), named at its right, framed so that white states are seen.

    `bottom` and `height` are shares of the panel's height; a strip below the panel has a bottom under 0.
    """
    for state in meanings_seen(flags):
        time.strip(axes, is_any(flags, state), areas[state], bottom, height, above=True)
    axes.add_patch(
        Rectangle((0, bottom), 1, height, transform=axes.transAxes, clip_on=False, fill=False, edgecolor=FAINT_INK,
                  linewidth=0.5)
    )  # fmt: skip
    margin_note(axes, bottom + height / 2, name, in_axes=True)

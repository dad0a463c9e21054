"""The operating chart of a gate as files."""

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from toeline import __version__
from toeline.errors import UsageError
from toeline.network.rating import operating_range
from toeline.report.figures.files import write_pictures
from toeline.report.figures.operating_chart import HEADWATERS_ON_A_PAGE, pictures
from toeline.report.figures.picture import Picture
from toeline.results.provenance import SOURCE_PREFIX
from toeline.units import Display

if TYPE_CHECKING:
    from toeline.scenario import CanalFile

POINTS = 81
"""Openings and tailwaters along the axes of a chart."""


def write_chart(
    file: Path,
    canal: "CanalFile",
    gate: str,
    headwaters: Sequence[float],
    tailwaters: Sequence[float],
    openings: Sequence[float],
    *,
    overwrite: bool,
) -> list[Path]:
    """Draw the chart over the range of the tailwaters and openings [m] up to the highest headwater, tables beside it.

    UsageError for more headwaters than one chart holds, for no opening above 0, and where a file exists.
    """
    picture = operating_chart(canal, gate, headwaters, tailwaters, openings)
    return write_pictures([(file.stem, picture)], file.parent, [file.suffix[1:].lower()], overwrite=overwrite)


def operating_chart(
    canal: "CanalFile",
    gate: str,
    headwaters: Sequence[float],
    tailwaters: Sequence[float],
    openings: Sequence[float],
) -> Picture:
    """The chart of a gate at its headwaters, over the range of tailwaters and openings [m]."""
    if len(headwaters) > HEADWATERS_ON_A_PAGE:
        raise UsageError(f"--chart: found {len(headwaters)} headwaters; allowed: up to {HEADWATERS_ON_A_PAGE}")
    if max(openings) <= 0.0:
        raise UsageError("--chart: found no opening above 0; allowed: at least one")
    lowest = min(tailwaters)
    if lowest >= max(headwaters):
        raise UsageError("--chart: all tailwaters stand above the headwater; there is no flow downstream to draw")
    down = np.linspace(lowest, max(headwaters), POINTS)
    lift = np.linspace(max(openings) / POINTS, max(openings), POINTS)
    chart = operating_range(canal, gate, np.asarray(headwaters), down, lift)
    chart.attrs["source"] = f"{SOURCE_PREFIX}{__version__}"
    (picture,) = pictures(chart, Display(canal.units))
    return picture

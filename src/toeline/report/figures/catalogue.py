"""All figures of a run by name, in the order in which they tell its story."""

from collections.abc import Callable, Iterator, Sequence

import numpy as np
import xarray as xr

from toeline.report.figures import (
    deliveries,
    gate_openings,
    jump_strip,
    ledger,
    levels,
    long_profile,
    plans,
    tailwater,
)
from toeline.report.figures.picture import Picture
from toeline.units import Display

Builder = Callable[[xr.Dataset, Display], Iterator[Picture]]

FIGURES: dict[str, Builder] = {
    figure.NAME: figure.pictures
    for figure in (long_profile, jump_strip, tailwater, gate_openings, levels, deliveries, ledger)
}
PLANS = plans.NAME
"""The figure that compares several runs."""
NAMES = (*FIGURES, PLANS)


def run_pictures(
    run: xr.Dataset, display: Display, wanted: Sequence[str] = NAMES, at: np.datetime64 | None = None
) -> Iterator[Picture]:
    """The wanted figures of one run with at least one output step; `at` is the time of the long profile."""
    for name, build in FIGURES.items():
        if name in wanted:
            yield from long_profile.pictures(run, display, at) if name == long_profile.NAME else build(run, display)

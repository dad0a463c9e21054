"""The owner's limits: what they are, whose, and how near a run came to each."""

from collections.abc import Iterator, Mapping, Sequence

import numpy as np
import xarray as xr

from toeline.findings.limit_incidents import LimitUse
from toeline.findings.limits import Limit
from toeline.findings.series import names
from toeline.report.layout import INDENT, paragraph
from toeline.report.run_clock import RunClock
from toeline.report.values import value_text
from toeline.results.encoding import surface_names_of
from toeline.units import Display, UnitSystem, quantity_text

Everything = Mapping[str, Sequence[str]]
"""Names of all pools, gates, offtakes and surfaces of a canal, by "pool", "gate", "offtake", "surface"."""

NO_LIMITS = (
    "The canal file gives none: falls and rises, levels, freeboard, moves and heads on offtakes were not held against "
    "any."
)


def limit_lines(
    uses: Sequence[LimitUse], run: xr.Dataset, clock: RunClock, display: Display, width: int
) -> Iterator[str]:
    """Every limit with the worst value of the run, whether it was passed or not, and its source."""
    if not uses:
        yield paragraph(NO_LIMITS, width)
    everything = {kind: names(run[kind]) for kind in ("pool", "gate", "offtake")}
    everything["surface"] = surface_names_of(run.attrs)
    for use in uses:
        text = f"{limit_words(use.limit, everything, display)}: {_use_words(use, clock, display)}"
        yield paragraph(text, width, hanging=INDENT * 2)
        yield paragraph(use.limit.source, width, indent=INDENT * 2)
    if uses:
        yield paragraph(_reach_words(uses, run), width)


def limit_words(limit: Limit, everything: Everything, display: Display) -> str:
    """What is limited, where, and how far."""
    bound = "at least" if limit.is_least else "at most"
    return f"{limit.subject}, {where_words(limit, everything)}, {bound} {value_text(limit.limit, limit.unit, display)}"


def where_words(limit: Limit, everything: Everything) -> str:
    """The places for which a limit holds, and for a level at which end of the pools."""
    words = _listed(limit.places, limit.dimension, everything)
    if limit.at:
        words = f"{limit.at} of {words}"
    if limit.surfaces:
        words += f" over {_listed(limit.surfaces, 'surface', everything)}"
    return words


def _listed(places: Sequence[str], dimension: str, everything: Everything) -> str:
    return f"all {dimension}s" if set(places) >= set(everything[dimension]) else " and ".join(places)


def _reach_words(uses: Sequence[LimitUse], run: xr.Dataset) -> str:
    """What the findings cannot know: what was between two steps, and what came before the run."""
    seconds = (run["time"].values - run["time"].values[0]) / np.timedelta64(1, "s")
    step = quantity_text(float(np.diff(seconds).max(initial=0.0)), "duration", UnitSystem.metric)
    words = f"Held against values every {step}: what begins and ends between two of them is not seen."
    if any(use.limit.window >= seconds[-1] for use in uses):
        words += " A window as long as the run, or longer, is known in part: what came before the run is not in it."
    return words


def _use_words(use: LimitUse, clock: RunClock, display: Display) -> str:
    worst = use.worst
    if np.isnan(worst.value):
        return "no value in this run"
    share = "" if use.share is None else f" ({value_text(100.0 * use.share, '%', display)})"
    value = f"{value_text(worst.value, use.limit.unit, display)}{share}"
    if not worst.value and use.share is not None:
        return value
    side = "below" if use.limit.is_least else "over"
    passed = f"{side} the limit: " if use.room < 0.0 else ""
    return f"{passed}{value}, {use.where}, {clock.window(worst.time, use.limit.window)}"

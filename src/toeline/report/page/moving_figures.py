"""All figures that move, with the numbers they move by, as what a browser is given."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import xarray as xr
from bokeh.document import Document
from bokeh.embed import components
from bokeh.events import DocumentReady
from bokeh.models import CustomJS, Range1d
from bokeh.plotting import figure
from markupsafe import Markup

from toeline.findings.series import meanings
from toeline.report.page.arrays import order_marks, places, run_arrays, start_milliseconds
from toeline.report.page.close_up import close_up
from toeline.report.page.long_profile import long_profile
from toeline.report.page.looks import JUMP_MARKERS
from toeline.report.page.moments import Moments
from toeline.report.page.traces import TraceAxes, traces
from toeline.report.style import JUMP_STATES, Line, unit_text
from toeline.units import Display, UnitSystem

LEAST_LENGTH = 60_000.0
"""Milliseconds that an axis of times shows at least, for a run of one step."""


@dataclass(frozen=True)
class MovingFigures:
    """The script that draws the figures, and by the name of each the place that the page gives it."""

    script: Markup
    places: dict[str, Markup]
    steps_left_out: int


def moving_figures(
    runs: Sequence[xr.Dataset], lines: Sequence[Line], moments: Moments, display: Display
) -> MovingFigures:
    """The long profile with the water of every run in its line, and the figures of one gate for each run."""
    arrays = [run_arrays(run, moments, display) for run in runs]
    profile = long_profile(runs, lines, display)
    start = start_milliseconds(runs[0])
    longest = max(float(each.elapsed[-1]) for each in arrays)
    distances, levels = Range1d(), Range1d()
    trace_axes = _trace_axes(start, start + max(longest, LEAST_LENGTH))
    cuts = [close_up(distances, levels, display, f"close_up_{place}") for place in range(len(runs))]
    through = [traces(trace_axes, display, str(place)) for place in range(len(runs))]
    over_time = [drawn for each in through for drawn in each.figures]
    figures = {drawn.name: drawn for drawn in (profile.figure, *(cut.figure for cut in cuts), *over_time)}
    script, divs = _embedded(
        figures,
        {
            "profile": vars(profile),
            "gate_figures": [{"shapes": cut.shapes, **vars(each)} for cut, each in zip(cuts, through, strict=True)],
            "time_figures": over_time,
            "axes": {"distances": distances, "close_up_levels": levels, **vars(trace_axes)},
            "runs": [
                vars(each) | {"orders": order_marks(run, display)} for each, run in zip(arrays, runs, strict=True)
            ],
            "canal": places(runs[0], display),
            "moments": {"labels": list(moments.labels), "elapsed": moments.elapsed / np.timedelta64(1, "ms")},
            "words": _words(runs[0], lines, display) | {"start": start},
        },
    )
    return MovingFigures(script, divs, sum(each.steps_left_out for each in arrays))


def _trace_axes(begin: float, end: float) -> TraceAxes:
    """Times from begin to end [ms]; the other axes follow the gate that is looked at."""
    return TraceAxes(Range1d(begin, end, bounds=(begin, end)), Range1d(), Range1d(), Range1d(), Range1d())


def _embedded(figures: dict[str, figure], given: dict[str, Any]) -> tuple[Markup, dict[str, Markup]]:
    """The figures as script and places; `given` is handed to the script of the page when they stand."""
    document = Document()
    for drawn in figures.values():
        document.add_root(drawn)
    document.js_on_event(DocumentReady, CustomJS(args={"page": given}, code="toeline(page)"))
    script, divs = components(figures)
    return Markup(script), {name: Markup(div) for name, div in divs.items()}


def _words(run: xr.Dataset, lines: Sequence[Line], display: Display) -> dict[str, Any]:
    """Names, looks and units that the browser writes and draws with."""
    states = meanings(run["jump_state"])
    return {
        "jump_states": [state.replace("_", " ") for state in states],
        "jump_words": [JUMP_STATES[state].word for state in states],
        "flow_states": [state.replace("_", " ") for state in meanings(run["gate_flow_state"])],
        "colours": [JUMP_STATES[state].colour for state in states],
        "hatches": [JUMP_STATES[state].hatch or " " for state in states],
        "markers": [JUMP_MARKERS[state] for state in states],
        "plans": [line.colour for line in lines],
        "names": [line.word for line in lines],
        "length": unit_text("length", display),
        "discharge": unit_text("discharge", display),
        "discharge_decimals": 3 if display.system is UnitSystem.metric else 1,
    }

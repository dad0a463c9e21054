"""The whole page: the parts in their order, the figures with their numbers, and the template that holds them."""

import json
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from importlib.resources import files
from string import ascii_uppercase
from typing import Any

import jinja2
import xarray as xr
from bokeh.resources import Resources
from markupsafe import Markup

from toeline.errors import UsageError
from toeline.findings.comparison import compare
from toeline.findings.incidents import Incident, incidents
from toeline.findings.series import meanings, names
from toeline.report import style
from toeline.report.comparison import contrast_words
from toeline.report.incidents import NOTHING_FOUND, SETTLING
from toeline.report.layout import counted
from toeline.report.page.gate_tables import bay_table, hour_tables, margin_table, move_table
from toeline.report.page.hazard_strips import hazard_strips, hours_of_strips
from toeline.report.page.legend import hatch_patterns, legend
from toeline.report.page.measure_tables import indicator_tables, limit_tables
from toeline.report.page.moments import Moments, moments_of
from toeline.report.page.moving_figures import moving_figures
from toeline.report.page.order_table import order_table
from toeline.report.page.table import MOST_PRINTED, Table
from toeline.report.page.verdict import floor_hazard, headline, incident_rows, people_hazard, wrongs
from toeline.report.page.water_tables import escape_table, gauge_table, ledger_tables, roughness_table
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.results.dataset import is_long
from toeline.units import Display, UnitSystem

MOST_RUNS = 4
"""How many runs find room beside one another."""

MOST_OPEN = 5
"""Rows of incidents and orders that stand unfolded (choice); numbers are always folded at first."""

TRACE_FIGURES = (
    ("strip", "Jump: from its toe to its end", "Distance of the jump from the gate against time"),
    (
        "tailwater",
        "Tailwater against its limits",
        "Tailwater level against time, with the levels that drown the flow and the jump, and the protection limit",
    ),
    (
        "headwater",
        "Headwater against the target of the pool above",
        "Headwater level against time, with the target level",
    ),
    ("opening", "Opening as moved, and its orders", "Opening of the gate against time, with the orders"),
)
"""Figures over time: their names, headings, and what they show in words."""


@dataclass(frozen=True)
class ShownRun:
    """One of the runs of a page: its letter among several, its name, and what was found in it."""

    place: int
    key: str
    name: str
    run: xr.Dataset
    found: Sequence[Incident]

    @cached_property
    def clock(self) -> RunClock:
        return RunClock(self.run)


def report_page(runs: Mapping[str, xr.Dataset]) -> str:
    """The page of one run, or of several of one canal side by side, as HTML that needs nothing beside itself.

    `runs` are by the name under which each is told, such as its file. Values are in the units in which the first run
    is to be shown. UsageError where a run is empty or without gates, or the runs do not have the same gates, or are too
    many.
    """
    _refuse(runs)
    display = Display(UnitSystem(next(iter(runs.values())).attrs["units_for_display"]))
    shown = _shown_runs(runs)
    moments = moments_of([each.run for each in shown], [each.found for each in shown])
    lines = (
        [style.plan_line(each.place, f"{each.key}{each.name}") for each in shown] if len(shown) > 1 else [style.WATER]
    )
    figures = moving_figures([each.run for each in shown], lines, moments, display)
    return (
        _environment()
        .get_template("page.html")
        .render(
            script=figures.script,
            divs=figures.places,
            drawn_from=_drawn_from(shown, moments, figures.steps_left_out),
            **_words(shown, moments, display),
            **_legends(lines, _order_statuses(shown)),
            **_fixed_parts(),
        )
    )


def _refuse(runs: Mapping[str, xr.Dataset]) -> None:
    if len(runs) > MOST_RUNS:
        raise UsageError(f"found {len(runs)} runs; at most {MOST_RUNS} find room beside one another on a page.")
    for name, run in runs.items():
        if not run.sizes["time"]:
            raise UsageError(f"{name} was stopped before anything reached the disk: there is nothing to show.")
        if not run.sizes["gate"]:
            raise UsageError(
                f"{name} is of a canal without gates, and the page is of what happens at gates: see it with toeline "
                "describe and toeline figures."
            )
    gates = {name: names(run["gate"]) for name, run in runs.items()}
    first, *others = gates
    for other in others:
        if gates[other] != gates[first]:
            raise UsageError(
                f"{first} and {other} do not have the same gates: only runs of one canal can be shown together."
            )


def _shown_runs(runs: Mapping[str, xr.Dataset]) -> list[ShownRun]:
    for run in runs.values():
        if not is_long(run):
            run.load()
    keys = [f"{letter}: " for letter in ascii_uppercase] if len(runs) > 1 else [""]
    return [
        ShownRun(place, keys[place], name if len(runs) > 1 else run_identity(run).plan, run, incidents(run))
        for place, (name, run) in enumerate(runs.items())
    ]


def _words(shown: Sequence[ShownRun], moments: Moments, display: Display) -> dict[str, Any]:
    first = shown[0]
    identity = run_identity(first.run)
    length = max(each.run["time"].values[-1] - each.run["time"].values[0] for each in shown)
    return {
        "title": f"{identity.day}, {', '.join(each.name for each in shown)}: {identity.canal}",
        "identity": identity,
        "runs": [_run_words(each, moments, display) for each in shown],
        "gates": names(first.run["gate"]),
        "strips": list(zip(*(hazard_strips(each.run, length) for each in shown), strict=True)),
        "hours": hours_of_strips(first.run, length),
        "nothing_found": NOTHING_FOUND,
        "counted": counted,
        "most_open": MOST_OPEN,
        "most_printed": MOST_PRINTED,
        "settling": SETTLING,
        "last_moment": len(moments.labels) - 1,
        "number_parts": _number_parts(shown, display),
        "caution": first.run.attrs["comment"],
        "trace_figures": TRACE_FIGURES,
        "differences": _differences(shown, display),
    }


def _run_words(each: ShownRun, moments: Moments, display: Display) -> dict[str, Any]:
    wrong = wrongs(each.run, each.found, moments, display)
    about = each.run.attrs
    return {
        "place": each.place,
        "key": each.key,
        "name": each.name,
        "outcome": about["outcome"],
        "headline": headline(wrong),
        "wrongs": wrong,
        "floor": floor_hazard(each.run, display),
        "people": people_hazard(each.run),
        "incidents": incident_rows(each.run, each.found, moments, display),
        "orders": order_table(each.run, each.clock, display),
        "facts": f"{about['title']}; {about['outcome']}; made by {about['history']}; input hash {about['input_hash']}",
        "day_file": about["day_file"],
        "canal_file": about["canal_file"],
        "settings": json.dumps(json.loads(about["resolved_settings"]), indent=1, ensure_ascii=False),
    }


def _number_parts(shown: Sequence[ShownRun], display: Display) -> list[tuple[str, list[list[Table]]]]:
    """Every part with its tables, run by run."""
    parts: dict[str, Callable[[ShownRun], list[Table]]] = {
        "Margins, hours and moves": lambda each: [
            margin_table(each.run, each.clock, display),
            *hour_tables(each.run),
            bay_table(each.run, each.clock, display),
            move_table(each.run, each.clock, display),
        ],
        "Limits": lambda each: limit_tables(each.run, each.clock, display),
        "Indicators": lambda each: indicator_tables(each.run, display),
        "Water": lambda each: [
            *ledger_tables(each.run),
            escape_table(each.run, each.clock, display),
            gauge_table(each.run, each.clock, display),
            roughness_table(each.run),
        ],
    }
    return [
        (heading, [[table for table in tables(each) if table.rows] for each in shown])
        for heading, tables in parts.items()
    ]


def _differences(shown: Sequence[ShownRun], display: Display) -> list[tuple[str, list[str]]]:
    """In sentences how every other run differs from the first; empty for a single run."""
    if len(shown) == 1:
        return []
    comparison = compare({each.name: each.run for each in shown})
    told = [contrast_words(comparison, place, shown[0].clock, display) for place in range(1, len(shown))]
    return [
        (f"{each.key}{each.name} against {shown[0].key}{shown[0].name}", sentences)
        for each, sentences in zip(shown[1:], told, strict=True)
    ]


def _drawn_from(shown: Sequence[ShownRun], moments: Moments, steps_left_out: int) -> str:
    """From what the figures are drawn, and what they leave out."""
    sizes = [each.run.sizes for each in shown]
    steps = " and ".join(f"{size['time']:,} output steps and {size['profile_time']:,} long profiles" for size in sizes)
    thinned = f" {steps_left_out:,} output steps between them are left out, evenly." if steps_left_out else ""
    return (
        f"The figures are drawn from {steps}, shown at {len(moments.labels):,} moments: those of the long profiles and "
        f"the worst times of incidents.{thinned} Every value is one of the file, none is made up between two."
    )


def _order_statuses(shown: Sequence[ShownRun]) -> list[str]:
    """What became of orders in any of the runs."""
    known = meanings(shown[0].run["order_status"])
    return [
        known[value] for value in sorted({int(value) for each in shown for value in each.run["order_status"].values})
    ]


def _legends(lines: Sequence[style.Line], statuses: Sequence[str]) -> dict[str, list[tuple[Markup, str]]]:
    jumps = list(style.JUMP_STATES.values())[1:]
    floor, limits = (style.APRON, style.PROTECTION), (style.MODULAR_LIMIT, style.DROWNING_LIMIT, style.PROTECTION_LIMIT)
    levels = (style.TAILWATER, *limits, style.HEADWATER, style.TARGET, style.OPENING)
    orders = [style.ORDER_STATUSES[status] for status in statuses]
    canal = (style.BED, style.LINING, style.BANK, style.TARGET, style.LEAF, style.GROUND)
    return {
        "state_legend": legend(style.JUMP_STATES.values()),
        "profile_legend": legend([*lines, *canal]),
        "close_up_legend": legend([style.WATER_BODY, *jumps, style.LEAF, *floor, *limits]),
        "trace_legend": legend([*jumps, *floor, style.SETTLING, *levels, *orders]),
    }


def _fixed_parts() -> dict[str, Markup]:
    templates = files("toeline.report") / "templates"
    return {
        "css": Markup((templates / "page.css").read_text(encoding="utf-8")),
        "page_js": Markup((templates / "page.js").read_text(encoding="utf-8")),
        "bokeh_js": Markup(Resources(mode="inline", components=["bokeh"]).render_js()),
        "patterns": hatch_patterns(),
    }


def _environment() -> jinja2.Environment:
    return jinja2.Environment(
        loader=jinja2.PackageLoader("toeline.report"), autoescape=True, trim_blocks=True, lstrip_blocks=True,
        undefined=jinja2.StrictUndefined,
    )  # fmt: skip

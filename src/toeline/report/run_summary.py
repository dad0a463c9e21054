"""A run on one page, for the planner: first what goes wrong, then the rest."""

from collections.abc import Iterable, Iterator

import xarray as xr

from toeline.findings.bays import uneven_bays
from toeline.findings.escapes import escape_spills
from toeline.findings.gauges import gauge_readings
from toeline.findings.incidents import incidents
from toeline.findings.indicators import indicators
from toeline.findings.jumps import gate_jumps
from toeline.findings.ledger import ledger
from toeline.findings.limit_incidents import limit_uses
from toeline.findings.moves import gate_moves
from toeline.report.bays import bay_lines
from toeline.report.gates import hazard_lines, hour_lines, margin_lines
from toeline.report.gauges import gauge_lines, roughness_lines
from toeline.report.incidents import incident_lines
from toeline.report.indicators import indicator_lines
from toeline.report.layout import heading, paragraph
from toeline.report.limits import limit_lines
from toeline.report.moves import move_lines
from toeline.report.orders import order_lines
from toeline.report.run_clock import RunClock
from toeline.report.run_identity import run_identity
from toeline.report.water import escape_lines, ledger_lines
from toeline.results.dataset import read_apart
from toeline.units import Display

Section = tuple[str, list[str]]
"""Its heading, and its lines; none where there is nothing to tell."""


def run_summary(run: xr.Dataset, display: Display, *, width: int = 80) -> str:
    """The page that ends `toeline run`, from the dataset alone, in the units of `display`."""
    if not run.sizes["time"]:
        return paragraph("The run was stopped before anything reached the disk.", width, indent="")
    clock = RunClock(run)
    shown = []
    for part in (_hazards, _openings, _water, _figures):
        with read_apart(run) as apart:
            shown += [_section(title, lines) for title, lines in part(apart, clock, display, width) if lines]
    return "\n\n".join([_title(run, width), *shown, _section("Caution", [paragraph(run.attrs["comment"], width)])])


def _hazards(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[Section]:
    yield "What goes wrong", list(incident_lines(incidents(run), clock, display, width))
    gates = gate_jumps(run)
    yield "Floor and people", list(hazard_lines(gates, clock, width))
    yield "Limits", list(limit_lines(limit_uses(run), run, clock, display, width))
    yield "Least margins", list(margin_lines(gates, clock, display, width))
    yield "Hours in each state", list(hour_lines(gates, width))


def _openings(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[Section]:
    moves = gate_moves(run)
    yield "Bays that move apart", list(bay_lines(uneven_bays(run), clock, display, width))
    yield "Orders", list(order_lines(run, clock, display, width))
    yield "Moves", list(move_lines(run, moves, clock, display, width)) if any(gate.moves for gate in moves) else []


def _water(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[Section]:
    yield "Escapes", list(escape_lines(escape_spills(run), clock, display, width))
    yield "Staff gauges", list(gauge_lines(gauge_readings(run), clock, display, width))
    yield "Roughness", list(roughness_lines(run, width))


def _figures(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[Section]:
    yield "Indicators", list(indicator_lines(indicators(run), display, width))
    yield "Water ledger", list(ledger_lines(ledger(run), width))


def _title(run: xr.Dataset, width: int) -> str:
    about = run_identity(run)
    first = paragraph(f"{about.canal}: {about.day}", width, indent="")
    return first + "\n" + paragraph(f"{about.plan}; {about.period}, {about.zone}; {about.outcome}", width)


def _section(title: str, lines: Iterable[str]) -> str:
    return "\n".join([heading(title), *lines])

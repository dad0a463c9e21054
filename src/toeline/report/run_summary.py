"""A run on one page, for the planner: first what goes wrong, then the rest."""

from collections.abc import Iterable, Sequence

import xarray as xr

from toeline.findings.bays import uneven_bays
from toeline.findings.escapes import escape_spills
from toeline.findings.gauges import gauge_readings
from toeline.findings.incidents import Incident, incidents
from toeline.findings.indicators import place_indicators
from toeline.findings.jumps import gate_jumps
from toeline.findings.ledger import ledger
from toeline.findings.limit_incidents import limit_uses
from toeline.findings.moves import gate_moves
from toeline.findings.roughness import pool_roughness
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
from toeline.units import Display


def run_summary(run: xr.Dataset, display: Display, *, width: int = 80, found: Sequence[Incident] | None = None) -> str:
    """The page that ends `toeline run`, from the dataset alone, in the units of `display`.

    `found` are the incidents of the run, for those who know them already.
    """
    if not run.sizes["time"]:
        return paragraph("The run was stopped before anything reached the disk.", width, indent="")
    clock = RunClock(run)
    gates = gate_jumps(run)
    sections = [
        ("What goes wrong", incident_lines(incidents(run) if found is None else found, clock, display, width)),
        ("Floor and people", hazard_lines(gates, clock, width) if gates else ()),
        ("Limits", limit_lines(limit_uses(run), run, clock, display, width)),
        ("Least margins", margin_lines(gates, clock, display, width) if gates else ()),
        ("Hours in each state", hour_lines(gates, width) if gates else ()),
        ("Bays that move apart", bay_lines(uneven_bays(run), clock, display, width)),
        ("Orders", order_lines(run, clock, display, width)),
        ("Moves", _moves(run, clock, display, width)),
        ("Escapes", escape_lines(escape_spills(run), clock, display, width)),
        ("Staff gauges", gauge_lines(gauge_readings(run), clock, display, width)),
        ("Roughness", roughness_lines(pool_roughness(run), width)),
        ("Indicators", indicator_lines(place_indicators(run), display, width)),
        ("Water ledger", ledger_lines(ledger(run), display, width)),
        ("Caution", [paragraph(run.attrs["comment"], width)]),
    ]
    shown = [(title, list(lines)) for title, lines in sections]
    return "\n\n".join([_title(run, width), *(_section(title, lines) for title, lines in shown if lines)])


def _moves(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterable[str]:
    moves = gate_moves(run)
    return move_lines(run, moves, clock, display, width) if any(gate.moves for gate in moves) else ()


def _title(run: xr.Dataset, width: int) -> str:
    about = run_identity(run)
    first = paragraph(f"{about.canal}: {about.day}", width, indent="")
    return first + "\n" + paragraph(f"{about.plan}; {about.period}, {about.zone}; {about.outcome}", width)


def _section(title: str, lines: Iterable[str]) -> str:
    return "\n".join([heading(title), *lines])

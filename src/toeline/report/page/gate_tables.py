"""The gates of a run as tables: margins, hours in each state, moves, and bays that stood unevenly."""

from collections.abc import Sequence

import numpy as np
import xarray as xr

from toeline.findings.bays import uneven_bays
from toeline.findings.jumps import gate_jumps
from toeline.findings.moves import SCHEDULE, GateMoves, gate_moves
from toeline.report.bays import UNEVEN
from toeline.report.clock import duration_text
from toeline.report.page.table import Table
from toeline.report.run_clock import RunClock, extreme_text, timed_text
from toeline.units import Display


def margin_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """How near each gate came, and how far its jump reached."""
    rows = tuple(
        (
            jumps.gate,
            extreme_text(jumps.protection_margin, clock, display),
            extreme_text(jumps.tailwater_margin, clock, display),
            timed_text(display.distance(jumps.jump_end_distance.value), jumps.jump_end_distance, clock),
        )
        for jumps in gate_jumps(run)
    )
    return Table(
        "Least margins",
        ("gate", "protection margin", "tailwater margin", "jump ends at most"),
        rows,
        note="Protection margin: how far the tailwater could still fall before the jump's end passes the protected "
        "floor; negative: how much is missing. Tailwater margin: how far it stands above the level that drowns the "
        "jump.",
    )


def hour_tables(run: xr.Dataset) -> list[Table]:
    """For how long each gate was in each state; states that no gate was in are left out."""
    jumps = gate_jumps(run)
    return [
        _hour_table("flow", [(gate.gate, gate.flow_state_hours) for gate in jumps]),
        _hour_table("jump", [(gate.gate, gate.jump_state_hours) for gate in jumps]),
    ]


def _hour_table(subject: str, rows: Sequence[tuple[str, dict[str, float]]]) -> Table:
    states = [state for state in rows[0][1] if any(hours[state] for _, hours in rows)]
    cells = tuple(
        (gate, *(duration_text(hours[state] * 3600) if hours[state] else "-" for state in states))
        for gate, hours in rows
    )
    header = ("gate", *(state.replace("_", " ") for state in states))
    return Table(f"Hours in each state of the {subject}", header, cells)


def bay_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """Gates whose bays move apart, and how far apart they stood."""
    rows = tuple(
        (
            gate.gate,
            f"{gate.bays[0]} and {gate.bays[1]}" if gate.difference.value else "-",
            extreme_text(gate.difference, clock, display),
        )
        for gate in uneven_bays(run)
    )
    return Table("Bays that move apart", ("gate", "bays", "greatest difference"), rows, words=2, note=UNEVEN)


def move_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """How often each gate was moved, by whom, and how restlessly."""
    return Table(
        "Moves",
        ("gate", "moves", "by rules", "busiest hour", "back and forth", "travel"),
        tuple(_move_row(gate, clock, display) for gate in gate_moves(run) if gate.moves),
        note="Back and forth: moves against the one before. Many of them tell of a rule that hunts.",
    )


def _move_row(gate: GateMoves, clock: RunClock, display: Display) -> tuple[str, ...]:
    by_rules = gate.moves - gate.by_source.get(SCHEDULE, 0)
    busiest = "-" if np.isnat(gate.busiest_from) else f"{gate.busiest} from {clock.at(gate.busiest_from)}"
    return gate.gate, str(gate.moves), str(by_rules), busiest, str(gate.reversals), display.length(gate.travel)

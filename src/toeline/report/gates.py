"""The gates of a run: the two hazards below each, its least margins, and its hours in every state."""

from collections.abc import Iterator, Sequence

from toeline.findings.jumps import GateJumps
from toeline.report.clock import duration_text
from toeline.report.layout import INDENT, fits, paragraph, table
from toeline.report.run_clock import RunClock, extreme_text, timed_text
from toeline.units import Display


def hazard_lines(gates: Sequence[GateJumps], clock: RunClock, width: int) -> Iterator[str]:
    """Floor and people side by side: little of one says nothing about the other; then when the rollers stood."""
    rows = [(gate.gate, _hours(gate.beyond_protection_hours), _hours(gate.roller_hours)) for gate in gates]
    yield table(("", "floor: jump beyond protection", "people: drowned roller"), rows, width)
    for times, named in _gates_by_roller_times(gates, clock).items():
        yield paragraph(f"Roller below {', '.join(named)}: {times}", width, hanging=INDENT * 2)
    yield paragraph("At no hour is any place below a gate safe to enter, with a roller or without.", width)


def _gates_by_roller_times(gates: Sequence[GateJumps], clock: RunClock) -> dict[str, list[str]]:
    """Names of the gates that had rollers at the same times, by these."""
    found: dict[str, list[str]] = {}
    for gate in gates:
        if gate.rollers:
            times = clock.spans([(roller.start, roller.end) for roller in gate.rollers])
            found.setdefault(times, []).append(gate.gate)
    return found


def margin_lines(gates: Sequence[GateJumps], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """How near each gate came, in tailwater level, and how far its jump reached."""
    rows = [
        (
            gate.gate,
            extreme_text(gate.protection_margin, clock, display),
            extreme_text(gate.tailwater_margin, clock, display),
            timed_text(display.distance(gate.jump_end_distance.value), gate.jump_end_distance, clock),
        )
        for gate in gates
    ]
    yield table(("", "protection margin", "tailwater margin", "jump ends at most"), rows, width)
    yield paragraph(
        "Protection margin: how far the tailwater could still fall before the jump's end passes the protected floor; "
        "negative: how much is missing. Tailwater margin: how far it stands above the level that drowns the jump. "
        "Jump ends: how far from the gate.",
        width,
    )


def hour_lines(gates: Sequence[GateJumps], width: int) -> Iterator[str]:
    """For how long each gate was in each state; states that no gate was in are left out."""
    yield _hours_table("flow", [(gate.gate, gate.flow_state_hours) for gate in gates], width)
    yield _hours_table("jump", [(gate.gate, gate.jump_state_hours) for gate in gates], width)
    yield paragraph(
        "Each output step counts for half of the time to its neighbours; times elsewhere are interpolated.", width
    )


def _hours_table(subject: str, rows: Sequence[tuple[str, dict[str, float]]], width: int) -> str:
    """States across; where they do not fit, a line a gate with the states that it was in."""
    states = [state for state in rows[0][1] if any(hours[state] for _, hours in rows)]
    header = (subject, *(state.replace("_", " ") for state in states))
    cells = [(gate, *(_hours(hours[state]) for state in states)) for gate, hours in rows]
    if fits(header, cells, width):
        return table(header, cells, width)
    lines = []
    for gate, *told in cells:
        words = ", ".join(f"{state} {hours}" for state, hours in zip(header[1:], told, strict=True) if hours != "-")
        lines.append(paragraph(f"{gate}: {words}", width, hanging=INDENT * 2))
    return "\n".join([paragraph(subject, width), *lines])


def _hours(hours: float) -> str:
    return duration_text(hours * 3600) if hours else "-"

"""Gates whose bays move apart, in words."""

from collections.abc import Iterator, Sequence

from toeline.findings.bays import UnevenBays
from toeline.report.layout import paragraph
from toeline.report.run_clock import RunClock, extreme_text
from toeline.units import Display

UNEVEN = (
    "Jet and jump of such a gate are those of the bay with the largest unit discharge, as if the whole width ran "
    "like it against the common tailwater. Unequal bays make eddies and side rollers, which carry stones and turn "
    "the jet aside; they are not modelled: what is said of the jump is then least trustworthy."
)


def bay_lines(gates: Sequence[UnevenBays], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """How unevenly each gate stood open, and what that leaves unknown; nothing where all bays move together."""
    if not gates:
        return
    for gate in gates:
        yield paragraph(f"{gate.gate}: {_words(gate, clock, display)}", width)
    yield paragraph(UNEVEN, width)


def _words(gate: UnevenBays, clock: RunClock, display: Display) -> str:
    if not gate.difference.value:
        return "all bays alike."
    left, right = gate.bays
    most = extreme_text(gate.difference, clock, display)
    return f"bays {left} and {right}, side by side, differ most: by {most}."

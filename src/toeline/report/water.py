"""The water ledger of a run as a table."""

from collections.abc import Iterator

from toeline.findings.ledger import Ledger, acre_feet
from toeline.report.layout import paragraph, table


def ledger_lines(ledger: Ledger, width: int) -> Iterator[str]:
    """What came in, where it went, and what is left unexplained, in both units."""
    entries = {
        "taken in at the head": ledger.inflow,
        **{f"delivered, {offtake}": -volume for offtake, volume in ledger.deliveries.items()},
        "let out at the tail": -ledger.outflow,
        **{f"kept in {pool}": -change for pool, change in ledger.storage_changes.items()},
    }
    rows = [(name, _rounded(volume, 0), _rounded(acre_feet(volume), 2)) for name, volume in entries.items()]
    rows.append(("residual", f"{ledger.residual:.1g}", f"{acre_feet(ledger.residual):.1g}"))
    yield table(("", "m3", "acre-ft"), rows, width)
    yield paragraph("The residual is what the other lines leave over: whether the computing lost water.", width)


def _rounded(value: float, decimals: int) -> str:
    return f"{round(value, decimals) + 0.0:,.{decimals}f}"  # + 0.0 turns -0.0 into 0.0

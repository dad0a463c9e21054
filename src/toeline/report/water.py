"""The water of a run as tables: the ledger of the canal, that of every pool, and what the escapes spilled."""

from collections.abc import Callable, Iterator, Sequence

from toeline.findings.escapes import EscapeSpill
from toeline.findings.ledger import Account, Ledger, acre_feet
from toeline.report.layout import INDENT, counted, paragraph, table
from toeline.report.run_clock import RunClock
from toeline.units import FILE_UNITS, Display, UnitSystem

ENTRIES: dict[str, Callable[[Account], float]] = {
    "in": lambda account: account.inflow,
    "delivered": lambda account: account.delivered,
    "spilled": lambda account: account.spilled,
    "lost": lambda account: account.losses,
    "out": lambda account: account.outflow,
    "kept": lambda account: account.storage_change,
}
"""Columns of the table of pools."""


def canal_entries(ledger: Ledger) -> dict[str, float]:
    """The lines of the ledger of the canal [m³], all as amounts; the residual is the first less all others."""
    canal = ledger.canal
    return {
        "taken in at the head": canal.inflow,
        **{f"delivered, {offtake}": volume for offtake, volume in canal.deliveries.items()},
        **{f"spilled, {escape}": volume for escape, volume in canal.escapes.items()},
        **{f"lost in {pool}": account.losses for pool, account in ledger.pools.items() if account.losses},
        "let out at the tail": canal.outflow,
        **{f"kept in {pool}": account.storage_change for pool, account in ledger.pools.items()},
        "residual": canal.residual,
    }


def ledger_note(ledger: Ledger) -> str:
    """What the words of the ledger mean."""
    losses = "Lost: seepage and evaporation less rain. " if ledger.canal.losses else ""
    return (
        f"{losses}Kept: what the volume grew by; negative: it shrank. Residual: what was taken in less all of the "
        "other lines: whether the computing lost water."
    )


def ledger_lines(ledger: Ledger, display: Display, width: int) -> Iterator[str]:
    """What came in, where it went and what is left unexplained, in both units; then pool by pool in that of display."""
    entries = canal_entries(ledger)
    rows = [(name, rounded(volume, 0), rounded(acre_feet(volume), 2)) for name, volume in entries.items()]
    yield table(("", "m3", "acre-ft"), rows, width)
    yield paragraph(ledger_note(ledger), width)
    yield _pool_table(ledger, display, width)


def _pool_table(ledger: Ledger, display: Display, width: int) -> str:
    """Pools and the canal in one unit; entries that no pool has are left out."""
    accounts = {**ledger.pools, "canal": ledger.canal}
    used = {name: entry for name, entry in ENTRIES.items() if any(entry(account) for account in accounts.values())}
    used["residual"] = lambda account: account.residual
    is_metric = display.system is UnitSystem.metric
    convert, decimals = (float, 0) if is_metric else (acre_feet, 2)
    rows = [
        (name, *(rounded(convert(entry(account)), decimals) for entry in used.values()))
        for name, account in accounts.items()
    ]
    return table((FILE_UNITS["volume"][display.system], *used), rows, width)


def escape_lines(spills: Sequence[EscapeSpill], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """One line an escape that spilled: since when, how often, how much; the others together."""
    for spill in spills:
        if spill.spills:
            words = f"{spill.escape}, {spill.pool}: {_spill_words(spill, clock, display)}"
            yield paragraph(words, width, hanging=INDENT * 2)
    if dry := [spill.escape for spill in spills if not spill.spills]:
        yield paragraph(f"Did not spill: {', '.join(dry)}.", width)
    if spills:
        yield paragraph("Reckoned with the level at the middle of each crest; the dip along it is not modelled.", width)


def _spill_words(spill: EscapeSpill, clock: RunClock, display: Display) -> str:
    hours = "; ".join(clock.span(spell.start, spell.end) for spell in spill.spills[:3])
    more = f"; {counted(len(spill.spills), 'time')} in all" if len(spill.spills) > 3 else ""
    at = clock.at(spill.greatest.time)
    return (
        f"spills {hours}{more}; {display.volume(spill.volume)} in all, at most "
        f"{display.discharge(spill.greatest.value)} at {at}"
    )


def rounded(value: float, decimals: int) -> str:
    """A number with its thousands apart."""
    return f"{round(value, decimals) + 0.0:,.{decimals}f}"  # + 0.0 turns -0.0 into 0.0

"""The water of a run as tables: the ledger of the canal, that of every pool, and what the escapes spilled."""

from collections.abc import Callable, Iterator, Sequence

from toeline.findings.escapes import EscapeSpill
from toeline.findings.ledger import Account, Ledger, acre_feet
from toeline.report.layout import counted, paragraph, table
from toeline.report.run_clock import RunClock
from toeline.units import Display

ENTRIES: dict[str, Callable[[Account], float]] = {
    "in": lambda account: account.inflow,
    "delivered": lambda account: account.delivered,
    "spilled": lambda account: account.spilled,
    "lost": lambda account: account.losses,
    "out": lambda account: account.outflow,
    "kept": lambda account: account.storage_change,
}
"""Columns of the table of pools."""


def ledger_lines(ledger: Ledger, width: int) -> Iterator[str]:
    """What came in, where it went, and what is left unexplained, in both units; then pool by pool."""
    canal = ledger.canal
    entries = {
        "taken in at the head": canal.inflow,
        **{f"delivered, {offtake}": -volume for offtake, volume in canal.deliveries.items()},
        **{f"spilled, {escape}": -volume for escape, volume in canal.escapes.items()},
        **{f"lost in {pool}": -account.losses for pool, account in ledger.pools.items() if account.losses},
        "let out at the tail": -canal.outflow,
        **{f"kept in {pool}": -account.storage_change for pool, account in ledger.pools.items()},
    }
    rows = [(name, _rounded(volume, 0), _rounded(acre_feet(volume), 2)) for name, volume in entries.items()]
    rows.append(("residual", *_residual(canal)))
    yield table(("", "m3", "acre-ft"), rows, width)
    losses = "Lost: seepage and evaporation less rain. " if canal.losses else ""
    residual = "The residual is what the other lines leave over: whether the computing lost water."
    yield paragraph(losses + residual, width)
    yield from _pool_lines(ledger, width)


def _pool_lines(ledger: Ledger, width: int) -> Iterator[str]:
    """A table of all pools in m³, and one in acre-feet; entries that no pool has are left out."""
    accounts = {**ledger.pools, "canal": ledger.canal}
    used = {name: entry for name, entry in ENTRIES.items() if any(entry(account) for account in accounts.values())}
    for unit, convert, decimals, column in (("m3", float, 0, 0), ("acre-ft", acre_feet, 2, 1)):
        rows = [
            (
                name,
                *(_rounded(convert(entry(account)), decimals) for entry in used.values()),
                _residual(account)[column],
            )
            for name, account in accounts.items()
        ]
        yield table((unit, *used, "residual"), rows, width)


def escape_lines(spills: Sequence[EscapeSpill], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """One line an escape: since when, how often, how much."""
    for spill in spills:
        yield paragraph(f"{spill.escape}, {spill.pool}: {_spill_words(spill, clock, display)}", width)
    if spills:
        yield paragraph("Reckoned with the level at the middle of each crest; the dip along it is not modelled.", width)


def _spill_words(spill: EscapeSpill, clock: RunClock, display: Display) -> str:
    if not spill.spills:
        return "did not spill."
    hours = "; ".join(clock.span(spell.start, spell.end) for spell in spill.spills[:3])
    more = f"; {counted(len(spill.spills), 'time')} in all" if len(spill.spills) > 3 else ""
    at = clock.at(spill.greatest.time)
    return (
        f"spills {hours}{more}; {display.volume(spill.volume)} in all, at most "
        f"{display.discharge(spill.greatest.value)} at {at}"
    )


def _residual(account: Account) -> tuple[str, str]:
    return f"{account.residual:.1g}", f"{acre_feet(account.residual):.1g}"


def _rounded(value: float, decimals: int) -> str:
    return f"{round(value, decimals) + 0.0:,.{decimals}f}"  # + 0.0 turns -0.0 into 0.0

"""The water of a run as tables: the ledger of canal and pools, escapes, staff gauges, roughness."""

import xarray as xr

from toeline.findings.escapes import EscapeSpill, escape_spills
from toeline.findings.gauges import gauge_readings
from toeline.findings.ledger import Account, Ledger, acre_feet, ledger
from toeline.findings.roughness import pool_roughness
from toeline.report.page.table import Table
from toeline.report.run_clock import RunClock, extreme_text
from toeline.report.water import ENTRIES, canal_entries, ledger_note, rounded
from toeline.units import Display


def ledger_tables(run: xr.Dataset) -> list[Table]:
    """Where the water of the canal came from and went, in both units, then pool by pool."""
    water = ledger(run)
    return [_canal_table(water), _pool_table(water)]


def _canal_table(water: Ledger) -> Table:
    entries = canal_entries(water)
    rows = [(name, rounded(volume, 0), rounded(acre_feet(volume), 2)) for name, volume in entries.items()]
    return Table("Ledger of the canal", ("", "m³", "acre-ft"), tuple(rows), note=ledger_note(water))


def _pool_table(water: Ledger) -> Table:
    """Entries that no pool has are left out."""
    used = [name for name, entry in ENTRIES.items() if any(entry(account) for account in water.pools.values())]
    header = ("pool", *(f"{name}, {unit}" for name in (*used, "residual") for unit in ("m³", "acre-ft")))
    return Table(
        "Ledger of the pools",
        header,
        tuple((pool, *_account_cells(account, used)) for pool, account in water.pools.items()),
    )


def _account_cells(account: Account, used: list[str]) -> list[str]:
    volumes = [*(ENTRIES[name](account) for name in used), account.residual]
    return [cell for volume in volumes for cell in (rounded(volume, 0), rounded(acre_feet(volume), 2))]


def escape_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """Every escape: when it spilled, and how much."""
    return Table(
        "Escapes",
        ("escape", "pool", "spills", "volume", "at most"),
        tuple(_escape_row(spill, clock, display) for spill in escape_spills(run)),
        words=3,
        note="Reckoned with the level at the middle of each crest; the dip along it is not modelled.",
    )


def _escape_row(spill: EscapeSpill, clock: RunClock, display: Display) -> tuple[str, ...]:
    if not spill.spills:
        return spill.escape, spill.pool, "not", "-", "-"
    times = clock.spans([(spell.start, spell.end) for spell in spill.spills])
    most = f"{display.discharge(spill.greatest.value)} at {clock.at(spill.greatest.time)}"
    return spill.escape, spill.pool, times, display.volume(spill.volume), most


def gauge_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """What was to be read on the staff gauges."""
    rows = tuple(
        (
            gauge.gauge,
            gauge.place,
            display.length(gauge.first),
            extreme_text(gauge.least, clock, display),
            extreme_text(gauge.greatest, clock, display),
        )
        for gauge in gauge_readings(run)
    )
    note = "Readings are above the zero of the staff; negative: the water stands below it."
    return Table("Staff gauges", ("gauge", "stands", "at the start", "least", "greatest"), rows, words=2, note=note)


def roughness_table(run: xr.Dataset) -> Table:
    """Factors on Manning's n that the calendar gave; no rows where it gave none."""
    rows = tuple(
        (pool.pool, f"{pool.first:.3f}", f"{pool.last:.3f}", f"{pool.greatest:.3f}") for pool in pool_roughness(run)
    )
    return Table("Factors on Manning's n", ("pool", "at the start", "at the end", "greatest"), rows)

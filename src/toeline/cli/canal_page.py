"""A canal in words: one line for `check`, one page for `describe`."""

from collections.abc import Iterator
from typing import TYPE_CHECKING

from toeline.report.layout import INDENT, counted, heading, paragraph, table
from toeline.units import Display

if TYPE_CHECKING:
    from toeline.scenario import CanalFile
    from toeline.scenario.schema.canal import Canal
    from toeline.scenario.schema.escapes import Escape
    from toeline.scenario.schema.gates import Gate
    from toeline.scenario.schema.gauges import Gauge
    from toeline.scenario.schema.offtakes import Offtake
    from toeline.scenario.schema.pools import Pool
    from toeline.scenario.schema.roughness import RoughnessEntry


POOL_COLUMNS = ("", "length", "bed at head", "bed at end", "target", "protected floor")
GATE_COLUMNS = ("", "kind", "bays", "sill", "opens to", "hoist")
OFFTAKE_COLUMNS = ("", "pool", "below its head", "kind")
ESCAPE_COLUMNS = ("", "pool", "below its head", "crest", "length", "outside")
GAUGE_COLUMNS = ("", "stands", "zero")
ROUGHNESS_COLUMNS = ("from", "pools", "factor on n", "until the next", "")


def canal_line(file: "CanalFile") -> str:
    canal = file.canal
    things = (("pool", canal.pools), ("gate", canal.gates), ("offtake", canal.offtakes))
    numbers = ", ".join(counted(len(listed), noun) for noun, listed in things)
    length = Display(file.units).length(sum(pool.length for pool in canal.pools))
    return f"canal {canal.name}, {length} long: {numbers}; plain numbers are {file.units}"


def canal_page(file: "CanalFile", width: int) -> str:
    """Pools, gates and all else beside them, from the head down, and the limits."""
    canal, display = file.canal, Display(file.units)
    tables = (
        ("Pools", POOL_COLUMNS, [_pool_row(pool, canal, display) for pool in canal.pools]),
        ("Gates", GATE_COLUMNS, [_gate_row(gate, display) for gate in canal.gates]),
        ("Offtakes", OFFTAKE_COLUMNS, [_offtake_row(offtake, display) for offtake in canal.offtakes]),
        ("Escapes", ESCAPE_COLUMNS, [_escape_row(escape, display) for escape in canal.escapes]),
        ("Staff gauges", GAUGE_COLUMNS, [_gauge_row(gauge, display) for gauge in canal.gauges]),
        ("Losses", ("", "rate"), _loss_rows(canal, display)),
        ("Roughness calendar", ROUGHNESS_COLUMNS, [_roughness_row(entry) for entry in canal.roughness_calendar]),
    )
    lines = [paragraph(canal_line(file), width, indent="")]
    for title, columns, rows in tables:
        if rows:
            lines += ["", heading(title), table(columns, rows, width)]
    lines += ["", heading("Ends"), *_ends(canal, display, width)]
    return "\n".join([*lines, "", heading("Limits"), *_limits(canal, display, width)])


def _pool_row(pool: "Pool", canal: "Canal", display: Display) -> tuple[str, ...]:
    levels = (pool.bed_level, pool.end_bed_level, float("nan") if pool.target_level is None else pool.target_level)
    protected = display.length(_protected_length(pool, canal))
    return (pool.name, display.length(pool.length), *(display.level(level) for level in levels), protected)


def _protected_length(pool: "Pool", canal: "Canal") -> float:
    """From the pool's head to where the protected surfaces without a gap end [m]."""
    length = 0.0
    for stretch in pool.stretches:
        if not canal.surfaces[stretch.surface].protected:
            break
        length += stretch.length
    return length


def _gate_row(gate: "Gate", display: Display) -> tuple[str, ...]:
    apart = ", separate" if gate.separate_bays else ""
    bays = f"{gate.bays} of {display.length(gate.bay_width)}{apart}"
    hoist = "at once" if gate.hoist_speed is None else display.speed(gate.hoist_speed)
    levels = (display.level(gate.sill_level), display.opening(gate.max_opening))
    return (gate.name, gate.kind, bays, *levels, hoist)


def _offtake_row(offtake: "Offtake", display: Display) -> tuple[str, ...]:
    return (offtake.name, offtake.pool, display.length(offtake.chainage), offtake.kind)


def _escape_row(escape: "Escape", display: Display) -> tuple[str, ...]:
    outside = "free fall" if escape.outside_level is None else display.level(escape.outside_level)
    crest = (display.level(escape.crest_level), display.length(escape.length))
    return (escape.name, escape.pool, display.length(escape.chainage), *crest, outside)


def _gauge_row(gauge: "Gauge", display: Display) -> tuple[str, ...]:
    place = f"{gauge.side} of {gauge.gate}" if gauge.gate else f"{gauge.pool}, {display.length(gauge.chainage or 0.0)}"
    return (gauge.name, place, display.level(gauge.zero_level))


def _loss_rows(canal: "Canal", display: Display) -> list[tuple[str, ...]]:
    """What is not zero: seepage by surface, evaporation, rain."""
    losses = canal.losses
    rates = {
        "seepage": losses.seepage,
        **{f"seepage, {name}": surface.seepage for name, surface in canal.surfaces.items()},
        "evaporation": losses.evaporation,
        "rain": losses.rain,
    }
    is_given = any(rates.values())
    return [(name, display.rate_of_loss(rate)) for name, rate in rates.items() if rate is not None and is_given]


def _roughness_row(entry: "RoughnessEntry") -> tuple[str, ...]:
    shape = {"steps": "holds", "lines": "on a line"}[entry.shape]
    return (str(entry.day), entry.pools_text, f"{entry.factor:g}", shape, entry.note or "")


def _ends(canal: "Canal", display: Display, width: int) -> Iterator[str]:
    for name, end in (("head", canal.head), ("tail", canal.tail)):
        level = "" if end.level is None else f" {display.level(end.level)}"
        yield paragraph(f"{name}: {end.kind}{level}", width)


def _limits(canal: "Canal", display: Display, width: int) -> Iterator[str]:
    from toeline.findings.limits import limit_of
    from toeline.report.limits import limit_words
    from toeline.scenario.limits import limits_of

    everything = {
        "pool": [pool.name for pool in canal.pools],
        "gate": [gate.name for gate in canal.gates],
        "offtake": [offtake.name for offtake in canal.offtakes],
        "surface": list(canal.surfaces),
    }
    if not canal.limits:
        yield paragraph("none given; none is built in", width)
    for entry in limits_of(canal):
        limit = limit_of(entry)
        yield paragraph(limit_words(limit, everything, display), width, hanging=INDENT * 2)
        yield paragraph(limit.source, width, indent=INDENT * 2)

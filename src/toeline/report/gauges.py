"""Staff gauges and roughness of a run as tables."""

from collections.abc import Iterator, Sequence

from toeline.findings.gauges import GaugeReadings
from toeline.findings.roughness import PoolRoughness
from toeline.report.layout import fits, paragraph, table
from toeline.report.run_clock import RunClock, extreme_text
from toeline.units import Display


def gauge_lines(gauges: Sequence[GaugeReadings], clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """Readings at the start, and the least and the greatest with their times; nothing where there is no gauge."""
    if not gauges:
        return
    rows = [
        (
            gauge.gauge,
            gauge.place,
            display.length(gauge.first),
            extreme_text(gauge.least, clock, display),
            extreme_text(gauge.greatest, clock, display),
        )
        for gauge in gauges
    ]
    yield table(*_with_places_where_they_fit(("", "stands", "at the start", "least", "greatest"), rows, width), width)
    yield paragraph("Readings are above the zero of the staff; negative: the water stands below it.", width)


def _with_places_where_they_fit(
    header: Sequence[str], rows: Sequence[Sequence[str]], width: int
) -> tuple[Sequence[str], Sequence[Sequence[str]]]:
    """The table without the places of the gauges, which the page of the canal tells, where it has room only so."""
    narrow = [header[0], *header[2:]], [[row[0], *row[2:]] for row in rows]
    return narrow if fits(*narrow, width) and not fits(header, rows, width) else (header, rows)


def roughness_lines(pools: Sequence[PoolRoughness], width: int) -> Iterator[str]:
    """Factors on Manning's n that the calendar gave: first, last and greatest; nothing where it gave none."""
    if not pools:
        return
    rows = [(pool.pool, f"{pool.first:.3f}", f"{pool.last:.3f}", f"{pool.greatest:.3f}") for pool in pools]
    yield table(("factor on Manning's n", "at the start", "at the end", "greatest"), rows, width)
    if any(pool.changes for pool in pools):
        yield paragraph(
            "The factor changes at midnight, all at once. The wave that a large change sends through the pools is not "
            "real: cutting weeds takes days.",
            width,
        )

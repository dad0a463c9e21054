"""The rating of a gate as a page and as a CSV file."""

import csv
import io
import math
from collections.abc import Iterator, Sequence
from itertools import groupby
from pathlib import Path
from typing import TYPE_CHECKING

from toeline.report.layout import fits, heading, paragraph, table
from toeline.results.variables import FLOW_STATES
from toeline.units import FILE_UNITS, Dimension, Display, UnitSystem, file_factor

if TYPE_CHECKING:
    from toeline.network.rating import RatingRow

MARKS = dict(zip(FLOW_STATES, "cfndwxor", strict=True))
"""One letter for each state of the flow, explained under the tables that use it."""
POORLY_KNOWN = "?"
CSV_COLUMNS: dict[str, Dimension | None] = {
    "headwater_level": "length",
    "tailwater_level": "length",
    "opening": "length",
    "discharge": "discharge",
    "flow_state": None,
    "quality": None,
    "modular_limit_level": "length",
    "protection_limit_level": "length",
}
NOTES = (
    "limit: the modular limit, the tailwater above which the flow is drowned. leaves: the tailwater below which the "
    "end of the jump leaves the protected floor; '-' where none does that, or there is no free jump. "
    "Planning aid: verify the gate scale, the gauges and one discharge in the field."
)


def rating_page(rows: Sequence["RatingRow"], title: str, display: Display, width: int) -> str:
    """One table a headwater: openings downward, the two tailwaters to watch, then discharges by tailwater."""
    length, discharge = (FILE_UNITS[dimension][display.system] for dimension in ("length", "discharge"))
    units = f"Discharge in {discharge} by opening (down) and tailwater level (across), in {length}."
    blocks = [paragraph(title, width, indent=""), paragraph(units, width)]
    for headwater, group in groupby(rows, key=lambda row: row.headwater_level):
        blocks += ["", f"{heading('Headwater')} {display.level(headwater)}", *_tables(list(group), display, width)]
    return "\n".join([*blocks, "", paragraph(_legend(rows), width), paragraph(NOTES, width)])


def _tables(rows: Sequence["RatingRow"], display: Display, width: int) -> Iterator[str]:
    """All tailwaters abreast, or as many as find room, and the others in further tables."""
    lines = [list(group) for _, group in groupby(rows, key=lambda row: row.opening)]
    total = len(lines[0])
    most = next((count for count in range(total, 1, -1) if fits(*_cells(lines, 0, count, display), width)), 1)
    for first in range(0, total, most):
        yield table(*_cells(lines, first, most, display), width)


def _cells(
    lines: Sequence[Sequence["RatingRow"]], first: int, count: int, display: Display
) -> tuple[list[str], list[list[str]]]:
    """Header and rows of a table with `count` tailwaters from the `first` on."""
    abreast = slice(first, first + count)
    header = ["opening", "limit", "leaves", *(_bare(display.level(row.tailwater_level)) for row in lines[0][abreast])]
    return header, [_openings(line[0], display) + [_discharge(row, display) for row in line[abreast]] for line in lines]


def _openings(row: "RatingRow", display: Display) -> list[str]:
    levels = (row.modular_limit_level, row.protection_limit_level)
    return [_bare(display.opening(row.opening)), *(_bare(display.level(level)) for level in levels)]


def _discharge(row: "RatingRow", display: Display) -> str:
    mark = MARKS[row.flow_state] + (" " if row.quality == "good" else POORLY_KNOWN)
    return f"{_bare(display.discharge(row.discharge))} {mark}"


def _bare(quantity: str) -> str:
    """The number without its unit, which stands above the tables."""
    return quantity.split(" ")[0]


def _legend(rows: Sequence["RatingRow"]) -> str:
    used = {row.flow_state for row in rows}
    words = [f"{mark} {state.replace('_', ' ')}" for state, mark in MARKS.items() if state in used]
    if any(row.quality != "good" for row in rows):
        words.append(f"{POORLY_KNOWN} discharge poorly known")
    return "; ".join(words) + "."


def write_csv(file: Path, rows: Sequence["RatingRow"], system: UnitSystem) -> None:
    """One row a value, in the units of the canal file, which the header names; empty where there is no value."""
    sheet = io.StringIO(newline="")
    writer = csv.writer(sheet)
    writer.writerow(_column(name, dimension, system) for name, dimension in CSV_COLUMNS.items())
    for row in rows:
        writer.writerow(_field(getattr(row, name), dimension, system) for name, dimension in CSV_COLUMNS.items())
    file.write_text(sheet.getvalue(), encoding="utf-8", newline="")


def _column(name: str, dimension: Dimension | None, system: UnitSystem) -> str:
    return f"{name} [{FILE_UNITS[dimension][system]}]" if dimension else name


def _field(value: float | str, dimension: Dimension | None, system: UnitSystem) -> str:
    if dimension is None or isinstance(value, str):
        return str(value)
    return "" if math.isnan(value) else f"{value / file_factor(dimension, system):.4f}"

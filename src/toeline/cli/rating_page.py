"""The rating of a gate as a page and as a CSV file."""

import csv
import math
from collections.abc import Iterator, Sequence
from itertools import groupby
from pathlib import Path
from typing import TYPE_CHECKING

from toeline.report.layout import heading, paragraph, table
from toeline.results.variables import FLOW_STATES
from toeline.units import FILE_UNITS, Dimension, Display, UnitSystem, file_factor

if TYPE_CHECKING:
    from toeline.network.rating import RatingRow

TAILWATERS_ABREAST = 4
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
    "Above the modular limit the tailwater drowns the flow. Below the last level the end of the jump passes the "
    "protected floor; '-': no tailwater can do that, or there is no free jump. "
    "Planning aid: verify the gate scale, the gauges and one discharge in the field."
)


def rating_page(rows: Sequence["RatingRow"], title: str, display: Display, width: int) -> str:
    """One table a headwater: openings downward, tailwaters across, then the two tailwaters to watch."""
    unit = FILE_UNITS["discharge"][display.system]
    blocks = [paragraph(title, width, indent="", hanging=""), paragraph(f"Discharge in {unit}.", width)]
    for headwater, group in groupby(rows, key=lambda row: row.headwater_level):
        blocks += ["", f"{heading('Headwater')} {display.level(headwater)}", *_tables(list(group), display, width)]
    return "\n".join([*blocks, "", paragraph(_legend(rows), width), paragraph(NOTES, width)])


def _tables(rows: Sequence["RatingRow"], display: Display, width: int) -> Iterator[str]:
    by_opening = [list(group) for _, group in groupby(rows, key=lambda row: row.opening)]
    for first in range(0, len(by_opening[0]), TAILWATERS_ABREAST):
        abreast = slice(first, first + TAILWATERS_ABREAST)
        tailwaters = [display.level(row.tailwater_level) for row in by_opening[0][abreast]]
        header = ["opening", *tailwaters, "modular limit", "jump leaves"]
        yield table(header, [_cells(line, abreast, display) for line in by_opening], width)


def _cells(line: Sequence["RatingRow"], abreast: slice, display: Display) -> list[str]:
    row = line[0]
    limits = (display.level(row.modular_limit_level), display.level(row.protection_limit_level))
    return [display.opening(row.opening), *(_discharge(cell, display) for cell in line[abreast]), *limits]


def _discharge(row: "RatingRow", display: Display) -> str:
    number = display.discharge(row.discharge).split(" ")[0]
    return f"{number} {MARKS[row.flow_state]}{' ' if row.quality == 'good' else POORLY_KNOWN}"


def _legend(rows: Sequence["RatingRow"]) -> str:
    used = {row.flow_state for row in rows}
    words = [f"{mark} {state.replace('_', ' ')}" for state, mark in MARKS.items() if state in used]
    if any(row.quality != "good" for row in rows):
        words.append(f"{POORLY_KNOWN} discharge poorly known")
    return "; ".join(words) + "."


def write_csv(file: Path, rows: Sequence["RatingRow"], system: UnitSystem) -> None:
    """One row a value, in the units of the canal file, which the header names; empty where there is no value."""
    with file.open("w", encoding="utf-8", newline="") as sheet:
        writer = csv.writer(sheet)
        writer.writerow(_column(name, dimension, system) for name, dimension in CSV_COLUMNS.items())
        for row in rows:
            writer.writerow(_field(getattr(row, name), dimension, system) for name, dimension in CSV_COLUMNS.items())


def _column(name: str, dimension: Dimension | None, system: UnitSystem) -> str:
    return f"{name} [{FILE_UNITS[dimension][system]}]" if dimension else name


def _field(value: float | str, dimension: Dimension | None, system: UnitSystem) -> str:
    if dimension is None or isinstance(value, str):
        return str(value)
    return "" if math.isnan(value) else f"{value / file_factor(dimension, system):.4f}"

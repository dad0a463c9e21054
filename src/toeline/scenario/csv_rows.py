"""Rows of a CSV file with their line numbers: a header, then one row a line; lines that start with # are comments."""

import csv
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path

from toeline.errors import Fault
from toeline.scenario.misfits import in_quotes, nearest
from toeline.scenario.text_file import UnreadableFileError, read_text


@dataclass(frozen=True)
class Columns:
    """Names of the columns that a file must have and those that it may have."""

    required: tuple[str, ...]
    optional: tuple[str, ...] = ()

    @property
    def known(self) -> tuple[str, ...]:
        return self.required + self.optional


@dataclass
class CsvFile:
    """A CSV file as read: its text, the rows that could be told apart, and the faults found on the way."""

    path: Path
    text: str = ""
    rows: list[tuple[int, dict[str, str]]] = field(default_factory=list)
    faults: list[Fault] = field(default_factory=list)

    def report(self, line: int | None, column: str, message: str) -> None:
        """Keep one fault."""
        self.faults.append(Fault(str(self.path), line, column, message))


def read_csv(path: Path, columns: Columns) -> CsvFile:
    """Read a CSV file; empty cells are left out of the rows.

    Raises UnreadableFileError where the file is not there; every other fault is kept in the result.
    """
    file = CsvFile(path)
    try:
        file.text = read_text(path)
    except UnreadableFileError as error:
        if error.line is None:
            raise
        file.report(error.line, "", str(error))
        return file
    lines = _cells_of_lines(file)
    number, header = next(lines, (None, []))
    if _header_is_good(header, columns, lambda message: file.report(number, "", message)):
        file.rows = list(_rows(lines, header, file))
    return file


def _cells_of_lines(file: CsvFile) -> Iterator[tuple[int, list[str]]]:
    for number, line in enumerate(file.text.split("\n"), start=1):
        if not line.strip() or line.lstrip().startswith("#"):
            continue
        try:
            cells = next(csv.reader([line], strict=True, skipinitialspace=True))
        except csv.Error as error:
            file.report(number, "", f"not a row of comma-separated values: {error}")
            continue
        yield number, [cell.strip() for cell in cells]


def _header_is_good(header: list[str], columns: Columns, report: Callable[[str], None]) -> bool:
    wanted = f"columns, separated by commas: {', '.join(columns.known)}"
    missing = [name for name in columns.required if name not in header]
    unknown = [name for name in header if name not in columns.known]
    repeated = {name for name in header if header.count(name) > 1}
    if missing:
        report(f"the header lacks {in_quotes(missing)}; {wanted}")
    for name in unknown if not missing else ():
        report(f'unknown column "{name}"; {nearest(name, columns.known)}')
    if repeated and not missing:
        report(f"{in_quotes(sorted(repeated))} stands twice in the header")
    return not (missing or unknown or repeated)


def _rows(
    lines: Iterator[tuple[int, list[str]]], header: list[str], file: CsvFile
) -> Iterator[tuple[int, dict[str, str]]]:
    for number, cells in lines:
        if len(cells) != len(header):
            file.report(number, "", f"found {len(cells)} cells; the header has {len(header)}: {', '.join(header)}")
            continue
        yield number, {name: cell for name, cell in zip(header, cells, strict=True) if cell}


def number_or_text(cell: str) -> float | str:
    """Give the number in a cell that holds one alone, else its text, which may be a number with a unit."""
    try:
        return float(cell)
    except ValueError:
        return cell

"""Runs side by side as a table: one column a run, rows in groups, as many columns abreast as find room."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from toeline.report.layout import INDENT, fits, paragraph, table

Row = tuple[str, tuple[str, ...]]
"""A label and one cell for every run."""


@dataclass(frozen=True)
class Group:
    """Rows of one subject, below its title."""

    title: str
    rows: tuple[Row, ...]


def side_by_side(groups: Sequence[Group], columns: Sequence[str], width: int, *, keep: int = 0) -> Iterator[str]:
    """One table, or several that each begin with the first `keep` columns; on a narrow page every row as a block."""
    rows = [row for group in groups for row in group.rows]
    counts = range(len(columns), keep, -1)
    most = next((count for count in counts if fits(*_cells(rows, columns, range(count)), width)), 0)
    if not most:
        yield from _blocks(groups, columns, width)
        return
    for start in range(keep, len(columns), most - keep):
        abreast = [*range(keep), *range(start, min(start + most - keep, len(columns)))]
        yield from _titled(groups, table(*_cells(rows, columns, abreast), width).splitlines(), width)


def _cells(rows: Sequence[Row], columns: Sequence[str], places: Sequence[int]) -> tuple[list[str], list[list[str]]]:
    """Header and rows of a table of some of the columns, cells to the right; rows are indented below their title."""
    sizes = {place: max(len(line[place]) for line in (columns, *(cells for _, cells in rows))) for place in places}
    header = ["", *(columns[place].rjust(size) for place, size in sizes.items())]
    return header, [
        [f"{INDENT}{label}", *(cells[place].rjust(size) for place, size in sizes.items())] for label, cells in rows
    ]


def _titled(groups: Sequence[Group], lines: Sequence[str], width: int) -> Iterator[str]:
    """The lines of a table with the title of each group above its rows."""
    yield lines[0]
    below = iter(lines[1:])
    for group in groups:
        yield paragraph(group.title, width)
        yield from (next(below) for _ in group.rows)


def _blocks(groups: Sequence[Group], columns: Sequence[str], width: int) -> Iterator[str]:
    for group in groups:
        for label, cells in group.rows:
            yield paragraph(f"{group.title}, {label}", width, hanging=INDENT * 2)
            for name, cell in zip(columns, cells, strict=True):
                yield paragraph(f"{name}: {cell.strip()}", width, indent=INDENT * 2, hanging=INDENT * 3)

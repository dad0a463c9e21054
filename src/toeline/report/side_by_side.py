"""Runs side by side as a table: one column a run, rows in groups, as many columns abreast as find room."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from toeline.report.layout import INDENT, fits, paragraph, table


@dataclass(frozen=True)
class Group:
    """Rows of one subject: each a label and one cell for every run. A row without a label is that of the title."""

    title: str
    rows: tuple[tuple[str, tuple[str, ...]], ...]


def side_by_side(groups: Sequence[Group], columns: Sequence[str], width: int, *, keep: int = 0) -> Iterator[str]:
    """One table, or several that each begin with the first `keep` columns; on a narrow page every row as a block."""
    most = next(
        (count for count in range(len(columns), keep, -1) if fits(*_cells(groups, columns, range(count)), width)), 0
    )
    if not most:
        yield from _blocks(groups, columns, width)
        return
    kept = list(range(keep))
    for start in range(keep, len(columns), most - keep):
        abreast = [*kept, *range(start, min(start + most - keep, len(columns)))]
        yield table(*_cells(groups, columns, abreast), width)


def _cells(groups: Sequence[Group], columns: Sequence[str], places: Sequence[int]) -> tuple[list[str], list[list[str]]]:
    rows = []
    for group in groups:
        if group.rows and group.rows[0][0]:
            rows.append([group.title, *("" for _ in places)])
        for label, cells in group.rows:
            rows.append([f"{INDENT}{label}" if label else group.title, *(cells[place] for place in places)])
    return ["", *(columns[place] for place in places)], rows


def _blocks(groups: Sequence[Group], columns: Sequence[str], width: int) -> Iterator[str]:
    for group in groups:
        for label, cells in group.rows:
            yield paragraph(f"{group.title}, {label}" if label else group.title, width, hanging=INDENT * 2)
            for name, cell in zip(columns, cells, strict=True):
                yield paragraph(f"{name}: {cell.strip()}", width, indent=INDENT * 2, hanging=INDENT * 3)

"""Plain text for a page of a given width: headings, paragraphs and tables."""

import textwrap
from collections.abc import Sequence

INDENT = "  "
GAP = "  "


def heading(text: str) -> str:
    return text.upper()


def paragraph(text: str, width: int, *, indent: str = INDENT, hanging: str | None = None) -> str:
    """The text filled to the width; lines after the first start with `hanging` (the indent, unless given)."""
    return textwrap.fill(
        text,
        max(width, 20),
        initial_indent=indent,
        subsequent_indent=indent if hanging is None else hanging,
        break_on_hyphens=False,
    )


def table(header: Sequence[str], rows: Sequence[Sequence[str]], width: int) -> str:
    """Columns side by side, the first to the left and the others to the right.

    Where that is wider than the page, every row becomes a block of its own, one line a column.
    """
    widths = [max(len(row[column]) for row in (header, *rows)) for column in range(len(header))]
    if len(INDENT) + sum(widths) + len(GAP) * (len(widths) - 1) > width:
        return "\n".join(_block(header, row, width) for row in rows)
    return "\n".join(_line(row, widths) for row in (header, *rows))


def _line(cells: Sequence[str], widths: Sequence[int]) -> str:
    first, *others = (
        cell.rjust(size) if column else cell.ljust(size)
        for column, (cell, size) in enumerate(zip(cells, widths, strict=True))
    )
    return (INDENT + GAP.join([first, *others])).rstrip()


def _block(header: Sequence[str], row: Sequence[str], width: int) -> str:
    first, *others = row
    lines = [paragraph(first, width)]
    for name, cell in zip(header[1:], others, strict=True):
        lines.append(paragraph(f"{name}: {cell}", width, indent=INDENT * 2, hanging=INDENT * 3))
    return "\n".join(lines)

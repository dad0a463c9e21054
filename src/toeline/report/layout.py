"""Plain text for a page of a given width: headings, paragraphs and tables."""

import textwrap
from collections.abc import Sequence

INDENT = "  "
GAP = "  "
NARROWEST = 20


def heading(text: str) -> str:
    return text.upper()


def counted(count: int, noun: str) -> str:
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def paragraph(text: str, width: int, *, indent: str = INDENT, hanging: str | None = None) -> str:
    """The text filled to the width; lines after the first start with `hanging` (the indent, unless given)."""
    return textwrap.fill(
        text,
        max(width, NARROWEST),
        initial_indent=indent,
        subsequent_indent=indent if hanging is None else hanging,
        break_on_hyphens=False,
    )


def table(header: Sequence[str], rows: Sequence[Sequence[str]], width: int) -> str:
    """Columns side by side, words to the left and numbers to the right.

    Where that is wider than the page, every row becomes a block of its own, one line a column.
    """
    lines = _side_by_side(header, rows)
    if len(lines[0]) > width:
        return "\n".join(_block(header, row, width) for row in rows)
    return "\n".join(line.rstrip() for line in lines)


def fits(header: Sequence[str], rows: Sequence[Sequence[str]], width: int) -> bool:
    """Whether the columns of a table find room side by side."""
    return len(_side_by_side(header, rows)[0]) <= width


def _side_by_side(header: Sequence[str], rows: Sequence[Sequence[str]]) -> list[str]:
    """Header and rows as lines of one width."""
    columns = [_aligned([row[place] for row in (header, *rows)]) for place in range(len(header))]
    return [INDENT + GAP.join(cells) for cells in zip(*columns, strict=True)]


def _aligned(column: Sequence[str]) -> list[str]:
    """The cells of a column under its header, all of one width."""
    size = max(len(cell) for cell in column)
    is_number = all(cell[:1] in "+-<0123456789" for cell in column[1:])
    return [cell.rjust(size) if is_number else cell.ljust(size) for cell in column]


def _block(header: Sequence[str], row: Sequence[str], width: int) -> str:
    first, *others = row
    lines = [paragraph(first, width)]
    for name, cell in zip(header[1:], others, strict=True):
        lines.append(paragraph(f"{name}: {cell}", width, indent=INDENT * 2, hanging=INDENT * 3))
    return "\n".join(lines)

"""A table of the page, in words."""

from dataclasses import dataclass

MOST_PRINTED = 30
"""Rows of a table that is printed though it is folded on the screen (choice): less than a sheet."""


@dataclass(frozen=True)
class Table:
    """A table with its caption; the first `words` columns are words, the others numbers."""

    caption: str
    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    words: int = 1
    note: str = ""

    @property
    def is_short(self) -> bool:
        """Whether it is printed though it is folded."""
        return len(self.rows) <= MOST_PRINTED

"""A table of the page, in words."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Table:
    """A table with its caption; the first `words` columns are words, the others numbers."""

    caption: str
    header: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    words: int = 1
    note: str = ""

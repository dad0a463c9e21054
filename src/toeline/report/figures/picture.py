"""A finished figure with its name and the numbers behind it."""

from collections.abc import Sequence
from dataclasses import dataclass

from matplotlib.figure import Figure

from toeline.report.number_table import NumberTable


@dataclass(frozen=True)
class Picture:
    """One page of a figure. `name` is fit for a file name; `tables` are by the ending of their names, "" for the first.

    `words` tell in a sentence or two what there is to see, for those who cannot.
    """

    name: str
    figure: Figure
    tables: dict[str, NumberTable]
    words: str

    @property
    def size(self) -> int:
        """How many numbers and words its tables hold."""
        return sum(len(column.cells) for table in self.tables.values() for column in table.columns)


def pages(places: Sequence[int], most: int) -> list[list[int]]:
    """Places spread over as few pages as hold at most so many each, as evenly as that goes; one empty page for none."""
    return spread(places, page_count(len(places), most))


def page_count(number: int, most: int) -> int:
    """How many pages hold a number of things, at most so many each; at least one."""
    return max(1, -(-number // most))


def spread(places: Sequence[int], count: int) -> list[list[int]]:
    """Places spread in order over so many pages, as evenly as that goes."""
    size, larger = divmod(len(places), count)
    ends = [(page + 1) * size + min(page + 1, larger) for page in range(count)]
    return [list(places[start:end]) for start, end in zip([0, *ends[:-1]], ends, strict=True)]


def page_name(name: str, page: int, count: int) -> str:
    """The name of a page: that of its figure, with a number where there are several."""
    return name if count == 1 else f"{name}.{page + 1}"

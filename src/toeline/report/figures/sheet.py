"""The sheet on which a figure is drawn: title, what run it is of, room for panels, legend, and the caution.

All measures are inches on paper, so that text keeps its size and nothing is cut, however many panels there are.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import matplotlib
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator

from toeline.report.run_identity import RunIdentity
from toeline.report.style import FAINT_INK, INK, PAPER, RULE
from toeline.results.provenance import COMPLETE

WIDTH = 10.0
LEFT, RIGHT = 0.85, 0.95
HEAD, FOOT = 0.95, 0.42
LEGEND_ROW = 0.22
CHARACTER = 0.062
"""Width of a character at the size of the legend, on the safe side [inch]."""
LEGEND_KEY = 0.52
TITLE_SIZE, TEXT_SIZE, SMALL_SIZE = 13.0, 9.0, 7.5

NO_GATES = "The canal has no gates."
CAUTION = "Planning aid. No state shown here is safe to enter; water below gates drowns people."

in_house_style = matplotlib.rc_context(
    {
        "font.family": ["DejaVu Sans"],
        "font.size": TEXT_SIZE,
        "axes.labelsize": TEXT_SIZE,
        "axes.edgecolor": FAINT_INK,
        "axes.labelcolor": INK,
        "axes.linewidth": 0.6,
        "axes.grid": True,
        "axes.axisbelow": True,
        "axes.unicode_minus": True,
        "axes.formatter.useoffset": False,
        "grid.color": RULE,
        "grid.linewidth": 0.5,
        "text.color": INK,
        "xtick.color": INK,
        "ytick.color": INK,
        "xtick.labelsize": SMALL_SIZE,
        "ytick.labelsize": SMALL_SIZE,
        "hatch.linewidth": 0.55,
        "hatch.color": INK,
        "lines.solid_capstyle": "butt",
        "figure.facecolor": PAPER,
        "savefig.facecolor": PAPER,
    }
)
"""Decorates what draws or saves a figure; the settings of the caller come back afterwards."""


@dataclass(frozen=True)
class Panel:
    """Where a panel stands, in inches from the left and the top of the room for panels, or in shares of its width."""

    top: float
    height: float
    left: float = 0.0
    width: float = 1.0


@dataclass(frozen=True)
class About:
    """What a figure is of: the line below its title, the small line below that, and the version of the program."""

    line: str
    small_line: str
    version: str


def about_run(run: RunIdentity, note: str = "") -> About:
    """What a figure of a run says about it, and about itself."""
    outcome = "" if run.outcome == COMPLETE else f"; {run.outcome}"
    return About(f"{run.canal}: {run.day}; {run.plan}", f"{run.period}, {run.zone}{outcome}{note}", run.version)


class Sheet:
    """A page with one title and panels below it."""

    def __init__(self, title: str, about: About, room: float, keys: Sequence[str], *, right: float = RIGHT):
        """`room` is the height for panels [inch]; `keys` are the words of the legend, for which room is kept."""
        self._rows = legend_rows(keys)
        self._room, self._right = room, right
        self.height = HEAD + room + self._legend_height + FOOT
        self.figure = Figure(figsize=(WIDTH, self.height))
        self._title(title, about)

    @property
    def _legend_height(self) -> float:
        return 0.42 + LEGEND_ROW * len(self._rows)

    def _title(self, title: str, about: About) -> None:
        write, left = self.figure.text, 0.3 / WIDTH
        write(left, self._up(0.32), title, fontsize=TITLE_SIZE, weight="bold", va="center")
        write(left, self._up(0.55), shortened(about.line, 115), fontsize=TEXT_SIZE, va="center")
        write(left, self._up(0.73), shortened(about.small_line, 150), fontsize=SMALL_SIZE, color=FAINT_INK, va="center")
        bottom = 0.2 / self.height
        write(left, bottom, CAUTION, fontsize=SMALL_SIZE, color=INK, va="center")
        write(1 - left, bottom, about.version, fontsize=SMALL_SIZE, color=FAINT_INK, va="center", ha="right")

    def _up(self, from_top: float) -> float:
        return 1.0 - from_top / self.height

    def axes(self, panel: Panel, *, share_x: Axes | None = None) -> Axes:
        """A new panel."""
        across = WIDTH - LEFT - self._right
        left, width = LEFT + panel.left * across, panel.width * across
        bottom = self.height - HEAD - panel.top - panel.height
        box = (left / WIDTH, bottom / self.height, width / WIDTH, panel.height / self.height)
        axes = self.figure.add_axes(box, sharex=share_x)
        axes.spines[["top", "right"]].set_visible(False)
        axes.yaxis.set_major_locator(MaxNLocator(nbins=max(2, int(panel.height / 0.28)), steps=[1, 2, 2.5, 5, 10]))
        return axes

    def side_title(self, text: str) -> None:
        """What all vertical axes of the sheet measure, at its left edge."""
        middle = self.height - HEAD - self._room / 2
        place: dict[str, Any] = {"rotation": 90, "ha": "center", "va": "center"}
        self.figure.text(0.3 / WIDTH, middle / self.height, text, fontsize=TEXT_SIZE, **place)

    def say(self, text: str) -> None:
        """Words in the middle of the room for panels, where there is nothing to draw."""
        middle = self.height - HEAD - self._room / 2
        self.figure.text(0.5, middle / self.height, text, color=FAINT_INK, ha="center", va="center")

    def heading(self, top: float, text: str) -> None:
        """A line above a group of panels, so far below the top of the room for panels [inch]."""
        self.figure.text(LEFT / WIDTH, self._up(HEAD + top), text, fontsize=TEXT_SIZE, weight="bold", va="bottom")

    def legend(self, handles: Sequence[Artist]) -> None:
        """The legend of the whole sheet, below its panels, in the rows for which room was kept."""
        waiting = list(handles)
        for row, size in enumerate(self._rows):
            top = self.height - HEAD - self._room - 0.42 - LEGEND_ROW * row
            self._legend_row(waiting[:size], top)
            del waiting[:size]

    def _legend_row(self, handles: list[Artist], top: float) -> None:
        self.figure.legend(
            handles=handles, loc="upper left", bbox_to_anchor=(0.3 / WIDTH, top / self.height), ncols=len(handles),
            frameon=False, fontsize=SMALL_SIZE, borderaxespad=0.0, borderpad=0.0, handlelength=2.4, columnspacing=1.6,
            handletextpad=0.6,
        )  # fmt: skip


def legend_rows(keys: Sequence[str]) -> list[int]:
    """How many keys of a legend stand in each row, filled in order."""
    rows, left = [0], WIDTH - 0.6
    for key in keys:
        width = LEGEND_KEY + CHARACTER * len(key)
        if rows[-1] and width > left:
            rows.append(0)
            left = WIDTH - 0.6
        rows[-1] += 1
        left -= width
    return rows if rows[-1] else []


def shortened(text: str, most: int) -> str:
    """A text of at most so many characters, its end left out where it is longer."""
    return text if len(text) <= most else text[: most - 1].rstrip() + "…"

"""The settings that a rule declares: what may be written for each key of its entry in a day file."""

import math
from dataclasses import dataclass
from enum import Enum
from typing import Any, Literal, get_args

from toeline.units import Dimension

Takes = Literal[
    "number", "series", "duration", "gate", "pool", "word", "times of day", "hours", "lead times"
]  # fmt: skip


class Absent(Enum):
    """The default of a setting that must be given."""

    required = "required"


@dataclass(frozen=True)
class Setting:
    """One key: what it takes, within bounds in SI, what it is when left out, and what it means, as one sentence.

    A rule gets a number or a duration in SI (seconds), a series as an object whose `at(ms)` gives the value at a time
    from the start of the period, and None for a setting that is left out and has no default.
    """

    takes: Takes
    description: str
    dimension: Dimension | None = None
    above: float = -math.inf
    least: float = -math.inf
    most: float = math.inf
    words: tuple[str, ...] = ()
    default: Any = Absent.required

    def __post_init__(self) -> None:
        """ValueError where nothing could be written for the key, or where its default is no such value."""
        if self.takes not in get_args(Takes):
            raise ValueError(f"found a setting that takes {self.takes!r}; allowed: {', '.join(get_args(Takes))}")
        if self.dimension is not None and self.dimension not in get_args(Dimension):
            raise ValueError(f"found the dimension {self.dimension!r}; allowed: {', '.join(get_args(Dimension))}")
        if self.takes == "word" and not (self.words and all(isinstance(word, str) for word in self.words)):
            raise ValueError(f"found the words {self.words!r}; allowed: one or more texts")
        if math.isnan(self.above) or not self.least <= self.most:
            raise ValueError(f"found bounds from {self.least} to {self.most}; allowed: two that leave room")
        if self.takes in ("number", "duration") and self.default is not Absent.required and not self._fits_default:
            raise ValueError(f"found the default {self.default!r}; allowed: a finite number in SI, or None")

    @property
    def _fits_default(self) -> bool:
        is_number = isinstance(self.default, (int, float)) and not isinstance(self.default, bool)
        return self.default is None or (is_number and math.isfinite(self.default))

    @property
    def is_required(self) -> bool:
        return self.default is Absent.required


def number(
    dimension: Dimension | None, description: str, *, above: float = -math.inf, least: float = -math.inf,
    most: float, default: Any = Absent.required,
) -> Setting:  # fmt: skip
    """A quantity of a dimension, or a plain number where that is None."""
    return Setting("number", description, dimension, above, least, most, default=default)


def series(
    dimension: Dimension, description: str, *, least: float, most: float, default: Any = Absent.required
) -> Setting:
    """A quantity that may change during the day."""
    return Setting("series", description, dimension, least=least, most=most, default=default)


def duration(description: str, *, least: float, most: float, default: Any = Absent.required) -> Setting:
    """A duration, with bounds and default in seconds."""
    return Setting("duration", description, least=least, most=most, default=default)


def word(words: tuple[str, ...], description: str, default: Any = Absent.required) -> Setting:
    """One of some words."""
    return Setting("word", description, words=words, default=default)


def place(kind: Literal["gate", "pool"], description: str) -> Setting:
    """The name of a gate or a pool of the canal."""
    return Setting(kind, description)


EVERY_KEY = "every"
LEAST_EVERY = 1.0
"""Shortest time between decisions [s] that a setting named `every` may give, whatever its rule allows: a unit mistyped
would make millions of decisions."""

GATE = place("gate", "Name of the gate that the rule moves.")

EVERY = duration(
    "Time between decisions; they fall on whole multiples of it from midnight.", least=10.0, most=86_400.0,
    default=300.0,
)  # fmt: skip

HOURS = Setting(
    "hours",
    'Working hours of every day, such as ["06:00", "18:00"]: no decision falls outside them. They may span midnight. '
    "Left out: day and night.",
    default=None,
)

VISITS = Setting("times of day", 'Times of the visits of every day, such as ["07:00", "12:30", "18:00"].', default=None)

FEEDFORWARD = Setting(
    "lead times",
    "Whether known changes of deliveries further down are passed on in advance, and by which lead times of the pools: "
    '"wave", "volume", or a table of durations by pool, where pools that are not named have that of "volume". The lead '
    "times of all pools down to the offtake add up. Left out: no.",
    default=None,
)

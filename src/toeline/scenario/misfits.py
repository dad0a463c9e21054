"""What is wrong with a value, before it is known in which line it stands."""

import difflib
import json
import math
from collections.abc import Iterable, Iterator
from datetime import date, datetime, time
from typing import Any, NamedTuple

from toeline.errors import Fault
from toeline.scenario.locate import KeyPath
from toeline.units import UnitSystem, quantity_text

LONGEST_SHOWN = 60
"""Characters of a value that a message repeats."""

MOST_TIMES = 10_000_000
"""How often a thing may come in a period (choice): every 4 s in 400 days; more is a unit mistyped."""

MOST_LISTED = 100
"""Names that a message lists."""


class Misfit(NamedTuple):
    """One thing wrong, at a key path counted from the value under test."""

    path: KeyPath
    message: str


class MisfitsError(ValueError):
    """Several things wrong inside one value."""

    def __init__(self, items: Iterable[Misfit]):
        self.items = tuple(items)
        super().__init__("; ".join(item.message for item in self.items))


class CsvFaultsError(ValueError):
    """Faults in a CSV file that the value names, each with its own line."""

    def __init__(self, faults: Iterable[Fault]):
        self.faults = tuple(faults)
        super().__init__("; ".join(str(fault) for fault in self.faults))


def too_often(path: KeyPath, every_ms: float, length_ms: int) -> Iterator[Misfit]:
    """Say that a time between two things of a kind makes too many of them in the period."""
    if length_ms <= MOST_TIMES * every_ms:
        return
    found, length, least = (
        quantity_text(ms / 1000.0, "duration", UnitSystem.metric)
        for ms in (every_ms, length_ms, math.ceil(length_ms / MOST_TIMES / 1000.0) * 1000)
    )
    times = f"{length_ms // every_ms:,.0f} times in the period of {length}"
    yield Misfit(path, f"found {found}, {times}; allowed: up to {MOST_TIMES:,} times, here {least} or longer")


def length_outside(path: KeyPath, found: float, allowed: str, limit: float, system: UnitSystem) -> Misfit:
    """Say that a length or level [m] lies outside a limit [m], both in the units of the file."""
    found_text, limit_text = (quantity_text(value, "length", system) for value in (found, limit))
    return Misfit(path, f"found {found_text}; allowed: {allowed}, {limit_text}")


def shown(value: Any) -> str:
    """Write a value found in a file as the file would have it, shortened where it is long."""
    match value:
        case bool():
            return str(value).lower()
        case str():
            return json.dumps(_shortened(value), ensure_ascii=False)
        case int() if abs(value) >= 10**20:
            return "a whole number of more than 20 digits"
        case datetime() | date() | time():
            return value.isoformat()
        case list():
            return f"an array of {len(value)}"
        case dict():
            return "a table"
    return str(value)


def _shortened(text: str) -> str:
    return text if len(text) <= LONGEST_SHOWN else text[: LONGEST_SHOWN - 3] + "..."


def nearest(word: str, known: Iterable[str]) -> str:
    """Point from a word that is not known to the one that was probably meant, else name what is known."""
    by_lower_case = {name.lower(): name for name in known}
    close = difflib.get_close_matches(word.lower(), by_lower_case, n=1)
    if close:
        return f'did you mean "{by_lower_case[close[0]]}"?'
    if not by_lower_case:
        return "there is none here"
    if len(by_lower_case) > MOST_LISTED:
        return f"none of {len(by_lower_case)} known ones is like it"
    return "known: " + in_quotes(by_lower_case.values())


def in_quotes(words: Iterable[str]) -> str:
    """List words in quotes."""
    return ", ".join(f'"{word}"' for word in words)

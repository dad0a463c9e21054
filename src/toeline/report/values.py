"""Values of any unit as people read them."""

import math
from collections.abc import Callable

from toeline.report.clock import duration_text
from toeline.units import Display


def value_text(value: float, unit: str, display: Display) -> str:
    """A value in SI with its unit for people; counts and shares have none; "-" for what is not a number."""
    if math.isnan(value):
        return "-"
    return _WRITERS[unit](display, value)


_WRITERS: dict[str, Callable[[Display, float], str]] = {
    "m": Display.length,
    "m s-1": Display.velocity,
    "m3 s-1": Display.discharge,
    "m3": Display.volume,
    "s": lambda _, seconds: duration_text(seconds),
    "h": lambda _, hours: duration_text(hours * 3600.0) if hours else "-",
    "%": lambda _, percent: f"{percent:.0f} %",
    "count": lambda _, number: f"{number:.0f}",
    "1": lambda _, ratio: f"{ratio:.3f}",
}
"""How the values of a unit are written; those of Display need no other word."""

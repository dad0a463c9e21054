"""Values of any unit of a finding, written for people."""

import math

from toeline.report.clock import duration_text
from toeline.units import Display


def quantity_words(value: float, unit: str, display: Display) -> str:
    """Write a value in SI with the unit in which people are shown it; "-" where there is none."""
    if math.isnan(value):
        return "-"
    match unit:
        case "m":
            return display.length(value)
        case "m s-1":
            return display.velocity(value)
        case "m3 s-1":
            return display.discharge(value)
        case "m3":
            return display.volume(value)
        case "h":
            return duration_text(value * 3600)
        case "s":
            return duration_text(value)
    return _number(value) if unit == "1" else f"{_number(value)} {unit}"


def _number(value: float) -> str:
    """A count as it is, any other number to four digits."""
    value = round(value, 6) + 0.0  # + 0.0 turns -0.0 into 0.0
    return f"{value:.0f}" if value.is_integer() or abs(value) >= 1000.0 else f"{value:.4g}"

"""What an order asks for, in words."""

import math
import re

from toeline.report.clock import duration_text
from toeline.units import Display, UnitSystem

_MINUTES = re.compile(r"\b(\d+) min\b")
_UNIT = re.compile(r"(?<=\d )(?:M|FT)\b")
_LENGTH = re.compile(r"(\d+\.\d{3})(?: m\b)?")


def order_words(kind: str, value: float, display: Display) -> str:
    """An order in words; `kind` is opening [m], by [m] or discharge [m³/s]."""
    if kind == "discharge":
        return f"pass {display.discharge(value)}"
    if kind == "opening":
        return f"open to {display.opening(value)}" if value > 0.0 else "close"
    return f"{'open' if value > 0.0 else 'close'} by {display.opening(abs(value))}"


def move_words(before: float, after: float, turn: float, scale_mark: float, display: Display) -> str:
    """What to do at the gate to bring the opening from `before` to `after` [m], in words.

    In turns of the handwheel of `turn` [m], in marks of the gate's scale `scale_mark` [m] apart, or in length where
    both are NaN.
    """
    amounts = [
        counted_share(abs(after - before) / size, noun)
        for size, noun in ((turn, "turn"), (scale_mark, "mark"))
        if not math.isnan(size)
    ]
    if not amounts:
        amounts = [f"by {display.setting(abs(after - before))}"]
    verb = "close fully," if after == 0.0 else "open" if after > before else "close"
    to_mark = "" if math.isnan(scale_mark) or after == 0.0 else f" to mark {_number(after / scale_mark)}"
    return f"{verb} {' = '.join(amounts)}{to_mark}"


def loud(move: str) -> str:
    """A move in capitals, all but the unit of its length."""
    return _UNIT.sub(lambda unit: unit[0].lower(), move.upper())


def counted_share(share: float, noun: str) -> str:
    """A number of turns or marks to a tenth: "1 turn", "12.4 turns"."""
    number = _number(share)
    return f"{number} {noun}" if number == "1" else f"{number} {noun}s"


def _number(share: float) -> str:
    """To a tenth; whole where it is."""
    return f"{share:.1f}".removesuffix(".0")


def reason_words(reason: str, display: Display) -> str:
    """Why an order was not carried out as given, with times and lengths as people read them.

    A run tells them in whole minutes and in metres; it writes lengths to three decimals and nothing else so.
    """
    told = _MINUTES.sub(lambda minutes: duration_text(60.0 * int(minutes[1])), reason)
    if display.system is UnitSystem.metric:
        return told
    return _LENGTH.sub(lambda length: display.setting(float(length[1])), told)

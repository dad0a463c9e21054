"""Unit spellings and their exact factors to SI, and values written for people.

Exact by definition: 1 ft = 0.3048 m and 1 in = 0.0254 m (international yard and pound agreement, 1959).
An acre is 43560 square feet, an acre-foot 43560 cubic feet, both of the international foot.
"""

import math
import re
from dataclasses import dataclass
from enum import StrEnum
from typing import Literal


class UnitSystem(StrEnum):
    """The units of plain numbers in an input file, and of output for people."""

    metric = "metric"
    us_customary = "us customary"


Dimension = Literal[
    "length",
    "area",
    "volume",
    "discharge",
    "discharge per length",
    "velocity",
    "speed",
    "duration",
    "rate of loss",
    "weir coefficient",
]

_VELOCITIES = {
    "m/s": 1.0,
    "cm/s": 0.01,
    "mm/s": 0.001,
    "m/min": 1.0 / 60.0,
    "cm/min": 0.01 / 60.0,
    "mm/min": 0.001 / 60.0,
    "ft/s": 0.3048,
    "ft/min": 0.3048 / 60.0,
    "in/min": 0.0254 / 60.0,
}

SPELLINGS: dict[Dimension, dict[str, float]] = {
    "length": {"m": 1.0, "km": 1000.0, "cm": 0.01, "mm": 0.001, "ft": 0.3048, "in": 0.0254, "mi": 1609.344},
    "area": {"m2": 1.0, "ha": 10_000.0, "km2": 1e6, "ft2": 0.09290304, "acre": 4046.8564224},
    "volume": {"m3": 1.0, "L": 0.001, "ML": 1000.0, "ft3": 0.028316846592, "acre-ft": 1233.48183754752},
    "discharge": {
        "m3/s": 1.0,
        "L/s": 0.001,
        "m3/h": 1.0 / 3600.0,
        "m3/day": 1.0 / 86_400.0,
        "ML/day": 1000.0 / 86_400.0,
        "ft3/s": 0.028316846592,
        "cfs": 0.028316846592,
        "acre-ft/day": 1233.48183754752 / 86_400.0,
    },
    "discharge per length": {"m2/s": 1.0, "ft2/s": 0.09290304},
    "velocity": _VELOCITIES,
    "speed": _VELOCITIES,
    "duration": {"s": 1.0, "min": 60.0, "h": 3600.0, "d": 86_400.0},
    "rate of loss": {
        "mm/day": 0.001 / 86_400.0,
        "mm/h": 0.001 / 3600.0,
        "m/day": 1.0 / 86_400.0,
        "in/day": 0.0254 / 86_400.0,
        "in/h": 0.0254 / 3600.0,
        "ft/day": 0.3048 / 86_400.0,
    },
    "weir coefficient": {"m^0.5/s": 1.0, "ft^0.5/s": math.sqrt(0.3048)},
}
"""Factor to SI of every spelling: value in SI = value as written × factor."""

FILE_UNITS: dict[Dimension, dict[UnitSystem, str]] = {
    "length": {UnitSystem.metric: "m", UnitSystem.us_customary: "ft"},
    "area": {UnitSystem.metric: "m2", UnitSystem.us_customary: "ft2"},
    "volume": {UnitSystem.metric: "m3", UnitSystem.us_customary: "acre-ft"},
    "discharge": {UnitSystem.metric: "m3/s", UnitSystem.us_customary: "ft3/s"},
    "discharge per length": {UnitSystem.metric: "m2/s", UnitSystem.us_customary: "ft2/s"},
    "velocity": {UnitSystem.metric: "m/s", UnitSystem.us_customary: "ft/s"},
    "speed": {UnitSystem.metric: "m/min", UnitSystem.us_customary: "ft/min"},
    "rate of loss": {UnitSystem.metric: "mm/day", UnitSystem.us_customary: "in/day"},
    "weir coefficient": {UnitSystem.metric: "m^0.5/s", UnitSystem.us_customary: "ft^0.5/s"},
}
"""The unit of a plain number, by system. A duration has none: it always carries its unit."""

_NUMBER_AND_UNIT = re.compile(r"\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(\S+)\s*")
_SUPERSCRIPTS = str.maketrans("²³", "23")


def parse_quantity(value: float | str, dimension: Dimension, system: UnitSystem) -> float:
    """Give a quantity in SI: a plain number is in the unit of the file, a text carries its own, as in "0.15 m/min".

    Raises ValueError with one sentence that names the allowed units.
    """
    if isinstance(value, str):
        number = _number_from_text(value, dimension)
    else:
        number = _number_in_file_unit(value, dimension, system)
    if number is None:
        found = f'"{value}"' if isinstance(value, str) else str(value)
        raise ValueError(f"found {found}; allowed: {allowed_units(dimension, system)}")
    return number


def _number_from_text(text: str, dimension: Dimension) -> float | None:
    match = _NUMBER_AND_UNIT.fullmatch(text.translate(_SUPERSCRIPTS))
    if match is None or match[2] not in SPELLINGS[dimension]:
        return None
    return _finite(float(match[1]) * SPELLINGS[dimension][match[2]])


def _number_in_file_unit(number: float, dimension: Dimension, system: UnitSystem) -> float | None:
    if isinstance(number, bool) or dimension not in FILE_UNITS:
        return None
    try:
        return _finite(float(number) * file_factor(dimension, system))
    except OverflowError:
        return None


def _finite(number: float) -> float | None:
    return number if math.isfinite(number) else None


def file_factor(dimension: Dimension, system: UnitSystem) -> float:
    """Give the factor to SI of a plain number in a file of this system."""
    return SPELLINGS[dimension][FILE_UNITS[dimension][system]]


def allowed_units(dimension: Dimension, system: UnitSystem) -> str:
    """Say how a quantity of this dimension may be written."""
    spellings = ", ".join(SPELLINGS[dimension])
    if dimension not in FILE_UNITS:
        return f'text such as "15 min" with one of the units {spellings}'
    unit = FILE_UNITS[dimension][system]
    return f'a finite number in {unit}, or text such as "2.5 {unit}" with one of the units {spellings}'


def quantity_text(value: float, dimension: Dimension, system: UnitSystem) -> str:
    """Write an SI value as it would be typed, to 4 decimals, with the unit of the file."""
    if dimension not in FILE_UNITS:
        return _duration_text(value)
    number = value / file_factor(dimension, system)
    return f"{round(number, 4) or number:.10g} {FILE_UNITS[dimension][system]}"


def _duration_text(seconds: float) -> str:
    """Write a duration in the larger of h and min that leaves at most two decimals, else in seconds."""
    for unit in ("h", "min"):
        number = seconds / SPELLINGS["duration"][unit]
        if abs(number) >= 1.0 and number == round(number, 2):
            return f"{number:g} {unit}"
    return f"{seconds:g} s"


@dataclass(frozen=True)
class Display:
    """Writes SI values with their unit for people: metric to 1 cm and 1 L/s, US to 0.01 ft and 0.1 ft3/s.

    A value that is not a number is written "-".
    """

    system: UnitSystem

    def level(self, value: float) -> str:
        """Write a level above the datum [m]."""
        return self._text(value, "length", 2)

    def level_difference(self, value: float) -> str:
        """Write a difference of two levels [m], finer than a gauge is read: to 0.1 cm or 0.01 ft."""
        if self.system is UnitSystem.metric:
            return "-" if math.isnan(value) else f"{round(value * 100.0, 1) + 0.0:.1f} cm"
        return self._text(value, "length", 2)

    def depth(self, value: float) -> str:
        """Write a depth above the bed [m]."""
        return self._text(value, "length", 2)

    def opening(self, value: float) -> str:
        """Write an opening of a gate [m]: to 1 cm, where need be to 1 mm, or 0.01 ft."""
        is_fine = self.system is UnitSystem.metric and round(value, 3) != round(value, 2)
        return self._text(value, "length", 3 if is_fine else 2)

    def setting(self, value: float) -> str:
        """Write an opening that is to be set [m]: to 1 mm or 0.01 ft."""
        return self._text(value, "length", 3 if self.system is UnitSystem.metric else 2)

    def length(self, value: float) -> str:
        """Write a length or a distance [m]."""
        return self._text(value, "length", 2)

    def amount(self, value: float) -> str:
        """Write by how much an edge is passed [m]; one that rounds to nothing is still there."""
        text = self.length(value)
        return f"under {self.length(self._finest)}" if value > 0.0 and text == self.length(0.0) else text

    @property
    def _finest(self) -> float:
        """The length [m] to which lengths are written."""
        return 0.01 * file_factor("length", self.system)

    def distance(self, value: float) -> str:
        """Write how far from a gate something is that moves to and fro, as a jump does [m]: to 0.1 m or 1 ft."""
        return self._text(value, "length", 1 if self.system is UnitSystem.metric else 0)

    def move(self, value: float) -> str:
        """Write by how much an opening is changed [m], without its sign: metric in cm, to the mm where need be."""
        if self.system is UnitSystem.us_customary or math.isnan(value):
            return self.length(abs(value))
        return f"{round(abs(value) * 100, 1):g} cm"

    def level_change(self, value: float) -> str:
        """Write by how much two levels differ [m], without the sign: metric to the cm."""
        return self.move(value if math.isnan(value) else round(value, 2))

    def discharge(self, value: float) -> str:
        """Write a discharge [m³/s]."""
        return self._text(value, "discharge", 3 if self.system is UnitSystem.metric else 1)

    def volume(self, value: float) -> str:
        """Write a volume [m³], thousands apart."""
        return self._text(value, "volume", 0 if self.system is UnitSystem.metric else 2, grouping=",")

    def velocity(self, value: float) -> str:
        """Write a velocity of the water [m/s]."""
        return self._text(value, "velocity", 2)

    def speed(self, value: float) -> str:
        """Write the speed of a hoist [m/s]."""
        return self._text(value, "speed", 3)

    def rate_of_loss(self, value: float) -> str:
        """Write a seepage, evaporation or rain [m/s]."""
        return self._text(value, "rate of loss", 1 if self.system is UnitSystem.metric else 2)

    def _text(self, value: float, dimension: Dimension, decimals: int, grouping: str = "") -> str:
        if math.isnan(value):
            return "-"
        number = round(value / file_factor(dimension, self.system), decimals) + 0.0  # + 0.0 turns -0.0 into 0.0
        return f"{number:{grouping}.{decimals}f} {FILE_UNITS[dimension][self.system]}"

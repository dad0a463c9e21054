"""The kinds of value that the keys of an input file take: quantities, durations, times, text.

Each kind reads a value as written into SI, says in one sentence what is allowed, and describes itself for the JSON
Schema and the reference page.
"""

import math
from abc import ABC, abstractmethod
from dataclasses import KW_ONLY, dataclass
from typing import Any

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler, ValidationInfo
from pydantic_core import CoreSchema, core_schema

from toeline.scenario.misfits import shown
from toeline.scenario.reading import reading_of
from toeline.scenario.times import duration_ms
from toeline.units import FILE_UNITS, Dimension, UnitSystem, allowed_units, parse_quantity, quantity_text


class ValueKind(ABC):
    """Base of the kinds: pydantic calls `read` in place of its own validation."""

    @abstractmethod
    def read(self, value: Any, info: ValidationInfo) -> Any:
        """Give the value in SI. Raises ValueError with a sentence for the planner."""

    @abstractmethod
    def describe(self) -> str:
        """Say for the reference page what may be written."""

    @abstractmethod
    def json_schema(self) -> dict[str, Any]:
        """Say the same for an editor."""

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, schema: CoreSchema, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        return self.json_schema()


@dataclass(frozen=True)
class Quantity(ValueKind):
    """A quantity of a dimension, or a plain number where it has none, within bounds in SI (`above` is not allowed)."""

    dimension: Dimension | None = None
    _: KW_ONLY
    above: float = -math.inf
    least: float = -math.inf
    most: float

    def read(self, value: Any, info: ValidationInfo) -> float:
        system = reading_of(info).system
        number = self._number(value, system)
        if number is None:
            raise ValueError(f"found {shown(value)}; allowed: {self._allowed(system)}")
        if not (number > self.above and self.least <= number <= self.most):
            raise ValueError(f"found {shown(value)}; allowed: {self._bounds(system)}")
        return number

    def _number(self, value: Any, system: UnitSystem) -> float | None:
        writable = (int, float, str) if self.dimension else (int, float)
        if isinstance(value, bool) or not isinstance(value, writable):
            return None
        try:
            number = parse_quantity(value, self.dimension, system) if self.dimension else float(value)
        except (ValueError, OverflowError):
            return None
        return number if math.isfinite(number) else None

    def _allowed(self, system: UnitSystem) -> str:
        if self.dimension:
            return allowed_units(self.dimension, system)
        return f"a number {self._bounds(system)}"

    def _bounds(self, system: UnitSystem) -> str:
        if math.isfinite(self.above):
            return f"above {self._text(self.above, system)}, up to {self._text(self.most, system)}"
        return f"from {self._text(self.least, system)} to {self._text(self.most, system)}"

    def _text(self, number: float, system: UnitSystem) -> str:
        return quantity_text(number, self.dimension, system) if self.dimension else f"{number:g}"

    def describe(self) -> str:
        bounds = self._bounds(UnitSystem.metric)
        if self.dimension is None:
            return f"number {bounds}"
        units = FILE_UNITS[self.dimension]
        return f"{self.dimension} [{units[UnitSystem.metric]} or {units[UnitSystem.us_customary]}] {bounds}"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "number"} if self.dimension is None else {"type": ["number", "string"]}


@dataclass(frozen=True)
class WholeNumber(ValueKind):
    """A whole number within bounds."""

    least: int
    most: int

    def read(self, value: Any, info: ValidationInfo) -> int:
        if isinstance(value, bool) or not isinstance(value, int) or not self.least <= value <= self.most:
            raise ValueError(f"found {shown(value)}; allowed: a {self.describe()}")
        return value

    def describe(self) -> str:
        return f"whole number from {self.least} to {self.most}"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "integer", "minimum": self.least, "maximum": self.most}


@dataclass(frozen=True)
class Duration(ValueKind):
    """A duration as text with its unit, within bounds as they would be written; read as whole milliseconds."""

    least: str
    most: str

    def read(self, value: Any, info: ValidationInfo) -> int:
        try:
            milliseconds = duration_ms(value) if isinstance(value, str) else None
        except ValueError:
            milliseconds = None
        if milliseconds is None:
            raise ValueError(f"found {shown(value)}; allowed: {allowed_units('duration', UnitSystem.metric)}")
        if not duration_ms(self.least) <= milliseconds <= duration_ms(self.most):
            raise ValueError(f"found {shown(value)}; allowed: from {self.least} to {self.most}")
        return milliseconds

    def describe(self) -> str:
        return f"duration from {self.least} to {self.most}"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string"}


@dataclass(frozen=True)
class Moment(ValueKind):
    """A time in the period; read as milliseconds from its start."""

    before_end: bool = False

    def read(self, value: Any, info: ValidationInfo) -> int:
        clock = reading_of(info).clock
        if clock is None:
            return 0
        milliseconds = clock.milliseconds(value)
        if self.before_end and milliseconds == clock.length_ms and not clock.is_shortened:
            raise ValueError(f"found {shown(value)}, the end of the period; allowed: a time before it")
        return milliseconds

    def describe(self) -> str:
        return "time before the end of the period" if self.before_end else "time in the period"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string"}


@dataclass(frozen=True)
class Text(ValueKind):
    """A name or other text of one line."""

    what: str = "name"
    refused: tuple[str, ...] = ()
    longest: int = 80

    def read(self, value: Any, info: ValidationInfo) -> str:
        if not isinstance(value, str) or not self._is_good(value):
            allowed = f"text of one line, 1 to {self.longest} characters, no blanks around it"
            raise ValueError(f"found {shown(value)}; allowed: {allowed}")
        if value in self.refused:
            raise ValueError(f"found {shown(value)}, which means an end of the canal; choose another name")
        return value

    def _is_good(self, text: str) -> bool:
        return 0 < len(text) <= self.longest and text.strip() == text and text.isprintable()

    def describe(self) -> str:
        return self.what

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string", "minLength": 1, "maxLength": self.longest}


@dataclass(frozen=True)
class Names(ValueKind):
    """Several names in an array, or "all"."""

    def read(self, value: Any, info: ValidationInfo) -> str | tuple[str, ...]:
        if value == "all":
            return "all"
        if not isinstance(value, list) or not value:
            raise ValueError(f'found {shown(value)}; allowed: "all", or an array of one or more names')
        names = tuple(Text().read(name, info) for name in value)
        if repeated := next((name for place, name in enumerate(names) if name in names[:place]), None):
            raise ValueError(f"found {shown(repeated)} twice; allowed: each name once")
        return names

    def describe(self) -> str:
        return '`"all"`, or array: name'

    def json_schema(self) -> dict[str, Any]:
        names = {"type": "array", "items": Text().json_schema(), "minItems": 1, "uniqueItems": True}
        return {"anyOf": [{"const": "all"}, names]}

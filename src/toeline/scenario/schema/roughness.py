"""The roughness calendar of a canal file: by how much weeds and silt raise Manning's n through the year."""

import re
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date
from typing import Annotated, Any, Literal

from pydantic import Field, ValidationInfo

from toeline.scenario.misfits import in_quotes, shown
from toeline.scenario.schema.table import Table
from toeline.scenario.schema.value_kinds import Quantity, Text, ValueKind

ALL = "all"
COMMON_YEAR = 2001
"""A year without 29 February, which does not come every year."""

_CALENDAR_DAY = re.compile(r"(?:(\d{4})-)?(\d{2})-(\d{2})")
_POOL_NAME = Text()


@dataclass(frozen=True, order=True)
class CalendarDay:
    """A day of every year, or of one year."""

    month: int
    day: int
    year: int | None = None

    def dates(self, years: Iterable[int]) -> list[date]:
        """Give its date in each of some years; that of its own year where it has one."""
        return [date(year, self.month, self.day) for year in (years if self.year is None else [self.year])]

    def __str__(self) -> str:
        day = f"{self.month:02d}-{self.day:02d}"
        return day if self.year is None else f"{self.year:04d}-{day}"


@dataclass(frozen=True)
class CalendarDayKind(ValueKind):
    """A date, or month and day of every year."""

    def read(self, value: Any, info: ValidationInfo) -> CalendarDay:
        if type(value) is date:
            return CalendarDay(value.month, value.day, value.year)
        match = _CALENDAR_DAY.fullmatch(value) if isinstance(value, str) else None
        try:
            year, month, day = (int(part or 0) for part in match.groups()) if match else (0, 0, 0)
            date(year or COMMON_YEAR, month, day)
        except ValueError:
            raise ValueError(f"found {shown(value)}; allowed: {self.describe()}") from None
        return CalendarDay(month, day, year or None)

    def describe(self) -> str:
        return 'day of every year such as "06-01" (month-day, not "02-29"), or a date such as 2031-06-01'

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string"}


@dataclass(frozen=True)
class PoolsKind(ValueKind):
    """All pools, or some by name."""

    def read(self, value: Any, info: ValidationInfo) -> tuple[str, ...] | None:
        if value == ALL:
            return None
        if not isinstance(value, list) or not value:
            raise ValueError(f"found {shown(value)}; allowed: {self.describe()}")
        return tuple(_POOL_NAME.read(item, info) for item in value)

    def describe(self) -> str:
        return f'"{ALL}", or an array of names of pools'

    def json_schema(self) -> dict[str, Any]:
        return {"anyOf": [{"const": ALL}, {"type": "array", "items": _POOL_NAME.json_schema(), "minItems": 1}]}


class RoughnessEntry(Table):
    """From a day on, Manning's n of the pools is that of their sections times a factor; before the first day, 1."""

    day: Annotated[CalendarDay, CalendarDayKind()] = Field(
        alias="from",
        description="The day from whose midnight (by the clock of the day file) on the factor holds. Days of every "
        "year come round: the last one holds over New Year, a single one always.",
    )
    pools: Annotated[tuple[str, ...] | None, PoolsKind()] = Field(
        None, description='Names of the pools. Left out, or "all": every pool.'
    )
    factor: Annotated[float, Quantity(least=0.2, most=10.0)] = Field(description="Factor on Manning's n.")
    shape: Literal["steps", "lines"] = Field(
        "steps",
        description="Until the next entry of the pool. steps: the factor holds; lines: it goes straight to the next "
        "factor, day by day.",
    )
    note: Annotated[str, Text("text of one line")] | None = Field(
        None, description="What it stands for, such as a weed cut."
    )

    @property
    def pools_text(self) -> str:
        """Its pools in words."""
        return "every pool" if self.pools is None else in_quotes(self.pools)

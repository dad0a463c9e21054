"""Values that change during the day: as an array, a table, a CSV file or one number."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import Annotated, Any

import numpy as np
from pydantic import Field, ValidationError, ValidationInfo

from toeline.scenario.csv_rows import Columns, number_or_text
from toeline.scenario.messages import misfits_of
from toeline.scenario.misfits import CsvFaultsError, Misfit, MisfitsError, shown
from toeline.scenario.reading import reading_of
from toeline.scenario.schema.table import DISCHARGE, LEVEL, OPENING, FileName, Table
from toeline.scenario.schema.value_kinds import Moment, Quantity, ValueKind
from toeline.scenario.series import Series, SeriesShape, constant
from toeline.units import UnitSystem

_COLUMNS = Columns(("time", "value"))
_TIME = Moment()


class SeriesTable(Table):
    """A series written as a table. An array of pairs alone, or a single number, may stand in its place."""

    shape: SeriesShape | None = Field(
        None,
        description="lines: straight between the times; steps: each value holds until the next time. "
        "Left out: steps for deliveries and openings, lines for all else.",
    )
    values: list[Any] | None = Field(None, description="Pairs [time, value], times rising.")
    file: FileName | None = Field(None, description="CSV file with the columns time,value, in place of values.")

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if (self.values is None) == (self.file is None):
            yield Misfit(("values",), 'exactly one of "values" and "file" is required')


@dataclass
class _Points:
    """Collects times and values; reports what is wrong by place in the input and column."""

    quantity: Quantity
    info: ValidationInfo
    report: Callable[[int, int, str], None]
    times: list[int] = field(default_factory=list)
    values: list[float] = field(default_factory=list)

    def add(self, place: int, when: Any, value: Any) -> None:
        milliseconds = self._read(_TIME, place, 0, when)
        number = self._read(self.quantity, place, 1, value)
        if milliseconds is None or number is None:
            return
        if self.times and milliseconds <= self.times[-1] and reading_of(self.info).clock is not None:
            self.report(place, 0, f"found {shown(when)}, which is not after the time before it; times must rise")
        self.times.append(milliseconds)
        self.values.append(number)

    def _read(self, kind: ValueKind, place: int, column: int, value: Any) -> Any:
        try:
            return kind.read(value, self.info)
        except ValueError as error:
            self.report(place, column, str(error))
            return None

    def series(self, shape: SeriesShape) -> Series:
        return Series(np.array(self.times, dtype=np.int64), np.array(self.values, dtype=np.float64), shape)


@dataclass(frozen=True)
class SeriesKind(ValueKind):
    """A series of a quantity, of this shape unless it says otherwise."""

    quantity: Quantity
    shape: SeriesShape

    def read(self, value: Any, info: ValidationInfo) -> Series:
        if isinstance(value, list):
            return self._from_pairs(value, (), self.shape, info)
        if not isinstance(value, dict):
            return constant(self.quantity.read(value, info))
        try:
            table = SeriesTable.model_validate(value, context=info.context)
        except ValidationError as error:
            raise MisfitsError(misfits_of(error, SeriesTable)) from None
        shape = table.shape or self.shape
        if table.file is not None:
            return self._from_csv(table.file, shape, info)
        return self._from_pairs(table.values or [], ("values",), shape, info)

    def _from_pairs(self, pairs: list[Any], path: tuple[str, ...], shape: SeriesShape, info: ValidationInfo) -> Series:
        misfits: list[Misfit] = []
        points = _Points(self.quantity, info, lambda *fault: misfits.append(Misfit((*path, *fault[:2]), fault[2])))
        for index, pair in enumerate(pairs):
            if isinstance(pair, list) and len(pair) == 2:
                points.add(index, *pair)
            else:
                misfits.append(Misfit((*path, index), f"found {shown(pair)}; allowed: a pair [time, value]"))
        if not pairs:
            misfits.append(Misfit(path, "found an array of 0; allowed: at least one pair [time, value]"))
        if misfits:
            raise MisfitsError(misfits)
        return points.series(shape)

    def _from_csv(self, name: str, shape: SeriesShape, info: ValidationInfo) -> Series:
        try:
            file = reading_of(info).read_csv(name, _COLUMNS)
        except ValueError as error:
            raise MisfitsError([Misfit(("file",), str(error))]) from None
        columns = _COLUMNS.required
        points = _Points(self.quantity, info, lambda line, column, text: file.report(line, columns[column], text))
        for line, row in file.rows:
            points.add(line, row.get("time", ""), number_or_text(row.get("value", "")))
        if not file.rows and not file.faults:
            file.report(None, "", "there are no rows below the header")
        if file.faults:
            raise CsvFaultsError(file.faults)
        return points.series(shape)

    def describe(self) -> str:
        return f"series of {self.quantity.describe()}"

    def json_schema(self) -> dict[str, Any]:
        value = self.quantity.json_schema()
        pairs = {"type": "array", "items": {"type": "array", "prefixItems": [{"type": "string"}, value]}, "minItems": 1}
        table = {
            "type": "object",
            "properties": {"shape": {"enum": ["lines", "steps"]}, "values": pairs, "file": {"type": "string"}},
            "additionalProperties": False,
        }
        return {"anyOf": [value, pairs, table]}


Inflow = Annotated[Series, SeriesKind(DISCHARGE, "lines")]
Delivery = Annotated[Series, SeriesKind(DISCHARGE, "steps")]
OpeningSeries = Annotated[Series, SeriesKind(OPENING, "steps")]
LevelSeries = Annotated[Series, SeriesKind(LEVEL, "lines")]

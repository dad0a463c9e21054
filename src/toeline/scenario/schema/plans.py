"""Plans of a day file: orders to gates as an array or a CSV file."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Annotated, Any, cast

from pydantic import Field, ValidationError, ValidationInfo

from toeline.scenario.csv_rows import Columns, number_or_text
from toeline.scenario.messages import misfits_of
from toeline.scenario.misfits import CsvFaultsError, Misfit, MisfitsError, in_quotes, shown
from toeline.scenario.orders import Order, OrderKind
from toeline.scenario.reading import reading_of
from toeline.scenario.rules import RuleChoice, Stuck
from toeline.scenario.schema.rules import RulesKind
from toeline.scenario.schema.table import DischargeOrZero, Name, SizeOrZero, Table
from toeline.scenario.schema.toml_json_schema import TomlJsonSchema
from toeline.scenario.schema.value_kinds import Moment, Quantity, ValueKind, WholeNumber
from toeline.units import UnitSystem

Bay = Annotated[int, WholeNumber(1, 50)]

_ACTIONS = ("opening", "by", "discharge")
MOST_DIGITS = 9
"""Digits of a cell that is read as a whole number; a longer one is told as it stands."""

_COLUMNS = Columns(("at", "gate"), ("bay", *_ACTIONS))


class OrderEntry(Table):
    """One order as written."""

    at: Annotated[int, Moment(before_end=True)] = Field(description="When the gate begins to move.")
    gate: Name = Field(description="Name of the gate.")
    bay: Bay | None = Field(None, description="Bay that moves, of a gate with separate_bays. Left out: all bays.")
    opening: SizeOrZero | None = Field(None, description="The opening to have.")
    by: Annotated[float, Quantity("length", least=-1000.0, most=1000.0)] | None = Field(
        None,
        description="The change from the opening last ordered, as that order was carried out: one that was refused "
        "does not count; negative closes.",
    )
    discharge: DischargeOrZero | None = Field(
        None, description="The discharge to pass then, by the gate law at the levels of that moment."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        given = [key for key in _ACTIONS if getattr(self, key) is not None]
        if len(given) != 1:
            found = in_quotes(given) or "none"
            yield Misfit((), f"found {found}; allowed: exactly one of {in_quotes(_ACTIONS)}")
        if self.by == 0.0:
            yield Misfit(("by",), "found 0, which moves nothing")

    def order(self, file: str = "", line: int | None = None) -> Order:
        """Give the order, with the place where it is written."""
        kind = next(key for key in _ACTIONS if getattr(self, key) is not None)
        return Order(self.at, self.gate, cast(OrderKind, kind), getattr(self, kind), file, line, self.bay or 0)


@dataclass(frozen=True)
class OrdersKind(ValueKind):
    """Orders as an array of tables, or the name of a CSV file with one row an order."""

    def read(self, value: Any, info: ValidationInfo) -> list[Order]:
        if isinstance(value, list):
            return self._from_array(value, info)
        if isinstance(value, str):
            return self._from_csv(value, info)
        raise ValueError(f"found {shown(value)}; allowed: {self.describe()}")

    @staticmethod
    def _from_array(items: list[Any], info: ValidationInfo) -> list[Order]:
        orders, misfits = [], []
        for index, item in enumerate(items):
            try:
                orders.append(OrderEntry.model_validate(item, context=info.context).order())
            except ValidationError as error:
                misfits += [Misfit((index, *path), text) for path, text in misfits_of(error, OrderEntry)]
        if misfits:
            raise MisfitsError(misfits)
        return orders

    @staticmethod
    def _from_csv(name: str, info: ValidationInfo) -> list[Order]:
        file = reading_of(info).read_csv(name, _COLUMNS)
        orders = []
        for line, row in file.rows:
            entry = {key: _cell(key, cell) for key, cell in row.items()}
            try:
                orders.append(OrderEntry.model_validate(entry, context=info.context).order(str(file.path), line))
            except ValidationError as error:
                for path, text in misfits_of(error, OrderEntry):
                    file.report(line, str(path[0]) if path else "", text)
        if file.faults:
            raise CsvFaultsError(file.faults)
        return orders

    def describe(self) -> str:
        return "an array of orders, or the name of a CSV file with the columns at,gate,bay,opening,by,discharge"

    def json_schema(self) -> dict[str, Any]:
        order = OrderEntry.model_json_schema(schema_generator=TomlJsonSchema)
        return {"anyOf": [{"type": "string"}, {"type": "array", "items": order}]}


class StuckEntry(Table):
    """A leaf that cannot be moved for a time: orders to it are refused."""

    gate: Name = Field(description="Name of the gate.")
    bay: Bay | None = Field(None, description="Bay that sticks, of a gate with separate_bays. Left out: all bays.")
    begin: Annotated[int, Moment()] = Field(alias="from", description="When it sticks; a move under way ends there.")
    until: Annotated[int, Moment()] = Field(description="When it can be moved again.")

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if 0 < self.until <= self.begin:
            yield Misfit(("until",), "found a time that is not after from; allowed: a later one")

    def stuck(self) -> Stuck:
        """Give the spell."""
        return Stuck(self.gate, self.begin, self.until, self.bay or 0)


def _cell(key: str, cell: str) -> Any:
    """The value in a cell of a row: a number where its column takes one."""
    if key == "bay" and cell.isdecimal() and len(cell) <= MOST_DIGITS:
        return int(cell)
    return number_or_text(cell) if key in _ACTIONS else cell


class Plan(Table):
    """One way of operating the day."""

    orders: Annotated[list[Order], OrdersKind()] = Field([], description="What the gates are ordered to do.")
    rules: Annotated[list[RuleChoice], RulesKind()] = Field(
        [], description="Rules that move gates during the day, each with the settings of its kind, see below."
    )
    stuck: list[StuckEntry] = Field([], description="Leaves that cannot be moved for a time.")

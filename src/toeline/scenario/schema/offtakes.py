"""Offtakes of a canal file."""

from collections.abc import Iterator
from typing import Any, Literal

from pydantic import Field, ValidationInfo, field_validator

from toeline.scenario.misfits import Misfit
from toeline.scenario.schema.table import KeysOfKind, LengthOrZero, Level, Name, Size, SizeOrZero, Table
from toeline.scenario.schema.value_kinds import Quantity
from toeline.units import UnitSystem

_KEYS_OF_KINDS = {
    "demand": KeysOfKind((), ("sill_level",)),
    "orifice": KeysOfKind(("sill_level", "width", "opening"), ("coefficient",)),
    "weir": KeysOfKind(("sill_level", "width"), ("coefficient",)),
}
_COEFFICIENTS = {
    "orifice": Quantity(above=0.0, most=1.0),
    "weir": Quantity("weir coefficient", above=0.0, most=3.0),
}
_DEFAULT_COEFFICIENTS = {"orifice": 0.6, "weir": 1.7}


class Offtake(Table):
    """A place where water leaves a pool."""

    name: Name = Field(description="Name of the offtake.")
    pool: Name = Field(description="Name of its pool.")
    chainage: LengthOrZero = Field(description="Distance below the head of the pool.")
    kind: Literal["demand", "orifice", "weir"] = Field(
        description="demand: takes what the day file asks; orifice, weir: takes what its opening or crest lets through."
    )
    sill_level: Level | None = Field(None, description="Level of its sill or crest; below it nothing is taken.")
    width: Size | None = Field(None, description="Width of the orifice or the crest.")
    opening: SizeOrZero | None = Field(
        None, description="Height of the opening (orifice), where the day file gives no other."
    )
    coefficient: float | None = Field(
        None,
        validate_default=True,
        description="Discharge coefficient: of an orifice a number (0.6), of a weir C in C·b·h^1.5 (1.7 m^0.5/s).",
    )

    @field_validator("coefficient", mode="plain", json_schema_input_type=float | str)
    @classmethod
    def _of_its_kind(cls, value: Any, info: ValidationInfo) -> float | None:
        kind = info.data.get("kind", "")
        if value is None or kind not in _COEFFICIENTS:
            return _DEFAULT_COEFFICIENTS.get(kind)
        return _COEFFICIENTS[kind].read(value, info)

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("kind", _KEYS_OF_KINDS)

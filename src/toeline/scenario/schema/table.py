"""The base of every table of an input file, and the kinds of value that many of them share."""

from collections.abc import Iterator
from typing import Annotated, Any, NamedTuple, Self, get_args

from pydantic import BaseModel, ConfigDict, Strict, ValidationInfo, model_validator
from pydantic.fields import FieldInfo

from toeline.scenario.misfits import Misfit, MisfitsError
from toeline.scenario.reading import reading_of
from toeline.scenario.schema.value_kinds import Quantity, Text
from toeline.units import UnitSystem

HEAD, TAIL = "head", "tail"
"""What a gate names in place of a pool at the two ends of the canal."""

Name = Annotated[str, Text()]
FileName = Annotated[str, Text("file name, relative to the folder of the day file", longest=400)]
LEVEL = Quantity("length", least=-10_000.0, most=10_000.0)
OPENING = Quantity("length", least=0.0, most=1000.0)
DISCHARGE = Quantity("discharge", least=0.0, most=10_000.0)

Level = Annotated[float, LEVEL]
Length = Annotated[float, Quantity("length", above=0.0, most=1e6)]
LengthOrZero = Annotated[float, Quantity("length", least=0.0, most=1e6)]
Size = Annotated[float, Quantity("length", above=0.0, most=1000.0)]
SizeOrZero = Annotated[float, OPENING]
DischargeOrZero = Annotated[float, DISCHARGE]
LevelAndDischarge = Annotated[tuple[Level, DischargeOrZero], Strict(False)]
LevelAtStation = Annotated[tuple[Level, Level], Strict(False)]
FromTo = Annotated[tuple[SizeOrZero, SizeOrZero], Strict(False)]


class KeysOfKind(NamedTuple):
    """Keys that one kind of a table needs, and those that it may have beside them."""

    needed: tuple[str, ...] = ()
    optional: tuple[str, ...] = ()


class Table(BaseModel):
    """A table of an input file: unknown keys are refused, values are SI once read."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        """Find what is wrong between the keys of this table; `system` is for writing quantities in messages."""
        return iter(())

    @model_validator(mode="after")
    def _refuse_misfits(self, info: ValidationInfo) -> Self:
        found = list(self.misfits(reading_of(info).system))
        if found:
            raise MisfitsError(found)
        return self

    def misfits_of_kind(self, kind_key: str, keys_of_kinds: dict[str, KeysOfKind]) -> Iterator[Misfit]:
        """Find keys that the chosen kind needs and lacks, or that it does not use."""
        chosen = f'{kind_key} = "{getattr(self, kind_key)}"'
        needed, optional = keys_of_kinds[getattr(self, kind_key)]
        of_any_kind = dict.fromkeys(key for keys in keys_of_kinds.values() for key in (*keys.needed, *keys.optional))
        for key in of_any_kind:
            is_given = key in self.model_fields_set
            if key in needed and not is_given:
                yield Misfit((key,), f"required with {chosen}, but not given")
            if is_given and key not in (*needed, *optional):
                yield Misfit((key,), f"not used with {chosen}; leave it out, or choose another {kind_key}")

    @classmethod
    def keys(cls) -> dict[str, FieldInfo]:
        """Give the fields by their keys in the file."""
        return {field.alias or name: field for name, field in cls.model_fields.items()}


def table_inside(annotation: Any) -> type[Table] | None:
    """Find the table that a key holds, be it alone, in an array or under names."""
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return annotation
    return next((table for part in get_args(annotation) if (table := table_inside(part))), None)

"""What every numeric key of the input files measures, so that settings can be told with their units."""

from collections.abc import Iterator
from dataclasses import fields, is_dataclass
from types import UnionType
from typing import Annotated, Any, Union, get_args, get_origin

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day
from toeline.scenario.schema.table import Table, table_inside
from toeline.scenario.schema.value_kinds import Duration, Quantity, ValueKind
from toeline.units import Dimension

ANY_NAME = "*"
"""Stands in a key path for a name, or for a place in an array."""


def setting_dimensions() -> dict[str, Dimension]:
    """Dimension by key path, such as length by canal.gates.*.sill_level; keys without one dimension are left out."""
    return dict(_of_table(Canal, "canal")) | dict(_of_table(Day, "day"))


def _of_table(table: type[Table], path: str) -> Iterator[tuple[str, Dimension]]:
    for name, field in table.model_fields.items():
        inside = f"{path}.{name}"
        if (inner := table_inside(field.annotation)) is not None:
            yield from _of_table(inner, f"{inside}.{ANY_NAME}" if _holds(field.annotation, list, dict) else inside)
        elif len(found := set(_dimensions(field.annotation, field.metadata))) == 1:
            yield f"{inside}.{ANY_NAME}" if _holds(field.annotation, dict) else inside, found.pop()


def _holds(annotation: Any, *containers: type) -> bool:
    """Whether an annotation is one of the containers, be it as one of several possibilities."""
    origin = get_origin(annotation)
    parts = get_args(annotation) if origin in (Union, UnionType, Annotated) else ()
    return origin in containers or any(_holds(part, *containers) for part in parts)


def _dimensions(annotation: Any, metadata: Any = ()) -> Iterator[Dimension]:
    for kind in metadata:
        if isinstance(kind, ValueKind):
            yield from _of_kind(kind)
    arguments = get_args(annotation)
    if get_origin(annotation) is Annotated:
        yield from _dimensions(arguments[0], arguments[1:])
    else:
        for part in arguments:
            yield from _dimensions(part)


def _of_kind(kind: ValueKind) -> Iterator[Dimension]:
    """The dimension of a kind, or of the quantity inside it, as that of a series."""
    if isinstance(kind, Duration):
        yield "duration"
    elif isinstance(kind, Quantity) and kind.dimension:
        yield kind.dimension
    elif is_dataclass(kind):
        for field in fields(kind):
            if isinstance(inner := getattr(kind, field.name), ValueKind):
                yield from _of_kind(inner)

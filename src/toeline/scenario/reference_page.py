"""The reference page of the input files: `python -m toeline.scenario.reference_page` prints it."""

from collections.abc import Iterator
from types import UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic.fields import FieldInfo
from pydantic_core import PydanticUndefined

from toeline.rules.registry import BUILT_IN, FoundRule
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day
from toeline.scenario.schema.day_series import SeriesTable
from toeline.scenario.schema.plans import OrderEntry
from toeline.scenario.schema.rules import Seconds, table_of
from toeline.scenario.schema.table import Table, table_inside
from toeline.scenario.schema.value_kinds import Duration, Quantity, ValueKind
from toeline.units import FILE_UNITS, SPELLINGS, UnitSystem, quantity_text

_TOP = """# Input reference

Every key of the canal file and the day file. This page is generated from the program; do not edit it.

Both are TOML. Unknown keys are refused. Arrays are counted from 1 in messages. A key that is not required may be left
out, and then has the value in the third column.

## Quantities

A plain number is in the unit of the file, by its `units`. Any value may carry its own unit instead, as text:
`"0.15 m/min"`. A duration always carries its unit: `"15 min"`. One foot is exactly 0.3048 m. Bounds below are in metric
units, whatever the units of the file.

"""
_TIMES = """
## Times

| written | means |
|---|---|
| `2031-05-04T06:30:00+02:00` or the same as text | that moment (ISO 8601) |
| `"2031-05-04T06:30"` | by the clock of the zone, or at the offset of the start |
| `"06:30"`, `"06:30:15"`, `"24:00"` | by the clock on the date of the start |
| `"+7 h"`, `"+90 min"` | from the start |

With a `zone`, the clock is that of the zone: on the days when the clocks change, 24:00 comes 23 or 25 hours after
00:00, and a time that the clock skips or shows twice is refused.

## Series

Wherever the value is a *series*, write one number that holds all day, an array of pairs `[time, value]` with rising
times, or a table (see below), whose values may stand in a CSV file: a header line `time,value`, one row a time; lines
that start with `#` are comments. Before the first time the first value holds, after the last the last.
"""


_RULES = """
### Rules

Each entry of `rules` names its kind, and then has the keys of that kind. A rule moves one gate; a gate may have several
rules whose `hours` do not overlap. Besides those below, a kind may be a rule of your own:

| `kind` | is |
|---|---|
| `"night_watch.py:NightWatch"` | the class `NightWatch` in the file `night_watch.py`, beside the day file |
| `"canal_rules.night:NightWatch"` | the class in an installed package |
| `"night watch"` | a rule of an installed package, its entry point of that name in the group `toeline.rules` |

Its settings are what its class declares, but one named `every`, the time between decisions, is never shorter than
1 s. Its code is run by every command that reads the day file, `toeline check` too: use files that you trust. Its text
enters the digest of the inputs; what it imports itself does not.

A rule decides up to once a second, and by `every` up to 10,000,000 times in the period.
"""


def reference_page() -> str:
    """Give the page as Markdown."""
    files = [*_tables("Canal file", Canal), *_tables("Day file", Day), *_inside_values()]
    return "".join([_TOP, _units_table(), _TIMES, *files])


def _units_table() -> str:
    rows = ["| quantity | metric | us customary | units that a value may carry |", "|---|---|---|---|"]
    for dimension, spellings in SPELLINGS.items():
        units = FILE_UNITS.get(dimension, {})
        metric, us = (units.get(system, "-") for system in UnitSystem)
        rows.append(f"| {dimension} | {metric} | {us} | {', '.join(spellings)} |")
    return "\n".join(rows) + "\n"


def _tables(title: str, top: type[Table]) -> Iterator[str]:
    yield f"\n## {title}\n\n{_table(top)}"
    seen: set[type[Table]] = set()
    for heading, table in _inner_tables(top, ""):
        if table not in seen:
            yield f"\n### {heading}\n\n{_table(table)}"
        seen.add(table)


def _inner_tables(table: type[Table], inside: str) -> Iterator[tuple[str, type[Table]]]:
    for key, field in table.keys().items():
        inner = table_inside(field.annotation)
        if inner is None:
            continue
        place = f"`{key}`, each, in {inside}" if inside else _header(key, field)
        yield place, inner
        yield from _inner_tables(inner, place)


def _header(key: str, field: FieldInfo) -> str:
    container = get_origin(field.annotation)
    if container is list:
        return f"`[[{key}]]`"
    return f"`[{key}.NAME]`" if container is dict else f"`[{key}]`"


def _inside_values() -> Iterator[str]:
    yield f"\n### A series as a table\n\n{_table(SeriesTable)}"
    yield f"\n### An order\n\n{_table(OrderEntry)}"
    yield _RULES
    for kind, rule in BUILT_IN.items():
        yield f"\n#### `{kind}`\n\n{_table(table_of(FoundRule(kind, rule)))}"


def _table(table: type[Table]) -> str:
    rows = [f"{table.__doc__}\n", "| key | value | left out | meaning |", "|---|---|---|---|"]
    for key, field in table.keys().items():
        value = _value(field.annotation, field.metadata)
        rows.append(f"| `{key}` | {value} | {_default(field)} | {field.description} |")
    return "\n".join(rows) + "\n"


def _value(annotation: Any, metadata: list[Any] | tuple[Any, ...] = ()) -> str:
    """Say what may be written for an annotation of a field."""
    kind = next((item for item in metadata if isinstance(item, ValueKind)), None)
    if kind is not None:
        return kind.describe()
    arguments = get_args(annotation)
    match get_origin(annotation):
        case container if container is Annotated:
            return _value(arguments[0], arguments[1:])
        case container if container in (UnionType, Union):
            return _value(arguments[0])
        case container if container is Literal:
            return ", ".join(f'`"{word}"`' for word in arguments)
        case container if container is tuple:
            return f"pair of {_value(arguments[0])} and {_value(arguments[1])}"
        case container if container is list:
            return f"array: {_value(arguments[0])}"
        case container if container is dict:
            return f"table by name: {_value(arguments[1])}"
    return _plain_value(annotation)


def _plain_value(annotation: Any) -> str:
    if annotation is UnitSystem:
        return ", ".join(f'`"{system}"`' for system in UnitSystem)
    if table_inside(annotation):
        return "table, see below"
    return {bool: "`true` or `false`", float: "number", Any: "pair `[time, value]`"}[annotation]


def _default(field: FieldInfo) -> str:
    if field.is_required():
        return "required"
    if field.default is None or field.default is PydanticUndefined or field.default in ([], {}):
        return "-"
    for kind in field.metadata:
        if isinstance(kind, Quantity) and kind.dimension:
            return quantity_text(field.default, kind.dimension, UnitSystem.metric)
        if isinstance(kind, Duration):
            return quantity_text(field.default / 1000, "duration", UnitSystem.metric)
        if isinstance(kind, Seconds):
            return quantity_text(field.default, "duration", UnitSystem.metric)
    return str(field.default).lower()


if __name__ == "__main__":
    print(reference_page(), end="")

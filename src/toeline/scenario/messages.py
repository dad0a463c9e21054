"""The faults that pydantic finds, in the planner's words."""

import re
from collections.abc import Callable, Iterator
from typing import Any, get_origin

from pydantic import ValidationError

from toeline.errors import Fault
from toeline.scenario.locate import KeyPath
from toeline.scenario.misfits import CsvFaultsError, Misfit, MisfitsError, nearest, shown
from toeline.scenario.schema.table import Table, table_inside

_BARE_WORD = re.compile(r"[A-Za-z0-9_-]+")

_ALLOWED: dict[str, Callable[[dict[str, Any]], str]] = {
    "bool_type": lambda _: "true or false",
    "dict_type": lambda _: "a table",
    "enum": lambda context: context["expected"].replace("'", '"'),
    "list_type": lambda _: "an array",
    "literal_error": lambda context: context["expected"].replace("'", '"'),
    "model_type": lambda _: "a table",
    "tuple_type": lambda _: "a pair in an array",
}


def misfits_of(error: ValidationError, table: type[Table] | None) -> Iterator[Misfit]:
    """Give what pydantic found wrong in a table, at paths counted from the table."""
    for item in error.errors(include_url=False):
        path = tuple(part for part in item["loc"] if part != "[key]")
        cause = item.get("ctx", {}).get("error")
        if isinstance(cause, MisfitsError):
            yield from (Misfit((*path, *inner.path), inner.message) for inner in cause.items)
        elif not isinstance(cause, CsvFaultsError):
            yield Misfit(path, _message(item, path, table))


def csv_faults_of(error: ValidationError) -> Iterator[Fault]:
    """Give the faults in CSV files that were found on the way."""
    for item in error.errors(include_url=False):
        cause = item.get("ctx", {}).get("error")
        if isinstance(cause, CsvFaultsError):
            yield from cause.faults


def _message(item: Any, path: KeyPath, table: type[Table] | None) -> str:
    kind = item["type"]
    if kind == "missing":
        return "required, but not given"
    if kind == "extra_forbidden":
        return f"unknown key; {nearest(str(path[-1]), _known_keys(table, path[:-1]))}"
    if kind == "value_error":
        return str(item["ctx"]["error"])
    context = item.get("ctx", {})
    if kind in ("too_short", "too_long"):
        limit = f"at least {context['min_length']}" if kind == "too_short" else f"at most {context['max_length']}"
        return f"found {context['actual_length']} in number; allowed: {limit}"
    return f"found {shown(item['input'])}; allowed: {_ALLOWED[kind](context)}"


def _known_keys(table: type[Table] | None, path: KeyPath) -> list[str]:
    """Give the keys of the table at a path, found by walking down the schema."""
    parts = iter(path)
    for part in parts:
        if table is None or isinstance(part, int):
            continue
        annotation = table.keys()[part].annotation
        table = table_inside(annotation)
        if get_origin(annotation) is dict:
            next(parts, None)  # the name under which the table stands
    return list(table.keys()) if table else []


def human_key(path: KeyPath, data: Any) -> str:
    """Write a key path for people: array elements counted from 1, with their name where they have one."""
    words = ""
    for part in path:
        data = _inside(data, part)
        if isinstance(part, int):
            name = data.get("name") if isinstance(data, dict) else None
            words += f"[{part + 1}]" + (f' "{name}"' if isinstance(name, str) else "")
        else:
            words += f" {part}" if _BARE_WORD.fullmatch(part) else f' "{part}"'
    return words.strip()


def _inside(data: Any, part: str | int) -> Any:
    try:
        return data[part]
    except (KeyError, IndexError, TypeError):
        return None

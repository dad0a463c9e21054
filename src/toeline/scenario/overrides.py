"""Values of the day file set anew for one run, as on the command line: key=value in TOML."""

import copy
import tomllib
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from toeline.errors import UsageError
from toeline.scenario.locate import KeyPath


@dataclass(frozen=True)
class Override:
    """One value set anew, with the text that set it."""

    text: str
    path: tuple[str, ...]
    value: Any

    @property
    def origin(self) -> str:
        """What stands in messages in place of a file name."""
        return f"--set {self.text}"

    def sets(self, key_path: KeyPath) -> bool:
        """Say whether a key path lies at or inside what this sets."""
        return key_path[: len(self.path)] == self.path

    def lies_in(self, key_path: KeyPath) -> bool:
        """Say whether this sets something at or inside a key path."""
        return self.path[: len(key_path)] == key_path


def read_overrides(texts: Iterable[str]) -> tuple[Override, ...]:
    """Read overrides such as 'period.length="6 h"'. Raises UsageError for one that is no key=value."""
    return tuple(_read(text) for text in texts)


def _read(text: str) -> Override:
    key, equals, value = text.partition("=")
    if not equals:
        raise UsageError(f'--set {text}: found no "="; allowed: key=value, such as \'period.length="6 h"\'')
    return Override(text, _key_path(text, key), _value(text, value))


def _key_path(text: str, key: str) -> tuple[str, ...]:
    try:
        data = tomllib.loads(f"{key} = 0")
    except ValueError:
        raise _not_toml(text, f'found the key "{key}"', "dotted keys; quote one with blanks") from None
    path: tuple[str, ...] = ()
    inner: Any = data
    while isinstance(inner, dict) and len(inner) == 1:
        [(part, inner)] = inner.items()
        path = (*path, part)
    if inner != 0:
        raise _not_toml(text, f'found the key "{key}"', "one key")
    return path


def _value(text: str, value: str) -> Any:
    """Read a TOML value; what is none, such as 6 h without quotes, is taken as text."""
    try:
        data = tomllib.loads(f"value = {value}")
    except (ValueError, RecursionError):
        return value.strip()
    if len(data) != 1:
        raise _not_toml(text, f"found the value {value}", "one TOML value")
    return data["value"]


def _not_toml(text: str, found: str, allowed: str) -> UsageError:
    return UsageError(f"--set {text}: {found}; allowed: {allowed}, as in 'period.length=\"6 h\"'")


def with_override(data: dict[str, Any], override: Override) -> dict[str, Any]:
    """Give the values of a file with one of them set anew; tables on the way are made where missing."""
    data = copy.deepcopy(data)
    table: Any = data
    for part in override.path[:-1]:
        table = table.setdefault(part, {})
        if not isinstance(table, dict):
            raise UsageError(f'{override.origin}: "{part}" is no table in the file, so nothing can be set inside it')
    table[override.path[-1]] = override.value
    return data

"""A TOML file as read: its text, its values, and the line of every key."""

import re
import tomllib
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from toeline.errors import Fault, ScenarioError
from toeline.scenario.locate import KeyPath, key_lines
from toeline.scenario.messages import human_key
from toeline.scenario.overrides import Override, with_override
from toeline.scenario.text_file import UnreadableFileError, read_text

_PLACE = re.compile(r"\s*\(at (?:line (\d+), column \d+|end of document)\)$")


@dataclass(frozen=True)
class InputFile:
    """One input file, with values that the user set beside it."""

    path: Path
    text: str
    data: dict[str, Any]
    lines: dict[KeyPath, int]
    overrides: tuple[Override, ...] = field(default=())

    def line(self, *key_path: str | int) -> int | None:
        """Give the line of a key, or of the innermost table around one that is not written."""
        for length in range(len(key_path), 0, -1):
            if key_path[:length] in self.lines:
                return self.lines[key_path[:length]]
        return None

    def fault(self, message: str, *key_path: str | int) -> Fault:
        """Give the fault at a key path, on its line, or in the override that set it."""
        key = human_key(key_path, self.data)
        is_written = not key_path or key_path in self.lines
        for override in reversed(self.overrides):
            if override.sets(key_path) or (override.lies_in(key_path) and not is_written):
                return Fault(override.origin, None, key, message)
        return Fault(str(self.path), self.line(*key_path), key, message)

    def overridden(self, overrides: tuple[Override, ...]) -> "InputFile":
        """Give the file with some values set anew; text and lines stay those of the file."""
        data = self.data
        for override in overrides:
            data = with_override(data, override)
        return replace(self, data=data, overrides=overrides)


def read_input_file(path: Path) -> InputFile:
    """Read a TOML file. Raises ScenarioError with one fault where that fails."""
    try:
        text = read_text(path)
    except UnreadableFileError as error:
        raise ScenarioError([Fault(str(path), error.line, "", str(error))]) from None
    try:
        return InputFile(path, text, tomllib.loads(text), key_lines(text))
    except (ValueError, RecursionError) as error:
        raise ScenarioError([_syntax_fault(path, text, error)]) from None


def _syntax_fault(path: Path, text: str, error: ValueError | RecursionError) -> Fault:
    if isinstance(error, RecursionError):
        return Fault(str(path), None, "", "arrays and tables are nested too deeply")
    message = str(error)
    place = _PLACE.search(message)
    if place is None:
        return Fault(str(path), None, "", f"not valid TOML: {message}")
    line = int(place[1]) if place[1] else len(text.splitlines())
    return Fault(str(path), line, "", f"not valid TOML: {_PLACE.sub('', message).lower()}")

"""Where every key of a TOML text stands.

The standard parser gives values without positions. This scanner walks a text that the parser has already accepted,
so it only has to tell keys, strings, comments and brackets apart, not to judge them.
"""

import re
import tomllib
from bisect import bisect_right

KeyPath = tuple[str | int, ...]
"""Keys of tables and indices of arrays, counted from 0, from the top of the file."""

_BLANK = re.compile(r"(?:\s|#[^\n]*)*")
_KEY = re.compile(r""" "(?:[^"\\]|\\.)*" | '[^']*' | [^\s=.\[\]{},"'#]+ """, re.VERBOSE)
_DOT = re.compile(r"[ \t]*\.[ \t]*")
_STRING = re.compile(
    r'''
    """ (?:[^\\]|\\.)*? """ "{0,2}   # up to two quotes may stand before the closing three
    | \'\'\' .*? \'\'\' '{0,2}
    | " (?:[^"\\]|\\.)* "
    | ' [^']* '
    ''',
    re.VERBOSE | re.DOTALL,
)
_SCALAR = re.compile(r"[^,\]}#\n]*")


def key_lines(text: str) -> dict[KeyPath, int]:
    """Give the line, counted from 1, of every key, table and array element of a valid TOML text."""
    scanner = _Scanner(text)
    scanner.document()
    return scanner.lines


class _Scanner:
    def __init__(self, text: str):
        self.text = text
        self.position = 0
        self.newlines = [match.start() for match in re.finditer("\n", text)]
        self.lines: dict[KeyPath, int] = {}
        self.last_element: dict[KeyPath, int] = {}  # of every array of tables so far

    def document(self) -> None:
        table: KeyPath = ()
        while self._next_character():
            if self._take("[["):
                table = self._array_of_tables_header()
            elif self._take("["):
                table = self._table_header()
            else:
                self._pair(table)

    def _array_of_tables_header(self) -> KeyPath:
        *parents, key = self._dotted_key()
        array = (*self._inside(parents), key)
        self._note(array)
        self.last_element[array] = self.last_element.get(array, -1) + 1
        element = (*array, self.last_element[array])
        self._note(element)
        self._take("]]")
        return element

    def _table_header(self) -> KeyPath:
        path = self._inside(self._dotted_key())
        self._take("]")
        return path

    def _inside(self, keys: list[str]) -> KeyPath:
        """Resolve the keys of a header: a key of an array of tables means its last element so far."""
        path: KeyPath = ()
        for key in keys:
            path = (*path, key)
            self._note(path)
            if path in self.last_element:
                path = (*path, self.last_element[path])
        return path

    def _pair(self, table: KeyPath) -> None:
        path = table
        for key in self._dotted_key():
            path = (*path, key)
            self._note(path)
        self._take("=")
        self._value(path)

    def _value(self, path: KeyPath) -> None:
        if self._take("["):
            self._array(path)
        elif self._take("{"):
            self._inline_table(path)
        else:
            self._match(_STRING) or self._match(_SCALAR)

    def _array(self, path: KeyPath) -> None:
        index = 0
        while not self._take("]"):
            element = (*path, index)
            self._note(element)
            self._value(element)
            self._take(",")
            index += 1

    def _inline_table(self, path: KeyPath) -> None:
        while not self._take("}"):
            self._pair(path)
            self._take(",")

    def _dotted_key(self) -> list[str]:
        self._next_character()
        keys = [_plain_key(self._match(_KEY))]
        while self._match(_DOT):
            keys.append(_plain_key(self._match(_KEY)))
        return keys

    def _next_character(self) -> str:
        """Pass over blanks and comments; give the character that follows, "" at the end."""
        self._match(_BLANK)
        return self.text[self.position : self.position + 1]

    def _take(self, mark: str) -> bool:
        self._next_character()
        if not self.text.startswith(mark, self.position):
            return False
        self.position += len(mark)
        return True

    def _match(self, pattern: re.Pattern[str]) -> str:
        match = pattern.match(self.text, self.position)
        if match is None:
            return ""
        self.position = match.end()
        return match[0]

    def _note(self, path: KeyPath) -> None:
        self.lines.setdefault(path, bisect_right(self.newlines, self.position) + 1)


def _plain_key(written: str) -> str:
    """Take quotes and escapes off a key."""
    if written[:1] not in ('"', "'"):
        return written
    return next(iter(tomllib.loads(f"{written} = 0")))

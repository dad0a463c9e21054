"""Lines of keys in a TOML text."""

import tomllib
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.scenario.locate import key_lines
from toeline.scenario.starter import STARTER_FILES, starter_text

QUILLMERE = Path(__file__).parents[2] / "scenarios" / "quillmere"

AWKWARD = '''\
# a comment with [brackets] and key = 1
name = "a \\"quoted\\" [name] # no comment"   # a comment
path = 'C:\\new # folder'
nothing = ""
"key with blanks".inner = 1
'single.dotted' = 2
dotted . key = 3
text = """
[not.a.table]
key = 1
five quotes follow"""""
literal = \'\'\'
# [[no.table]]
\'\'\'
day = 2031-05-04 06:30:00

[table]           # [comment]
array = [
  1,   # one ]
  [2, 3],

  { a = 1, "b c" = [
    4 ] },
]
inline = { x = "}", y = { z = ']' } }

[table.inner."quoted table"]
key = 1

[[list]]
name = "first"
[list.sub]
key = 1
[[list.deep]]
key = 1
[[list.deep]]
key = 2

[[ list ]]
name = "second"
[[list.deep]]
key = 3
[list.deep.under]
key = 4
[later.than.this]
[later]
key = 1
'''

LINES_OF_AWKWARD = {
    ("name",): 2,
    ("path",): 3,
    ("nothing",): 4,
    ("key with blanks", "inner"): 5,
    ("single.dotted",): 6,
    ("dotted", "key"): 7,
    ("text",): 8,
    ("literal",): 12,
    ("day",): 15,
    ("table",): 17,
    ("table", "array"): 18,
    ("table", "array", 0): 19,
    ("table", "array", 1): 20,
    ("table", "array", 1, 1): 20,
    ("table", "array", 2): 22,
    ("table", "array", 2, "b c"): 22,
    ("table", "array", 2, "b c", 0): 23,
    ("table", "inline", "x"): 25,
    ("table", "inline", "y", "z"): 25,
    ("table", "inner", "quoted table"): 27,
    ("table", "inner", "quoted table", "key"): 28,
    ("list",): 30,
    ("list", 0): 30,
    ("list", 0, "name"): 31,
    ("list", 0, "sub", "key"): 33,
    ("list", 0, "deep", 0, "key"): 35,
    ("list", 0, "deep", 1): 36,
    ("list", 0, "deep", 1, "key"): 37,
    ("list", 1): 39,
    ("list", 1, "name"): 40,
    ("list", 1, "deep", 0, "key"): 42,
    ("list", 1, "deep", 0, "under", "key"): 44,
    ("later",): 45,
    ("later", "than", "this"): 45,
    ("later", "key"): 47,
}


def paths(value, path=()):
    """Give every key path of parsed TOML."""
    items = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, inner in items:
        yield (*path, key)
        yield from paths(inner, (*path, key))


@pytest.mark.parametrize("path", LINES_OF_AWKWARD)
def test_line_of_a_key_in_an_awkward_text(path):
    assert key_lines(AWKWARD)[path] == LINES_OF_AWKWARD[path]


def test_lines_are_the_same_with_carriage_returns():
    assert key_lines(AWKWARD.replace("\n", "\r\n")) == key_lines(AWKWARD)


@pytest.mark.parametrize(
    "text",
    [
        AWKWARD,
        "",
        "# only a comment",
        *(starter_text(name) for name in STARTER_FILES),
        *(path.read_text(encoding="utf-8") for path in sorted(QUILLMERE.glob("*.toml"))),
    ],
)
def test_every_key_that_the_parser_finds_has_a_line(text):
    assert set(key_lines(text)) == set(paths(tomllib.loads(text)))


KEYS = st.text(st.characters(codec="ascii", exclude_categories=["Cc"]), max_size=5)
SCALARS = st.one_of(st.integers(-9, 9), st.booleans(), KEYS)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(KEYS, inner, max_size=3)),
    max_leaves=8,
)


class Writer:
    """Writes values as TOML, one array element or top-level key a line, and notes the line of every path."""

    def __init__(self):
        self.text = ""
        self.lines = {}

    def document(self, table):
        for key, value in table.items():
            self.pair((key,), value)
            self.text += "  # = ] } \" '\n\n"
        return self

    def pair(self, path, value):
        self.note(path)
        self.text += f"{quoted(path[-1])} = "
        self.value(path, value)

    def value(self, path, value):
        if isinstance(value, list):
            self.text += "[ # [\n"
            for index, item in enumerate(value):
                self.note((*path, index))
                self.value((*path, index), item)
                self.text += ",\n"
            self.text += "]"
        elif isinstance(value, dict):
            self.text += "{"
            for index, (key, inner) in enumerate(value.items()):
                self.text += ", " if index else " "
                self.pair((*path, key), inner)
            self.text += " }"
        else:
            self.text += quoted(value) if isinstance(value, str) else str(value).lower()

    def note(self, path):
        self.lines[path] = self.text.count("\n") + 1


def quoted(text):
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'


@given(st.dictionaries(KEYS, VALUES, max_size=4))
def test_lines_of_generated_texts(table):
    written = Writer().document(table)

    assert tomllib.loads(written.text) == table
    assert key_lines(written.text) == written.lines

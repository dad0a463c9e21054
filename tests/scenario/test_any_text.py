"""Whatever is typed, a file loads or is refused by name and line: nothing else comes out."""

import contextlib
import shutil
import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from toeline.errors import UsageError
from toeline.scenario import load_scenario

GOOD = Path(__file__).with_name("files") / "good"
NUMBERS = ["nan", "-inf", "1e400", "0", "-1", "1e300", "0x" + "f" * 5000, "9" * 300]
TEXTS = ['""', '" "', '"x"', '"1 m"', '"+9 h"', '"+1e300 h"', '"to hold targets"', '"metric"']
ARRAYS_AND_TABLES = ["[]", "[[]]", "[[1, 2]]", "[{}]", "{}", "{ a = 1 }", "{ file = 'x.csv' }", "{ values = [[1], 3] }"]
TIMES = ["06:00:00", "2031-05-04", "2031-05-04T06:00:00", "9999-12-31T23:59:59-12:00", "0001-01-01T00:00:00+12:00"]
JUNK = ["true", *NUMBERS, *TEXTS, *ARRAYS_AND_TABLES, *TIMES]


@pytest.fixture(scope="module")
def spoilt():
    """A function that loads the good files with one of them changed."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)

        def load_changed(file, content):
            shutil.copytree(GOOD, folder, dirs_exist_ok=True)
            (folder / file).write_bytes(content)
            with contextlib.suppress(UsageError):  # of which ScenarioError is a kind
                load_scenario(folder / "day.toml", plan="proposed")

        yield load_changed


@settings(deadline=None, max_examples=150)
@given(
    file=st.sampled_from(["canal.toml", "day.toml"]),
    place=st.floats(0, 1, exclude_max=True),
    junk=st.sampled_from(JUNK),
)
def test_any_value_in_place_of_another(spoilt, file, place, junk):
    lines = (GOOD / file).read_text(encoding="utf-8").splitlines()
    index = int(place * len(lines))
    key, equals, _ = lines[index].partition(" = ")
    lines[index] = f"{key} = {junk}" if equals else lines[index]

    spoilt(file, "\n".join(lines).encode())


@settings(deadline=None, max_examples=100)
@given(
    file=st.sampled_from(["canal.toml", "day.toml", "orders.csv"]),
    place=st.floats(0, 1),
    length=st.integers(0, 30),
    piece=st.text(max_size=5),
)
def test_any_piece_cut_out_or_put_in(spoilt, file, place, length, piece):
    content = (GOOD / file).read_bytes()
    start = int(place * len(content))

    spoilt(file, content[:start] + piece.encode() + content[start + length :])

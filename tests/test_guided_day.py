"""The guided day and its figures are what fresh runs give."""

import re
from importlib.util import module_from_spec, spec_from_file_location
from pathlib import Path
from types import ModuleType

import pytest
import xarray as xr
from PIL import Image

DOCS = Path(__file__).parents[1] / "docs"
NUMBER = re.compile(r"\d+(?:\.\d+)?")
MOST_BYTES = 1_500_000


def script() -> ModuleType:
    spec = spec_from_file_location("guided_day", DOCS / "guided_day.py")
    module = module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


GUIDED_DAY = script()


@pytest.fixture(scope="module")
def runs() -> tuple[xr.Dataset, xr.Dataset]:
    return GUIDED_DAY.runs()


def alike(one: str, other: str) -> bool:
    """Whether two texts are the same, their numbers up to one in the last digit: rounding differs between machines."""
    if NUMBER.sub("#", one) != NUMBER.sub("#", other):
        return False
    for first, second in zip(NUMBER.findall(one), NUMBER.findall(other), strict=True):
        last_digit = 10.0 ** -len(first.partition(".")[2])
        if abs(float(first) - float(second)) > 1.01 * last_digit:
            return False
    return True


def test_texts_are_alike_only_where_numbers_are_near():
    assert alike("to 30.43 m at 06:07", "to 30.44 m at 06:08")
    assert not alike("to 30.43 m", "to 30.45 m")
    assert not alike("to 30.43 m", "at 30.43 m")


def test_the_page_is_what_the_runs_say(runs):
    assert alike((DOCS / "guided_day.md").read_text(encoding="utf-8"), GUIDED_DAY.page(*runs))


def test_every_figure_was_drawn_from_runs_that_say_the_same(runs):
    fresh = GUIDED_DAY.pictures(*runs)
    assert {path.stem for path in (DOCS / "guided_day").iterdir()} == set(fresh)
    stale = []
    for stem, picture in fresh.items():
        with Image.open(DOCS / "guided_day" / f"{stem}.png") as image:
            if not alike(image.text["Description"], picture.words):
                stale.append(stem)
    assert stale == []


def test_every_figure_is_shown():
    shown = re.findall(r"\]\(guided_day/(\w+)\.png\)", (DOCS / "guided_day.md").read_text(encoding="utf-8"))
    assert sorted(shown) == sorted(path.stem for path in (DOCS / "guided_day").iterdir())


def test_the_figures_stay_small():
    assert sum(path.stat().st_size for path in (DOCS / "guided_day").iterdir()) < MOST_BYTES

"""Figures as files."""

from pathlib import Path

import pytest

from toeline.errors import UsageError
from toeline.report.figures.deliveries import pictures
from toeline.report.figures.files import FORMATS, write_pictures
from toeline.report.figures.picture import Picture

SIGNATURES = {"png": b"\x89PNG", "svg": b"<?xml", "pdf": b"%PDF"}


@pytest.fixture
def picture(invented_run, metric) -> Picture:
    (found,) = pictures(invented_run(), metric)
    return found


def test_every_format_comes_with_the_numbers_beside_it(picture, tmp_path):
    paths = write_pictures([("day.deliveries", picture)], tmp_path, FORMATS)
    assert [path.name for path in paths] == [f"day.deliveries.{ending}" for ending in (*FORMATS, "csv")]
    assert sorted(tmp_path.iterdir()) == sorted(paths)
    for path in paths[:3]:
        assert path.read_bytes().startswith(SIGNATURES[path.suffix[1:]])
    assert paths[3].read_text(encoding="utf-8") == picture.tables[""].csv_text()


@pytest.mark.parametrize("ending", FORMATS)
def test_the_same_picture_gives_the_same_bytes(ending, picture, tmp_path):
    first, second = (write_pictures([(name, picture)], tmp_path, [ending])[0] for name in ("one", "two"))
    assert first.read_bytes() == second.read_bytes()


def test_no_clock_time_of_the_drawing_is_inside(picture, tmp_path):
    (path, _) = write_pictures([("day", picture)], tmp_path, ["svg"])
    assert "dc:date" not in path.read_text(encoding="utf-8")


def test_the_words_go_along_for_those_who_cannot_see(picture, tmp_path):
    (path, _) = write_pictures([("day", picture)], tmp_path, ["svg"])
    assert "Discharge asked for and delivered at each offtake" in path.read_text(encoding="utf-8")


def test_nothing_is_written_where_one_file_stands_already(picture, tmp_path):
    (tmp_path / "two.png").write_text("mine")
    with pytest.raises(UsageError, match=r"two\.png exists"):
        write_pictures([("one", picture), ("two", picture)], tmp_path, ["png"])
    assert [path.name for path in tmp_path.iterdir()] == ["two.png"]
    assert (tmp_path / "two.png").read_text() == "mine"


def test_what_stands_is_replaced_where_that_is_allowed(picture, tmp_path):
    (tmp_path / "one.png").write_text("old")
    write_pictures([("one", picture)], tmp_path, ["png"], overwrite=True)
    assert (tmp_path / "one.png").read_bytes().startswith(SIGNATURES["png"])


def test_two_figures_do_not_go_to_one_file(picture, tmp_path):
    with pytest.raises(UsageError, match="two figures would go to"):
        write_pictures([("one", picture), ("one", picture)], tmp_path, ["png"])
    assert list(tmp_path.iterdir()) == []


def test_a_failure_on_the_way_leaves_nothing(picture, tmp_path):
    def breaking():
        yield "one", picture
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        write_pictures(breaking(), tmp_path, ["png"])
    assert list(Path(tmp_path).iterdir()) == []


def test_settings_of_the_caller_come_back(picture, tmp_path):
    import matplotlib

    with matplotlib.rc_context({"font.size": 21.0, "svg.hashsalt": None}):
        write_pictures([("one", picture)], tmp_path, ["png"])
        assert matplotlib.rcParams["font.size"] == 21.0
        assert matplotlib.rcParams["svg.hashsalt"] is None

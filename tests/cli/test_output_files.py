"""Where a run is written, and what must not be lost by it."""

import errno
import os
from pathlib import Path

import pytest

from toeline.cli.input_files import load_plans
from toeline.cli.output_files import choose_outputs, refuse_outputs, refuse_page, show_or_write
from toeline.errors import UsageError


def one_plan(folder: Path) -> Path:
    day = folder / "day.toml"
    day.write_text(day.read_text().partition("[plans.raise]")[0])
    return day


def test_a_day_with_one_plan_goes_to_its_name_in_the_working_directory(folder):
    assert choose_outputs(load_plans(one_plan(folder)), None) == [Path("day.nc")]


def test_each_of_several_plans_goes_to_its_own_file(folder):
    assert choose_outputs(load_plans(folder / "day.toml"), None) == [Path("day.hold.nc"), Path("day.raise.nc")]


def test_one_plan_picked_of_several_keeps_its_file(folder):
    assert choose_outputs(load_plans(folder / "day.toml", "raise"), None) == [Path("day.raise.nc")]


def test_a_name_given_for_one_picked_plan_is_taken_as_it_is(folder):
    assert choose_outputs(load_plans(folder / "day.toml", "raise"), Path("today.nc")) == [Path("today.nc")]


def test_a_given_name_gets_the_plan_before_its_ending(folder):
    outputs = choose_outputs(load_plans(folder / "day.toml"), Path("out/today.nc"))
    assert outputs == [Path("out/today.hold.nc"), Path("out/today.raise.nc")]


def test_a_plan_named_with_a_slash_stays_in_the_folder(folder):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace("plans.raise", 'plans."raise / late"'))
    assert choose_outputs(load_plans(day), None)[1] == Path("day.raise_late.nc")


@pytest.mark.parametrize(
    ("output", "reason"),
    [
        ("day.toml", "is an input of this run"),
        ("canal.toml", "is an input of this run"),
        ("nowhere/day.nc", "no directory nowhere"),
        (".", "directory"),
    ],
)
def test_an_output_that_would_lose_something_or_fail_is_refused_even_with_overwrite(folder, output, reason):
    scenarios = load_plans(one_plan(folder))
    with pytest.raises(UsageError, match=reason):
        refuse_outputs([Path(output)], scenarios, overwrite=True)


@pytest.mark.parametrize("standing", ["day.nc", "day.nc.partial"])
def test_what_stands_is_replaced_only_when_told(folder, standing):
    (folder / standing).touch()
    scenarios = load_plans(one_plan(folder))
    with pytest.raises(UsageError, match=f"{standing} exists"):
        refuse_outputs([Path("day.nc")], scenarios, overwrite=False)
    refuse_outputs([Path("day.nc")], scenarios, overwrite=True)


def test_two_plans_never_share_a_file(folder):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace("plans.raise", 'plans."a/b"').replace("plans.hold", 'plans."a b"'))
    scenarios = load_plans(day)
    with pytest.raises(UsageError, match="two plans would go to one file"):
        refuse_outputs(choose_outputs(scenarios, None), scenarios, overwrite=False)


def test_a_page_never_takes_the_place_of_a_pipe_or_device(tmp_path):
    os.mkfifo(tmp_path / "pipe")
    with pytest.raises(UsageError, match="pipe is a pipe or device"):
        refuse_page(tmp_path / "pipe", [], overwrite=True)


def test_a_page_follows_links_and_leaves_them(tmp_path):
    (tmp_path / "link").symlink_to("page.txt")
    refuse_page(tmp_path / "link", [], overwrite=False)
    show_or_write("a page", tmp_path / "link")
    assert (tmp_path / "link").is_symlink()
    assert (tmp_path / "page.txt").read_text() == "a page\n"


def test_links_in_a_circle_are_refused(tmp_path):
    (tmp_path / "loop").symlink_to("loop")
    with pytest.raises(UsageError, match="loop cannot be a file name"):
        refuse_page(tmp_path / "loop", [], overwrite=True)


def test_a_page_that_cannot_be_written_is_named(tmp_path):
    with pytest.raises(OSError, match="No such file or directory") as raised:
        show_or_write("a page", tmp_path / "none" / "page.txt")
    assert raised.value.filename == str(tmp_path / "none" / "page.txt")


READ_ONLY = [
    ("run", "day.toml"),
    ("report", "run.nc"),
    ("figures", "run.nc", "--to", "some/figures"),
    ("orders", "run.nc"),
    ("compare", "day.toml", "-o", "page.txt"),
    ("verify", "day.toml", "-o", "page.txt"),
    ("rating", "canal.toml", "Middle check", "--csv", "rating.csv"),
    ("rating", "canal.toml", "Middle check", "--chart", "rating.png"),
]


@pytest.mark.parametrize("arguments", READ_ONLY, ids=" ".join)
def test_a_folder_that_cannot_be_written_in_is_told_before_any_work(folder, call, monkeypatch, arguments):
    assert call("run", "day.toml", "--plan", "raise", "-o", "run.nc").exit_code == 0
    monkeypatch.setattr(os, "access", lambda path, mode: mode == os.R_OK)
    before = sorted(folder.iterdir())
    result = call(*arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert f" cannot be written: no permission in {folder}, or its disk is read-only.\n" in result.stderr
    assert sorted(folder.iterdir()) == before


def test_a_page_that_cannot_be_written_is_named_not_its_working_file(folder, monkeypatch):
    def refuse(self, *_, **__):
        raise OSError(errno.EROFS, "Read-only file system", str(self))

    for name in ("write_bytes", "unlink"):
        monkeypatch.setattr(Path, name, refuse)
    with pytest.raises(OSError, match="Read-only") as refused:
        show_or_write("text", Path("page.txt"))
    assert refused.value.filename == str(folder / "page.txt")

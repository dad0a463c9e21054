"""`toeline report`: the page it writes, and what it refuses."""

import pytest


@pytest.fixture
def run_files(folder, call):
    call("run", "day.toml")
    return folder


def test_the_page_stands_beside_where_it_was_asked_for(run_files, call):
    result = call("report", "day.raise.nc")
    assert (result.exit_code, result.stdout, result.stderr) == (0, "", "Written: day.raise.html\n")
    page = (run_files / "day.raise.html").read_text(encoding="utf-8")
    assert page.startswith("<!DOCTYPE html>")
    assert "<title>A short morning, plan raise: Alder branch</title>" in page


def test_several_runs_make_one_page(run_files, call):
    assert call("report", "day.hold.nc", "day.raise.nc", "-o", "both.html").exit_code == 0
    assert "B also raises Middle check by 5 cm at 06:20" in (run_files / "both.html").read_text(encoding="utf-8")


def test_a_page_that_exists_is_kept_unless_told_otherwise(run_files, call):
    page = run_files / "day.raise.html"
    page.write_text("mine")
    refused = call("report", "day.raise.nc")
    assert (refused.exit_code, page.read_text()) == (2, "mine")
    assert "day.raise.html exists" in refused.stderr
    assert call("report", "day.raise.nc", "--overwrite").exit_code == 0
    assert page.read_text(encoding="utf-8").startswith("<!DOCTYPE html>")


@pytest.mark.parametrize(
    ("arguments", "told"),
    [
        (("day.toml",), "day.toml is no file of results"),
        (("day.hold.nc", "day.hold.nc"), "named twice"),
        (("day.hold.nc", "-o", "day.hold.nc", "--overwrite"), "day.hold.nc is an input and would be lost"),
        (("day.hold.nc", "-o", "nowhere/page.html"), "there is no directory nowhere"),
    ],
)
def test_it_refuses(run_files, call, arguments, told):
    before = {path: path.read_bytes() for path in run_files.iterdir()}
    result = call("report", *arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert told in result.stderr
    assert {path: path.read_bytes() for path in run_files.iterdir()} == before

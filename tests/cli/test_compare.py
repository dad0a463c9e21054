"""`toeline compare`: exit statuses, messages and files."""

import csv
import json
import re
import tempfile
from pathlib import Path

import pytest

import toeline
from toeline.cli.compare import run_names
from toeline.errors import RunError


@pytest.fixture
def spilling(folder: Path) -> Path:
    """A day whose other plan leaves the East lateral short, where the first does not."""
    canal, day = folder / "canal.toml", folder / "day.toml"
    canal.write_text(canal.read_text().replace('kind = "demand"', 'kind = "demand"\nsill_level = 50.5'))
    day.write_text(day.read_text().replace("by = 0.05", "by = -0.40"))
    return day


@pytest.fixture
def weedy(folder: Path) -> Path:
    """Another day on a rougher canal."""
    text = (folder / "canal.toml").read_text().replace("roughness = 0.020", "roughness = 0.030")
    (folder / "weedy_canal.toml").write_text(text)
    day = folder / "weedy.toml"
    day.write_text((folder / "day.toml").read_text().replace("canal.toml", "weedy_canal.toml"))
    return day


def test_all_plans_of_a_day_are_compared_and_no_file_is_left(folder, call):
    before = set(folder.iterdir())
    result = call("compare", "day.toml")
    assert (result.exit_code, set(folder.iterdir())) == (0, before)
    assert result.stdout.startswith("Alder branch: A short morning\n  A  hold; the others are compared with it\n")
    assert "B also raises Middle check by 5 cm at 06:20" in result.stdout


def test_picked_plans_are_compared_in_the_order_given(folder, call):
    result = call("compare", "day.toml", "--plan", "raise", "--plan", "hold")
    assert "  A  raise;" in result.stdout
    assert "B does not raise Middle check by 5 cm at 06:20" in result.stdout


def test_long_plans_are_compared_from_files_of_which_none_is_left(folder, call, monkeypatch, tmp_path_factory):
    in_memory, before = call("compare", "day.toml").stdout, set(folder.iterdir())
    scratch = tmp_path_factory.mktemp("scratch")
    monkeypatch.setattr("toeline.results.dataset.LONG_RUN", 0.0)
    monkeypatch.setattr(tempfile, "tempdir", str(scratch))
    assert call("compare", "day.toml").stdout == in_memory
    assert (set(folder.iterdir()), set(scratch.iterdir())) == (before, set())


def test_run_files_of_the_plans_say_the_same_as_the_day(folder, call):
    call("run", "day.toml")
    assert call("compare", "day.hold.nc", "day.raise.nc").stdout == call("compare", "day.toml").stdout


def test_one_day_under_two_file_names_with_other_plans_has_the_same_inputs(folder, call):
    other = (folder / "day.toml").read_text().replace("by = 0.05", "by = -0.05")
    (folder / "other.toml").write_text("# another way\n" + other.replace("A short morning", "The same morning"))
    result = call("compare", "day.toml", "other.toml", "--plan", "hold")
    assert result.exit_code == 0
    assert "The same canal and day in all" in result.stdout


def test_a_value_can_be_set_for_all(folder, call):
    assert "06:00 to 06:30 (30 min)" in call("compare", "day.toml", "--set", 'period.length="30 min"').stdout


def test_runs_of_other_inputs_are_refused_and_what_differs_is_told(weedy, call):
    result = call("compare", "day.toml", "weedy.toml", "--plan", "raise")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "canal file, sections.earth.roughness: 0.03 instead of 0.02" in result.stderr
    assert "--different-inputs" in result.stderr


def test_runs_of_other_inputs_are_compared_when_told(weedy, call):
    result = call("compare", "day.toml", "weedy.toml", "--plan", "raise", "--different-inputs")
    assert result.exit_code == 0
    assert "sections.earth.roughness: 0.03 instead of 0.02" in result.stdout
    assert "  A  day;" in result.stdout
    assert "B against A: the same orders" in result.stdout


@pytest.mark.parametrize(("options", "status"), [("", 0), ("--strict", 3), ("--alike", 4), ("--strict --alike", 3)])
def test_the_exit_status_serves_scripts(spilling, call, options, status):
    result = call("compare", "day.toml", *options.split())
    assert result.exit_code == status
    assert re.search(r"East lateral: delivery shortfall, \d+ min instead of none", result.stdout)


def test_a_plan_that_mends_an_incident_is_not_graver(spilling, call):
    assert call("compare", "day.toml", "--plan", "raise", "--plan", "hold", "--strict").exit_code == 0


def test_equal_runs_are_alike(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text() + "\n[plans.again]\norders = []\n")
    result = call("compare", "day.toml", "--plan", "hold", "--plan", "again", "--alike", "--strict")
    assert result.exit_code == 0
    assert "no difference of levels, discharges, deliveries or jumps" in " ".join(result.stdout.split())


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["day.toml", "--plan", "hold"], "found a day with one plan to compare; allowed: a day with several plans"),
        (["day.toml", "--plan", "hold", "--plan", "rasie"], 'did you mean "raise"?'),
        (["day.toml", "--plan", "hold", "--plan", "hold"], "day.toml, plan hold, is named twice"),
        (["canal.toml"], "canal.toml is a canal file: name a day file"),
        (["day.toml", "-o", "day.toml"], "day.toml is an input and would be lost"),
        (["day.toml", "-o", "nowhere/page.txt"], "there is no directory nowhere"),
    ],
)
def test_wrong_use_says_what_is_allowed(folder, call, arguments, words):
    result = call("compare", *arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert words in result.stderr


def test_runs_of_another_canal_are_refused(folder, call):
    canal = (folder / "canal.toml").read_text().replace("Alder branch", "Birch branch")
    (folder / "other_canal.toml").write_text(canal)
    (folder / "other.toml").write_text((folder / "day.toml").read_text().replace("canal.toml", "other_canal.toml"))
    result = call("compare", "day.toml", "other.toml", "--plan", "hold", "--different-inputs")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "different canals" in result.stderr


def test_the_table_goes_to_a_file_that_is_not_replaced_untold(folder, call):
    assert call("compare", "day.toml", "--format", "csv", "-o", "plans.csv").stdout == ""
    with (folder / "plans.csv").open(encoding="utf-8", newline="") as file:
        assert {row["run"] for row in csv.DictReader(file) if row["part"] == "indicator"} == {"hold", "raise"}
    result = call("compare", "day.toml", "-o", "plans.csv")
    assert (result.exit_code, result.stderr) == (
        2, "Error: plans.csv exists: name another file with -o, or replace it with --overwrite.\n",
    )  # fmt: skip
    assert call("compare", "day.toml", "-o", "plans.csv", "--overwrite").exit_code == 0
    assert (folder / "plans.csv").read_text(encoding="utf-8").startswith("Alder branch")
    assert not (folder / "plans.csv.partial").exists()


def test_json_can_be_read(folder, call):
    about = json.loads(call("compare", "day.toml", "--format", "json").stdout)
    assert [run["name"] for run in about["runs"]] == ["hold", "raise"]


def test_a_plan_that_fails_is_named(folder, call, monkeypatch):
    def failing(scenario, **_):
        raise RunError("no step found at 07:12")

    monkeypatch.setattr(toeline, "simulate", failing)
    result = call("compare", "day.toml")
    assert (result.exit_code, result.stdout) == (1, "")
    assert "Error: hold of day.toml cannot be compared: no step found at 07:12" in result.stderr


@pytest.mark.parametrize(
    ("places", "names"),
    [
        ([("a.nc", "early"), ("b.nc", "late")], ["early", "late"]),
        ([("a.nc", ""), ("b.nc", "late")], ["a", "late"]),
        ([("a.nc", "early"), ("b.nc", "early")], ["a", "b"]),
        ([("a.toml", "early"), ("a.toml", "late"), ("b.toml", "early")], ["a, early", "a, late", "b, early"]),
        ([("x/a.nc", "early"), ("y/a.nc", "early")], ["x/a.nc, early", "y/a.nc, early"]),
    ],
)
def test_names_tell_the_runs_apart(places, names):
    assert run_names([(Path(path), plan) for path, plan in places]) == names


def test_what_is_named_twice_is_refused_before_anything_is_run(folder, call, monkeypatch):
    monkeypatch.setattr("toeline.simulate", None)
    result = call("compare", "day.toml", "./day.toml")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "plan hold, is named twice" in result.stderr

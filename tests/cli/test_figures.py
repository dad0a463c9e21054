"""`toeline figures`, and `toeline rating --chart`."""

import csv
from pathlib import Path

import pytest

import toeline
from toeline.report.figures.catalogue import NAMES

LEVELS = ("--headwater", "51.4", "--tailwater", "49.8,50.6", "--opening", "0.2,0.4")


@pytest.fixture
def both_runs(folder: Path) -> list[str]:
    """The two plans of the day, run, without their output."""
    for plan in ("hold", "raise"):
        toeline.simulate(toeline.load_scenario(folder / "day.toml", plan=plan), folder / f"day.{plan}.nc").close()
    return ["day.hold.nc", "day.raise.nc"]


def test_figures_and_their_numbers_go_to_a_directory_that_is_made(folder, call, both_runs):
    result = call("figures", both_runs[0], "--to", "out/figures", "--figure", "levels", "--format", "svg")
    assert (result.exit_code, result.stderr) == (0, "")
    assert result.stdout.splitlines() == ["out/figures/day.hold.levels.svg", "out/figures/day.hold.levels.csv"]
    assert sorted(path.name for path in (folder / "out/figures").iterdir()) == [
        "day.hold.levels.csv", "day.hold.levels.svg",
    ]  # fmt: skip


def test_the_numbers_are_those_of_the_run(folder, call, both_runs):
    call("figures", both_runs[0], "--to", ".", "--figure", "levels", "--format", "svg")
    with (folder / "day.hold.levels.csv").open(newline="") as file:
        rows = list(csv.DictReader(file))
    with toeline.open_run(both_runs[0]) as run:
        levels = run["pool_tail_level"].sel(pool="Lower pool").values
    assert [float(row["Lower pool: level at the lower end [m]"]) for row in rows] == pytest.approx(levels, abs=6e-5)


def test_several_runs_are_compared_under_the_name_of_their_day(folder, call, both_runs):
    result = call("figures", *both_runs, "--to", ".", "--figure", "plans", "--format", "pdf")
    assert result.exit_code == 0
    assert result.stdout.splitlines() == ["day.plans.pdf", "day.plans.csv", "day.plans.pools.csv"]


def test_the_time_of_the_long_profile_can_be_chosen(folder, call, both_runs):
    call("figures", both_runs[0], "--to", ".", "--figure", "long_profile", "--format", "svg", "--at", "06:30")
    assert "water level at 06:30 [m]" in (folder / "day.hold.long_profile.csv").read_text()


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("--at", "half past"), 'Error: --at: found "half past"; allowed: a time such as'),
        (("--at", "12:00"), "Error: --at: found"),
        (("--figure", "level"), 'Error: --figure: there is no figure "level"; did you mean "levels"?'),
        (("--figure", "plans"), "Error: --figure plans: compares two runs or more"),
    ],
)
def test_what_cannot_be_drawn_is_told_and_nothing_is_written(arguments, message, folder, call, both_runs):
    result = call("figures", both_runs[0], "--to", "out", *arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr.startswith(message)
    assert not (folder / "out").exists()


def test_another_file_is_no_run(folder, call):
    result = call("figures", "day.toml", "--to", "out")
    assert result.exit_code == 2
    assert result.stderr == (
        "Error: day.toml is no file of results: run its day first, then name what `toeline run` wrote.\n"
    )


def test_what_stands_is_kept_unless_it_may_be_replaced(folder, call, both_runs):
    (folder / "day.hold.levels.csv").write_text("mine")
    arguments = ("figures", both_runs[0], "--to", ".", "--figure", "levels", "--format", "svg")
    result = call(*arguments)
    assert (result.exit_code, (folder / "day.hold.levels.csv").read_text()) == (2, "mine")
    assert not (folder / "day.hold.levels.svg").exists()
    assert call(*arguments, "--overwrite").exit_code == 0
    assert (folder / "day.hold.levels.csv").read_text() != "mine"


def test_help_names_every_figure(call):
    text = " ".join(call("figures", "--help").output.split())
    assert [name for name in NAMES if name not in text] == []


def test_a_chart_goes_to_a_file_with_its_numbers(folder, call):
    result = call("rating", "canal.toml", "Middle check", *LEVELS, "--chart", "middle.svg")
    assert result.exit_code == 0
    told = [line for line in result.stderr.splitlines() if not line.startswith("Compiling")]
    assert told == ["Chart: middle.svg", "Chart: middle.csv", "Chart: middle.discharge.csv"]
    with (folder / "middle.csv").open(newline="") as file:
        assert next(csv.DictReader(file))["headwater [m]"] == "51.4000"


def rows_by_opening(file: Path) -> dict[str, dict[str, str]]:
    with file.open(newline="") as lines:
        return {row["opening [m]"]: row for row in csv.DictReader(lines)}


def test_limits_of_the_chart_are_those_of_the_table(folder, call):
    call("rating", "canal.toml", "Middle check", *LEVELS, "--chart", "middle.svg", "--csv", "rating.csv")
    charted, rated = (rows_by_opening(folder / name) for name in ("middle.csv", "rating.csv"))
    assert charted["0.4000"]["modular limit [m]"] == rated["0.4000"]["modular_limit_level [m]"]
    assert charted["0.4000"]["protection limit [m]"] == rated["0.4000"]["protection_limit_level [m]"]


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("--chart", "middle.bmp"), "the name must end in .png, .svg, .pdf"),
        (("--chart", "nowhere/middle.png"), "there is no directory nowhere"),
        (("--headwater", "51,51.1,51.2,51.3", "--chart", "middle.png"), "found 4 headwaters; allowed: up to 3"),
        (("--opening", "0", "--chart", "middle.png"), "found no opening above 0"),
        (("--tailwater", "52", "--headwater", "51", "--chart", "middle.png"), "all tailwaters stand above"),
        (("--chart", "middle.png", "--csv", "middle.discharge.csv"), "the chart writes its own numbers there"),
        (("--chart", "middle.png", "--csv", "nowhere/rating.csv"), "there is no directory nowhere"),
    ],
)
def test_a_chart_that_cannot_be_drawn_is_refused(arguments, message, folder, call):
    result = call("rating", "canal.toml", "Middle check", *arguments)
    assert (result.exit_code, result.stdout, message in result.stderr) == (2, "", True)
    assert not list(folder.glob("middle*"))

"""The command as a whole: how it opens, and how it ends."""

import gc
import subprocess
import sys
from pathlib import Path

import click
import pytest
from click.testing import CliRunner

import toeline
from toeline.cli.main import COMMANDS, OBJECTS_BETWEEN_COLLECTIONS, LazyGroup, main
from toeline.errors import Fault, RunError, ScenarioError, UsageError

HEAVY = {"numpy", "numba", "xarray", "netCDF4", "matplotlib", "pydantic", "scipy", "rich", "bokeh", "fpdf", "icalendar"}
DRAWING = {"matplotlib", "bokeh", "fpdf", "icalendar"}
QUILLMERE = Path(__file__).parents[2] / "scenarios" / "quillmere"
DEMO, CANAL = str(QUILLMERE / "morning_increase.toml"), str(QUILLMERE / "canal.toml")


def imported_by(*arguments: str) -> set[str]:
    """Names of the packages that a fresh interpreter imports for these arguments."""
    command = [sys.executable, "-X", "importtime", "-m", "toeline", *arguments]
    result = subprocess.run(command, capture_output=True, text=True, check=True)
    modules = (line.rpartition("|")[2].strip() for line in result.stderr.splitlines() if "import time:" in line)
    return {module.partition(".")[0] for module in modules}


@pytest.mark.parametrize("arguments", [("--version",), *((*name, "--help") for name in [(), *zip(COMMANDS)])])
def test_help_opens_without_heavy_imports(arguments):
    packages = imported_by(*arguments)
    assert "click" in packages
    assert not packages & HEAVY


def test_checking_a_day_draws_nothing():
    assert not imported_by("check", DEMO) & DRAWING


def test_checking_a_canal_neither_compiles_nor_opens_results():
    assert not imported_by("check", CANAL) & (DRAWING | {"numba", "xarray", "pandas", "netCDF4"})


@pytest.mark.parametrize(
    ("command", "needed"),
    [("describe", set()), ("report", {"bokeh"}), ("orders", {"matplotlib", "fpdf", "icalendar"}), ("compare", set())],
)
def test_a_command_on_runs_imports_its_own_tools_alone(command, needed, folder, call):
    assert call("run", "day.toml").exit_code == 0
    runs = ["day.hold.nc", "day.raise.nc"] if command == "compare" else ["day.raise.nc"]
    packages = imported_by(command, *runs)
    assert packages & (DRAWING | {"numba", "pydantic"}) == needed


def test_a_run_imports_nothing_that_draws(folder):
    packages = imported_by("run", "day.toml", "--plan", "hold")
    assert {"numba", "xarray"} <= packages
    assert not packages & DRAWING


def test_the_modules_of_libraries_are_not_searched_for_garbage_again_and_again(folder, call):
    kept = gc.get_threshold()
    try:
        call("check", "day.toml")
        assert gc.get_threshold()[0] == OBJECTS_BETWEEN_COLLECTIONS
    finally:
        gc.set_threshold(*kept)


def test_help_names_every_command_and_exit_status_and_the_caution():
    text = CliRunner().invoke(main, ["--help"]).output
    for expected in (*COMMANDS, "Exit status", "130", "no state", "safe to enter"):
        assert expected in text


def test_the_version_is_that_of_the_package():
    assert toeline.__version__ in CliRunner().invoke(main, ["--version"]).output


def test_a_mistyped_command_names_the_nearest():
    result = CliRunner().invoke(main, ["rnu"])
    assert result.exit_code == 2
    assert result.stderr == 'Error: there is no command "rnu"; did you mean "run"?\n'
    assert result.stdout == ""


def failing_group(error: BaseException) -> click.Command:
    """A group that finds only the command `fail`, which raises."""

    @click.command()
    def fail() -> None:
        raise error

    class Group(LazyGroup):
        def get_command(self, ctx, cmd_name):
            return fail

    return Group()


@pytest.mark.parametrize(
    ("error", "status", "message"),
    [
        (UsageError("day.nc exists"), 2, "Error: day.nc exists\n"),
        (RunError("stopped at 07:12"), 1, "Error: stopped at 07:12\n"),
        (KeyboardInterrupt(), 130, "Stopped.\n"),
        (PermissionError(13, "Permission denied", "day.nc"), 1, "Error: day.nc: Permission denied\n"),
    ],
)
def test_an_error_for_the_user_is_a_message_and_an_exit_status(error, status, message):
    result = CliRunner().invoke(failing_group(error), ["run"])
    assert (result.exit_code, result.stderr, result.stdout) == (status, message, "")


def test_faults_stand_one_a_line_and_are_counted():
    faults = [Fault("day.toml", 3, "title", "required, but not given"), Fault("canal.toml", 2, "units", "found 3")]
    result = CliRunner().invoke(failing_group(ScenarioError(faults)), ["run"])
    assert result.exit_code == 2
    assert result.stderr.splitlines() == [
        "canal.toml:2: units: found 3",
        "day.toml:3: title: required, but not given",
        "Error: 2 faults in the input; nothing was run.",
    ]


def test_a_fault_of_the_program_itself_keeps_its_traceback():
    result = CliRunner().invoke(failing_group(ZeroDivisionError()), ["run"])
    assert isinstance(result.exception, ZeroDivisionError)

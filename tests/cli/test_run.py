"""`toeline run`: exit statuses, messages and files."""

import os
import pty
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

import toeline
from toeline import open_run
from toeline.errors import RunError
from toeline.findings.incidents import incidents
from toeline.findings.limits import limits_of_run
from toeline.results.netcdf_writer import NetcdfSink


@pytest.fixture
def one_plan(folder: Path) -> Path:
    """A day with no plan."""
    day = folder / "day.toml"
    day.write_text(day.read_text().partition("[plans.hold]")[0])
    return day


def files(folder: Path) -> set[str]:
    return {file.name for file in folder.iterdir()} - {"canal.toml", "day.toml"}


def test_a_day_is_run_told_and_written(one_plan, folder, call):
    result = call("run", "day.toml")
    assert result.exit_code == 0
    assert result.stdout.startswith("Alder branch: A short morning\n")
    assert result.stdout.rstrip().endswith("Results: day.nc")
    assert files(folder) == {"day.nc"}


def test_each_plan_is_told_and_written_to_its_own_file(folder, call):
    result = call("run", "day.toml")
    assert (result.exit_code, files(folder)) == (0, {"day.hold.nc", "day.raise.nc"})
    assert result.stdout.index("plan hold;") < result.stdout.index("plan raise;")


def test_several_plans_end_in_what_went_wrong_under_each(folder, call):
    _, _, told = call("run", "day.toml").stdout.partition("ALL PLANS\n")
    assert "hold: no incident, which makes no place safe" in told
    assert "raise: " in told
    assert told.rstrip().endswith("Side by side: toeline compare day.toml")


def test_one_plan_can_be_picked(folder, call):
    assert call("run", "day.toml", "--plan", "raise").exit_code == 0
    assert call("run", "day.toml", "--plan", "raise", "-o", "picked.nc").exit_code == 0
    assert files(folder) == {"day.raise.nc", "picked.nc"}


def test_an_unknown_plan_names_the_nearest(folder, call):
    result = call("run", "day.toml", "--plan", "rasie")
    assert (result.exit_code, result.stdout, files(folder)) == (2, "", set())
    assert 'did you mean "raise"?' in result.stderr


def test_a_canal_file_is_not_taken_for_a_day(folder, call):
    result = call("run", "canal.toml")
    assert (result.exit_code, result.stdout, files(folder)) == (2, "", set())
    assert "canal.toml is a canal file: name a day file" in result.stderr


def test_a_value_can_be_set_for_one_run(one_plan, call):
    assert "06:00 to 06:30 (30 min)" in call("run", "day.toml", "--set", 'period.length="30 min"').stdout


def test_a_fault_in_a_set_value_is_told_and_nothing_is_written(one_plan, folder, call):
    result = call("run", "day.toml", "--set", 'period.lenght="30 min"')
    assert (result.exit_code, result.stdout, files(folder)) == (2, "", set())
    assert 'did you mean "length"?' in result.stderr


def test_what_stands_is_refused_before_any_work(one_plan, folder, call, monkeypatch):
    (folder / "day.nc").write_text("mine")
    monkeypatch.setattr(toeline, "simulate", None)
    result = call("run", "day.toml")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "Error: day.nc exists: name another file with -o, or replace it with --overwrite." in result.stderr
    assert (folder / "day.nc").read_text() == "mine"


def test_an_earlier_run_is_replaced_when_told(one_plan, call):
    call("run", "day.toml")
    assert call("run", "day.toml", "--overwrite").exit_code == 0


@pytest.mark.parametrize(("arguments", "status"), [([], 0), (["--strict"], 3)])
def test_an_incident_changes_the_exit_status_only_where_strict(one_plan, folder, call, arguments, status):
    canal = folder / "canal.toml"
    canal.write_text(canal.read_text().replace('kind = "demand"', 'kind = "demand"\nsill_level = 51.8'))
    result = call("run", "day.toml", *arguments)
    assert result.exit_code == status
    assert "East lateral: delivery shortfall" in result.stdout


def test_a_limit_that_is_passed_is_an_incident_and_the_file_carries_it(one_plan, folder, call):
    canal = folder / "canal.toml"
    limit = 'kind = "moves"\nwindow = "1 h"\nlimit = 1\n'
    level = 'kind = "below"\nlimit = 60.0\npools = ["Upper pool"]\n'
    for number, keys in enumerate((limit, level), start=1):
        canal.write_text(f'{canal.read_text()}\n[[limits]]\n{keys}source = "standing order {number}"\n')
    result = call("run", "day.toml", "--strict")
    assert result.exit_code == 3
    assert "Upper pool, lower end: level below the limit" in result.stdout
    with open_run(folder / "day.nc") as run:
        assert [limit.source for limit in limits_of_run(run)] == ["standing order 1", "standing order 2"]
        assert "level below the limit" in [incident.what for incident in incidents(run)]


def failing(error: BaseException, partial: str | None = None):
    """A simulation that fails, after it has written something if told so."""

    def simulate(scenario, output, *, overwrite, resume, progress):
        if partial:
            Path(partial).touch()
        raise error

    return simulate


def test_a_run_that_fails_says_where_and_what_is_left(one_plan, call, monkeypatch):
    monkeypatch.setattr(toeline, "simulate", failing(RunError("no step found at 07:12"), "day.nc.partial"))
    result = call("run", "day.toml")
    assert (result.exit_code, result.stdout) == (1, "")
    assert result.stderr.splitlines()[-2:] == [
        "Error: no step found at 07:12",
        "What was done so far is in day.nc.partial; see it with: toeline describe day.nc.partial",
    ]


def test_one_plan_that_fails_does_not_keep_the_others_from_running(folder, call, monkeypatch):
    monkeypatch.setattr(toeline, "simulate", failing(RunError("no step found")))
    result = call("run", "day.toml")
    assert (result.exit_code, result.stderr.count("no step found")) == (1, 2)


def test_ctrl_c_says_what_is_left(one_plan, call, monkeypatch):
    monkeypatch.setattr(toeline, "simulate", failing(KeyboardInterrupt(), "day.nc.partial"))
    result = call("run", "day.toml")
    assert (result.exit_code, result.stdout) == (130, "")
    assert result.stderr.splitlines()[-1].startswith("Stopped by Ctrl-C. What was done so far is in day.nc.partial")


def test_ctrl_c_before_anything_is_written_says_so(one_plan, call, monkeypatch):
    monkeypatch.setattr(toeline, "simulate", failing(KeyboardInterrupt()))
    assert call("run", "day.toml").stderr.endswith("Stopped by Ctrl-C. Nothing was written.\n")


def stopped_after_a_checkpoint():
    """The simulation, as if Ctrl-C came just after the first checkpoint."""
    simulate = toeline.simulate

    def simulate_until(*given, progress, **options):
        def at_stop(fraction: float) -> None:
            raise KeyboardInterrupt

        return simulate(*given, progress=at_stop, **options)

    return simulate_until


def test_a_stopped_run_is_gone_on_with_when_told(one_plan, folder, call, monkeypatch):
    with monkeypatch.context() as stopped:
        stopped.setattr(toeline, "simulate", stopped_after_a_checkpoint())
        stopped.setattr(NetcdfSink, "is_copy_due", True)
        result = call("run", "day.toml")
    assert result.stderr.splitlines()[-1].endswith("toeline describe day.nc.partial; go on with it with: --resume")
    assert "go on with it with --resume" in call("run", "day.toml").stderr
    resumed = call("run", "day.toml", "--resume")
    assert (resumed.exit_code, files(folder)) == (0, {"day.nc"})
    assert resumed.stdout == call("run", "day.toml", "--overwrite").stdout


def test_plans_that_are_complete_are_shown_and_those_not_yet_begun_begin(folder, call):
    call("run", "day.toml", "--plan", "raise")
    before = (folder / "day.raise.nc").read_bytes()
    result = call("run", "day.toml", "--resume")
    assert (result.exit_code, files(folder)) == (0, {"day.hold.nc", "day.raise.nc"})
    assert "day.raise.nc is complete." in result.stderr
    assert result.stdout.index("plan hold;") < result.stdout.index("plan raise;")
    assert (folder / "day.raise.nc").read_bytes() == before


def test_a_run_whose_checkpoint_is_lost_is_said_to_begin_anew(one_plan, call):
    call("run", "day.toml")
    Path("day.nc").rename("day.nc.partial")
    result = call("run", "day.toml", "--resume")
    assert result.exit_code == 0
    assert "day.nc.partial has no day.nc.checkpoint beside it: its run begins anew." in result.stderr


def test_a_complete_run_of_other_inputs_is_not_taken_for_the_one_to_go_on_with(one_plan, call):
    call("run", "day.toml", "--set", 'period.length="30 min"')
    result = call("run", "day.toml", "--resume")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "day.nc was made from other inputs, and no run can go on from it with these" in result.stderr


def test_going_on_and_beginning_anew_are_not_asked_for_together(one_plan, call):
    result = call("run", "day.toml", "--resume", "--overwrite")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "give one of them" in result.stderr


def wait_for_checkpoint(checkpoint: Path, run: subprocess.Popen[str]) -> None:
    """Wait until rows are safe and the state after them too, or the run has ended."""
    while run.poll() is None and not checkpoint.exists():
        time.sleep(0.05)


def test_ctrl_c_leaves_a_file_that_can_be_described(one_plan, folder):
    long_day = ("--set", 'period.length="60 d"', "--set", 'output.every="1 s"')
    command = [sys.executable, "-m", "toeline", "run", "day.toml", *long_day]
    run = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    wait_for_checkpoint(folder / "day.nc.checkpoint", run)
    run.send_signal(signal.SIGINT)
    output, errors = run.communicate()
    assert (run.returncode, output) == (130, "")
    assert errors.splitlines()[-1].startswith("Stopped by Ctrl-C. What was done so far is in day.nc.partial")
    page = subprocess.run(
        [sys.executable, "-m", "toeline", "describe", "day.nc.partial"], capture_output=True, text=True, check=True
    )
    assert "run stopped early" in page.stdout
    assert files(folder) == {"day.nc.partial", "day.nc.checkpoint"}


def on_a_terminal(*arguments: str, **environment: str) -> str:
    """What `toeline` draws on its error stream where that is a terminal."""
    mine, its = pty.openpty()
    command = [sys.executable, "-m", "toeline", *arguments]
    surroundings = os.environ | {"TERM": "xterm"} | environment
    run = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=its, env=surroundings)
    os.close(its)
    drawn = b""
    while chunk := _read(mine):
        drawn += chunk
    os.close(mine)
    assert run.wait() == 0
    return drawn.decode()


def _read(terminal: int) -> bytes:
    try:
        return os.read(terminal, 4096)
    except OSError:  # Linux: the other end is closed
        return b""


def test_a_terminal_gets_a_progress_bar_and_no_colour_where_none_is_wanted(folder):
    drawn = on_a_terminal("run", "day.toml", "--plan", "hold", NO_COLOR="1")
    assert "hold" in drawn
    assert "\x1b[3" not in drawn.replace("\x1b[?", "")

"""`toeline verify`: exit statuses, messages and files."""

import json

import pytest

from toeline.errors import RunError
from toeline.findings import closure
from toeline.studies import verify as study

pytestmark = pytest.mark.usefixtures("folder")


def files(folder) -> set[str]:
    return {file.name for file in folder.iterdir()} - {"canal.toml", "day.toml"}


def test_every_plan_has_its_page_and_no_file_is_written(folder, call):
    result = call("verify", "day.toml")
    assert result.exit_code == 0
    assert result.stdout.startswith("Alder branch: A short morning\n")
    assert result.stdout.index("plan hold;") < result.stdout.index("plan raise;")
    assert result.stdout.count("IN SHORT") == 2
    assert files(folder) == set()


def test_one_plan_can_be_picked_and_a_value_be_set(call):
    result = call("verify", "day.toml", "--plan", "raise", "--set", "period.spacing=150.0")
    assert result.stdout.count("IN SHORT") == 1
    assert "spacing 75 m instead of 150 m" in " ".join(result.stdout.split())


def test_the_page_can_go_to_a_file(folder, call):
    result = call("verify", "day.toml", "--plan", "hold", "-o", "page.txt")
    assert (result.exit_code, result.stdout, files(folder)) == (0, "", {"page.txt"})
    assert (folder / "page.txt").read_text().startswith("Alder branch: A short morning\n")


def test_a_file_that_stands_is_refused_before_any_work(folder, call, monkeypatch):
    (folder / "page.txt").write_text("mine")
    monkeypatch.setattr(study, "verify", None)
    result = call("verify", "day.toml", "-o", "page.txt")
    assert (result.exit_code, (folder / "page.txt").read_text()) == (2, "mine")
    assert "page.txt exists: name another file with -o, or replace it with --overwrite." in result.stderr


def test_a_file_that_stands_is_replaced_when_told(folder, call):
    (folder / "page.txt").write_text("mine")
    assert call("verify", "day.toml", "--plan", "hold", "-o", "page.txt", "--overwrite").exit_code == 0
    assert (folder / "page.txt").read_text() != "mine"


@pytest.mark.parametrize(("output", "words"), [("day.toml", "would be lost"), ("there/page.txt", "no directory")])
def test_an_output_that_cannot_be_is_refused(call, output, words):
    result = call("verify", "day.toml", "-o", output, "--overwrite")
    assert (result.exit_code, result.stdout) == (2, "")
    assert words in result.stderr


def test_numbers_can_be_had_as_json(call):
    result = call("verify", "day.toml", "--format", "json")
    assert [entry["plan"] for entry in json.loads(result.stdout)] == ["hold", "raise"]


def test_a_fault_in_the_input_is_told_with_its_place(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace("spacing = 200.0", "spacing = 0.2"))
    result = call("verify", "day.toml")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "day.toml:7: period spacing: found 0.2" in result.stderr


def test_a_canal_file_is_not_taken_for_a_day(call):
    assert "canal.toml is a canal file" in call("verify", "canal.toml").stderr


@pytest.mark.parametrize(("arguments", "status"), [([], 0), (["--strict"], 3)])
def test_a_test_that_is_not_passed_changes_the_exit_status_only_where_strict(call, monkeypatch, arguments, status):
    monkeypatch.setattr(closure, "LEDGER_TOLERANCE", -1.0)
    result = call("verify", "day.toml", "--plan", "hold", *arguments)
    assert result.exit_code == status
    assert "The mass test is NOT passed" in result.stdout


def failing(error: BaseException, plan: str | None = None):
    """A study whose every run fails, or those of one plan."""
    simulate = study.simulate

    def simulate_or_fail(scenario, **options):
        if plan in (None, scenario.plan):
            raise error
        return simulate(scenario, **options)

    return simulate_or_fail


def test_a_plan_that_cannot_be_run_does_not_keep_the_others_from_their_page(call, monkeypatch):
    monkeypatch.setattr(study, "simulate", failing(RunError("no step found"), "hold"))
    result = call("verify", "day.toml")
    assert result.exit_code == 1
    assert "Error: hold: no step found" in result.stderr
    assert result.stdout.count("IN SHORT") == 1


def test_ctrl_c_ends_it_with_nothing_written(folder, call, monkeypatch):
    monkeypatch.setattr(study, "simulate", failing(KeyboardInterrupt()))
    result = call("verify", "day.toml", "-o", "page.txt")
    assert (result.exit_code, result.stdout, files(folder)) == (130, "", set())
    assert result.stderr.endswith("Stopped.\n")


def test_a_narrow_terminal_gets_a_narrow_page(call, monkeypatch):
    monkeypatch.setattr("toeline.cli.verify.page_width", lambda: 44)
    page = call("verify", "day.toml", "--plan", "raise").stdout
    assert max(map(len, page.splitlines())) <= 44

"""`toeline orders`: files, messages and exit statuses."""

import csv
from pathlib import Path

import pytest
import vobject
from pypdf import PdfReader

from toeline.results.dataset import open_run

FILES = {f"{gate}{suffix}" for gate in ("Middle_check", "Last_check") for suffix in (".pdf", ".txt", ".csv", ".ics")}


@pytest.fixture
def run(folder, call) -> str:
    assert call("run", "day.toml", "--plan", "raise").exit_code == 0
    return "day.raise.nc"


def names(folder: Path) -> set[str]:
    return {file.name for file in folder.iterdir()}


def test_each_gate_gets_its_sheet_in_every_format(run, folder, call):
    result = call("orders", run)
    assert (result.exit_code, names(folder / "day.raise.orders")) == (0, FILES)
    assert result.stdout.startswith("Order sheets of day.raise.nc: plan raise, revision 0\n")
    assert "Middle check 1 order Middle_check" in " ".join(result.stdout.split())


def test_all_formats_tell_the_same_order(run, folder, call):
    call("orders", run)
    sheets = folder / "day.raise.orders"
    with (sheets / "Middle_check.csv").open(newline="") as file:
        (row,) = csv.DictReader(file)
    event = vobject.readOne((sheets / "Middle_check.ics").read_text()).vevent
    page = " ".join(PdfReader(sheets / "Middle_check.pdf").pages[0].extract_text().split())
    assert row["move"] == "open by 0.050 m"
    assert event.summary.value == "Middle check: open by 0.050 m"
    assert "OPEN BY 0.050 m" in page
    assert "OPEN BY 0.050 m" in (sheets / "Middle_check.txt").read_text()
    assert f"From {float(row['opening_from [m]']):.3f} m to {float(row['opening_to [m]']):.3f} m." in page


def test_formats_paper_and_folder_can_be_chosen(run, folder, call):
    arguments = ("-o", "sheets", "--format", "pdf", "--paper", "Letter", "--alarm", "0", "--allow", "3 cm")
    assert call("orders", run, *arguments).exit_code == 0
    assert names(folder / "sheets") == {name for name in FILES if name.endswith((".pdf", ".ics"))}
    page = PdfReader(folder / "sheets" / "Middle_check.pdf").pages[0]
    assert (float(page.mediabox.width), float(page.mediabox.height)) == (612.0, 792.0)
    assert "VALARM" not in (folder / "sheets" / "Middle_check.ics").read_text()


def test_the_gatekeepers_of_the_canal_file_get_the_sheets(folder, call):
    canal = folder / "canal.toml"
    gate = 'name = "Last check"\n'
    canal.write_text(canal.read_text().replace(gate, f'{gate}gatekeeper = "Mill beat"\n'))
    call("run", "day.toml", "--plan", "raise")
    assert call("orders", "day.raise.nc", "--format", "text").exit_code == 0
    assert "Mill_beat.txt" in names(folder / "day.raise.orders")


def test_what_the_planner_should_look_at_first_is_told(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace("by = 0.05", "by = 5.0"))
    call("run", "day.toml", "--plan", "raise")
    told = call("orders", "day.raise.nc").stderr
    assert "1 order not carried out as given. Look before the sheets go out: toeline describe day.raise.nc" in told


def test_sheets_that_exist_are_kept(run, folder, call):
    call("orders", run)
    (folder / "day.raise.orders" / "Last_check.txt").write_text("mine")
    result = call("orders", run)
    assert (result.exit_code, result.stdout) == (2, "")
    assert "--overwrite" in result.stderr
    assert (folder / "day.raise.orders" / "Last_check.txt").read_text() == "mine"


def test_a_changed_plan_is_issued_as_a_revision(run, folder, call):
    call("orders", run)
    day = folder / "day.toml"
    day.write_text(day.read_text().replace('at = "06:20"', 'at = "06:25"'))
    call("run", "day.toml", "--plan", "raise", "--overwrite")
    result = call("orders", run, "--overwrite")
    assert (result.exit_code, names(folder / "day.raise.orders")) == (0, FILES)
    assert "plan raise, revision 1" in result.stdout
    assert "revision 1" in (folder / "day.raise.orders" / "Middle_check.txt").read_text()
    event = vobject.readOne((folder / "day.raise.orders" / "Middle_check.ics").read_text()).vevent
    assert event.sequence.value == "1"


def test_the_same_run_gives_the_same_files(run, folder, call):
    call("orders", run)
    sheets = folder / "day.raise.orders"
    before = {file.name: file.read_bytes() for file in sheets.iterdir()}
    call("orders", run, "--overwrite")
    assert {file.name: file.read_bytes() for file in sheets.iterdir()} == before


def test_calendars_that_nobody_holds_any_more_are_named(run, folder, call):
    call("orders", run)
    (folder / "day.raise.orders" / "Last_check.ics").rename(folder / "day.raise.orders" / "Old_beat.ics")
    assert "not written now: Old_beat.ics" in call("orders", run, "--overwrite").stderr


def test_a_calendar_that_cannot_be_read_is_not_replaced(run, folder, call):
    sheets = folder / "day.raise.orders"
    sheets.mkdir()
    (sheets / "Middle_check.ics").write_text("mine")
    result = call("orders", run, "--overwrite")
    assert (result.exit_code, names(sheets)) == (2, {"Middle_check.ics"})
    assert (sheets / "Middle_check.ics").read_text() == "mine"
    assert "no calendar that can be revised" in result.stderr


def test_nothing_is_left_half_written(run, folder, call, monkeypatch):
    call("orders", run)
    sheets = folder / "day.raise.orders"
    before = {file.name: file.read_bytes() for file in sheets.iterdir()}

    def full_disk(path: Path, content: bytes) -> None:
        if path.name.startswith("Last"):
            raise OSError(28, "No space left on device", str(path))
        path.touch()

    monkeypatch.setattr(Path, "write_bytes", full_disk)
    result = call("orders", run, "--overwrite", "--paper", "Letter")
    assert (result.exit_code, {file.name: file.read_bytes() for file in sheets.iterdir()}) == (1, before)
    assert "No space left on device" in result.stderr


def test_a_day_file_is_not_taken_for_a_run(folder, call):
    result = call("orders", "day.toml")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "day.toml is no file of results: run its day first" in result.stderr


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        (("--by", "gatekeeper"), 'with the key "gatekeeper"'),
        (("--allow", "much"), "--allow: found"),
        (("--allow=-1 cm",), "from 0 to 0.50 m"),
        (("--allow", "3"), "--allow: found 3; allowed: one length, from 0 to 0.50 m"),
        (("-o", "no/such"), "there is no directory no"),
    ],
)
def test_what_cannot_be_done_is_refused_with_the_reason(run, folder, call, arguments, reason):
    result = call("orders", run, *arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert reason in result.stderr
    assert not (folder / "day.raise.orders").exists()


def test_a_run_that_stopped_early_gives_no_sheets(run, folder, call):
    from netCDF4 import Dataset

    with Dataset(run, "a") as file:
        file.outcome = "stopped at 2031-05-04T04:30:00+00:00: interrupted"
    result = call("orders", run)
    assert (result.exit_code, result.stdout) == (2, "")
    assert "not complete" in result.stderr


def test_a_run_stopped_before_its_first_row_has_no_sheets(run, folder, call):
    with open_run(folder / run) as whole:
        whole.isel(time=slice(0)).load().to_netcdf(folder / "stopped.nc")
    result = call("orders", "stopped.nc")
    assert result.exit_code == 2
    assert "stopped.nc was stopped before anything reached the disk" in result.stderr
    assert not (folder / "stopped.orders").exists()

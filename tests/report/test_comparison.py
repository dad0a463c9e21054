"""Runs side by side: the page, CSV and JSON."""

import csv
import io
import json
from pathlib import Path

import numpy as np
import pytest

from toeline.constants import CAUTION
from toeline.findings.comparison import compare
from toeline.findings.input_differences import InputDifference
from toeline.report.comparison import comparison_page
from toeline.report.comparison_rows import COLUMNS, comparison_csv, comparison_json
from toeline.report.input_words import MOST_TOLD, difference_words, refusal_words
from toeline.report.run_clock import RunClock
from toeline.units import Display, UnitSystem

GATES = ["Middle check", "Last check"]


def orders(*entries: tuple[float, str, float]) -> dict[str, np.ndarray]:
    """Orders by hours from the start, gate and change of opening."""
    hours, gates, moves = zip(*entries, strict=True)
    count = len(entries)
    return {
        "order_time": np.array(hours) * 3600.0,
        "order_gate": np.array(gates, dtype=object),
        "order_source": np.full(count, "schedule", dtype=object),
        "order_kind": np.ones(count, dtype=np.int8),
        "order_value": np.array(moves),
        "order_opening_before": np.full(count, 0.40),
        "order_opening_after": 0.40 + np.array(moves),
        "order_completed": np.array(hours) * 3600.0,
        "order_status": np.zeros(count, dtype=np.int8),
        "order_reason": np.full(count, "", dtype=object),
    }


def jump_beyond(rows: int) -> dict[str, np.ndarray]:
    """The jump below the Middle check ends beyond the protection for so many output steps of 5 minutes."""
    is_beyond = np.zeros((49, 2), dtype=bool)
    is_beyond[14 : 14 + rows, 0] = True
    return {"jump_state": np.where(is_beyond, 4, 1), "protection_margin": np.where(is_beyond, -0.14, 0.30)}


@pytest.fixture
def runs(invented_run):
    """Two plans: the other moves later and less, and its jump is beyond the protection for a shorter time."""
    level = np.full((49, 2), 51.0)
    higher = level.copy()
    higher[20:30, 1] += 0.12
    return {
        "early": invented_run(**orders((1.0, "Middle check", 0.10)), **jump_beyond(12), pool_tail_level=level),
        "late": invented_run(
            **orders((1.5, "Middle check", 0.06), (2.0, "Last check", 0.05)), **jump_beyond(6), pool_tail_level=higher
        ),
    }


def page_of(runs, width: int = 80, system: UnitSystem = UnitSystem.metric) -> str:
    return comparison_page(compare(runs), RunClock(next(iter(runs.values()))), Display(system), width=width)


def section(page: str, title: str) -> str:
    """The lines of one section, in one line."""
    _, _, after = page.partition(f"\n\n{title.upper()}\n")
    return " ".join(after.partition("\n\n")[0].split())


def test_differences_come_first_then_incidents_and_indicators(runs):
    page = page_of(runs)
    titles = ("INPUTS", "IN SHORT", "SCHEDULES", "LARGEST DIFFERENCES", "INCIDENTS", "INDICATORS", "CAUTION")
    places = [page.index(f"\n{title}\n") for title in titles]
    assert places == sorted(places)


def test_the_title_says_what_is_compared_with_what_and_when(runs):
    lines = page_of(runs).splitlines()[:4]
    assert lines == [
        "Alder branch: A short morning",
        "  A  early; the others are compared with it",
        "  B  late",
        "  Sunday 2031-05-04, 06:00 to 10:00 (4 h)",
    ]


def test_schedules_differ_in_words(runs):
    assert section(page_of(runs), "Schedules") == (
        "B against A: 2 of 2 orders differ "
        "B raises Middle check by 6 cm at 07:30 instead of 10 cm at 07:00 "
        "B also raises Last check by 5 cm at 08:00"
    )


def test_in_short_tells_incidents_and_since_when_the_runs_differ(runs):
    assert section(page_of(runs), "In short") == (
        "B against A Middle check: jump beyond protection, 28 min instead of 58 min "
        "different from 07:40 on; seen first in the level at the lower end of Lower pool"
    )


def test_the_largest_difference_has_its_place_and_time(runs):
    assert section(page_of(runs), "Largest differences").endswith("B level at the lower end Lower pool +12 cm 07:40")


def test_incidents_stand_side_by_side_with_their_worst_value(runs):
    assert "Middle check 58 min, 0.14 m 28 min, 0.14 m" in section(page_of(runs), "Incidents")


def test_the_best_value_is_marked_and_not_called_safe(runs):
    told = section(page_of(runs), "Indicators")
    assert "hours with a jump beyond protection Middle check 58 min 28 min*" in told
    assert "* the best value of its row. Best is not safe." in told


def test_what_is_the_same_is_only_named(runs):
    same = section(page_of(runs), "Indicators").partition("The same in all runs: ")[2]
    assert "modular-limit crossings at 2 places" in same
    assert "hours with a jump beyond protection at 1 more" in same


def test_equal_runs_have_no_difference(invented_run):
    page = page_of({"a": invented_run(), "b": invented_run()})
    assert section(page, "Schedules") == "B against A: the same orders"
    assert "no incident in either" in section(page, "In short")
    assert "no difference of levels, discharges, deliveries or jumps from A" in section(page, "In short")
    assert section(page, "Largest differences").startswith("None: ")
    assert section(page, "Indicators").startswith("The same in all runs: ")


def test_the_caution_ends_the_page(runs):
    assert " ".join(page_of(runs).split()).endswith(CAUTION)


@pytest.mark.parametrize("width", [40, 60, 80])
@pytest.mark.parametrize("count", [2, 5, 9])
def test_the_page_keeps_to_its_width_with_many_runs(runs, width, count):
    many = {f"plan number {number}": runs["late" if number else "early"] for number in range(count)}
    assert max(len(line) for line in page_of(many, width).splitlines()) <= width


def test_us_customary_units(runs):
    page = page_of(runs, system=UnitSystem.us_customary)
    assert "by 0.20 ft at 07:30 instead of 0.33 ft at 07:00" in " ".join(page.split())
    assert "+0.39 ft 07:40" in page


def test_inputs_and_versions_that_differ_are_told(runs):
    settings = {"canal": {"sections": {"earth": {"roughness": 0.02}}}, "day": {}}
    weedy = {"canal": {"sections": {"earth": {"roughness": 0.03}}}, "day": {}}
    runs["early"].attrs["resolved_settings"] = json.dumps(settings)
    runs["late"].attrs |= {"resolved_settings": json.dumps(weedy), "shared_input_hash": "1", "source": "Toeline 9.9"}
    told = section(page_of(runs), "Inputs")
    assert "canal file, sections.earth.roughness: 0.03 instead of 0.02" in told
    assert "Made by different versions, which may compute differently: A by Toeline 0.1.0, B by Toeline 9.9." in told


def test_runs_of_other_dates_and_output_times_are_told(runs):
    runs["late"] = runs["late"].isel(time=slice(None, None, 2))
    runs["late"] = runs["late"].assign_coords(time=runs["late"].time + np.timedelta64(9, "D"))
    told = section(page_of(runs), "Inputs")
    assert "each is counted from its own start, and told by the clock of A" in told
    assert "at the 25 output times that all runs have (A 49, B 25)" in told


def test_a_cut_period_and_an_early_stop_are_told(runs, invented_run):
    stopped = invented_run("stopped at 08:00: no step").isel(time=slice(0, 25), profile_time=slice(0, 3))
    page = " ".join(page_of({"early": runs["early"], "stopped": stopped}).split())
    assert "B stopped; stopped at 08:00: no step" in page
    assert "06:00 to 08:00 (2 h), the time that all of them cover" in page
    assert "Alder branch: run stopped early, not so in A" in page


@pytest.mark.parametrize(
    ("difference", "words"),
    [
        (InputDifference(("canal", "gates", "Mill check", "sill_level"), 99.6, 99.7, "length"),
         "canal file, gates.Mill check.sill_level: 99.7 m instead of 99.6 m"),
        (InputDifference(("day", "period", "length_ms"), 3_600_000, 5_400_000, "duration"),
         "day file, period.length: 1.5 h instead of 1 h"),
        (InputDifference(("day", "period", "local_inertia"), False, True, None),
         "day file, period.local_inertia: true instead of false"),
        (InputDifference(("canal", "gates", "Mill check", "bays"), 2, None, None),
         "canal file, gates.Mill check.bays: not given instead of 2"),
        (InputDifference(("canal", "gates", "Mill check"), None, {"bays": 2}, None),
         "canal file, gates.Mill check: given instead of not given"),
        (InputDifference(("canal", "gates", "Mill check", "avoid_openings"), [[0.0, 0.1]], [[0.0, 0.2]], "length"),
         "canal file, gates.Mill check.avoid_openings: other values"),
        (InputDifference(("day", "inflow"), {"times": [0], "values": [8.0], "shape": "steps"},
                         {"times": [0, 1_800_000], "values": [8.0, 9.0], "shape": "steps"}, "discharge"),
         "day file, inflow: 9 m3/s instead of 8 m3/s at 06:30, where they differ most"),
        (InputDifference(("start_file_digest",), "1", "2", None),
         "the state that the run starts from: another file, or the same file with other contents"),
    ],
)  # fmt: skip
def test_a_setting_in_words(difference, words, runs, metric):
    assert difference_words(difference, RunClock(runs["early"]), metric) == words


def test_a_refusal_says_what_differs_and_how_to_compare_all_the_same(runs, metric):
    settings = {"canal": {f"key {number:02d}": 1 for number in range(MOST_TOLD + 3)}}
    runs["early"].attrs["resolved_settings"] = json.dumps(settings)
    runs["late"].attrs |= {"resolved_settings": json.dumps({"canal": {}}), "shared_input_hash": "1"}
    lines = refusal_words(compare(runs), RunClock(runs["early"]), metric).splitlines()
    assert lines[1:3] == ["late, against early:", "  canal file, key 00: not given instead of 1"]
    assert lines[-2:] == [
        "  and 3 more; --format json lists every one",
        "Compare them all the same with --different-inputs.",
    ]


def read_csv(runs) -> list[dict[str, str]]:
    sheet = comparison_csv(compare(runs), RunClock(runs["early"]), Display(UnitSystem.metric))
    return list(csv.DictReader(io.StringIO(sheet, newline="")))


def test_csv_has_stable_columns_and_one_row_an_indicator_place_and_run(runs):
    rows = read_csv(runs)
    assert tuple(rows[0]) == COLUMNS
    keys = [(row["part"], row["run"], row["name"], row["where"]) for row in rows if row["part"] == "indicator"]
    assert len(set(keys)) == len(keys)
    (row,) = [row for row in rows if row["name"] == "hours with a jump beyond protection" and row["run"] == "late"
              and row["where"] == "Middle check"]  # fmt: skip
    hours = [float(row[column]) for column in ("value", "first_value", "difference")]
    assert hours == pytest.approx([0.4697, 0.9697, -0.5], abs=1e-4)
    assert (row["unit"], row["best"]) == ("h", "true")


def test_csv_tells_incidents_also_of_a_run_that_has_none(runs, invented_run):
    rows = read_csv({"early": runs["early"], "quiet": invented_run()})
    found = {row["run"]: row for row in rows if row["name"] == "jump beyond protection"}
    assert (found["early"]["count"], found["early"]["unit"], found["early"]["time"]) == (
        "1", "m", "2031-05-04T07:10:00+02:00",
    )  # fmt: skip
    assert (found["quiet"]["count"], found["quiet"]["duration_s"], found["quiet"]["value"]) == ("0", "0", "")


def test_csv_tells_orders_in_words_and_numbers(runs):
    changed, added = [row for row in read_csv(runs) if row["part"] == "order"]
    assert (changed["name"], changed["value"], changed["first_value"]) == ("changed", "0.06", "0.1")
    assert (changed["time"], changed["first_time"]) == ("2031-05-04T07:30:00+02:00", "2031-05-04T07:00:00+02:00")
    assert changed["note"] == "B raises Middle check by 6 cm at 07:30 instead of 10 cm at 07:00"
    assert (added["name"], added["first_value"], added["first_time"]) == ("added", "", "")


def test_json_carries_the_same_rows_and_what_was_compared(runs):
    text = comparison_json(compare(runs), RunClock(runs["early"]), Display(UnitSystem.metric))
    about = json.loads(text)
    assert [run["name"] for run in about["runs"]] == ["early", "late"]
    assert (about["first"], about["same_inputs"], about["alike"], about["graver_than_first"]) == (
        "early", True, False, False,
    )  # fmt: skip
    assert about["caution"] == CAUTION
    assert [row["part"] for row in about["rows"]] == [row["part"] for row in read_csv(runs)]


def test_the_page_of_the_documentation_names_every_column():
    page = (Path(__file__).parents[2] / "docs" / "comparing.md").read_text(encoding="utf-8")
    assert [column for column in COLUMNS if f"| `{column}` |" not in page] == []

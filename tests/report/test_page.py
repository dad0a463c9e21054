"""What the page of a run says, and what it hands to the browser."""

import re
from collections.abc import Callable
from html import unescape

import numpy as np
import pytest
import xarray as xr
from tests.canals import scenario_of, standard_day

from toeline import simulate
from toeline.constants import CAUTION
from toeline.errors import UsageError
from toeline.findings.incidents import Incident
from toeline.report.page.arrays import MOST_SERIES_VALUES, order_marks, run_arrays
from toeline.report.page.document import report_page
from toeline.report.page.hazard_strips import WIDTH, hazard_strips
from toeline.report.page.moments import moments_of, nearest_rows
from toeline.report.page.verdict import Wrong, headline, link_to
from toeline.units import Display, UnitSystem

BEYOND, DROWNED = 4, 1
PLACES = {
    "chainage": np.array([0.0, 800.0, 800.0, 1435.0]),
    "bed_level": np.array([50.0, 49.84, 49.2, 49.1]),
    "node_pool": np.array([0, 0, 1, 1]),
    "pool_length": np.array([800.0, 635.0]),
    "gate_chainage": np.array([800.0, 1435.0]),
    "gate_protection_end": np.array([34.0, 34.0]),
}


@pytest.fixture
def morning(invented_run) -> Callable[..., xr.Dataset]:
    """The invented morning with places along the canal."""

    def build(*outcome: str, **given) -> xr.Dataset:
        return invented_run(*outcome, **PLACES | given)

    return build


@pytest.fixture
def bad_hour(morning) -> xr.Dataset:
    """From about 07:10 for an hour the jump below the Middle check ends beyond the protected floor."""
    state, margin, end = (np.full((49, 2), value) for value in (1, 0.30, 9.0))
    for series, value in ((state, BEYOND), (margin, -0.14), (end, 41.2)):
        series[14:26, 0] = value
    return morning(jump_state=state, protection_margin=margin, jump_end_distance=end)


def words(page: str) -> str:
    """The text of a page between header and script, without its tags."""
    body = page[page.index("<body>") : page.index("<footer>")]
    return " ".join(unescape(re.sub(r"<[^>]*>", " ", body)).split())


def test_the_verdict_comes_first_with_place_time_and_amount(bad_hour):
    text = words(report_page({"day": bad_hour}))
    verdict = text[: text.index("Where the jump stood")]
    assert "Middle check: jump beyond protection, 07:08 to 08:07 (58 min)." in verdict
    assert "worst 0.14 m of tailwater missing at 07:10" in verdict
    assert "the jump ends up to 41.2 m from the gate; the floor is protected to 34.0 m" in verdict


def test_what_gatekeepers_need_stands_before_the_figures_and_numbers_after_them(ordered_run):
    text = words(report_page({"day": ordered_run(**PLACES)}))
    order = [
        text.index(heading)
        for heading in (" Orders plan raise: 2 orders, by time", "Long profile", "Least margins: 2 rows")
    ]
    assert order == sorted(order)


def test_a_long_table_is_folded_and_not_printed_a_short_one_stands(ordered_run):
    few, many = (report_page({"day": ordered_run(count, **PLACES)}) for count in (5, 31))
    assert '<details class="folded short" open><summary>plan raise: 5 orders' in few
    assert '<details class="folded"><summary>plan raise: 31 orders' in many


def test_both_hazards_stand_side_by_side(bad_hour):
    text = words(report_page({"day": bad_hour}))
    floor, people = text.index("Floor: jump beyond protection 58 min"), text.index("People: drowned roller 4 h")
    assert floor < people < text.index("At no hour is any place below a gate safe to enter")


def test_a_quiet_run_is_not_called_safe(morning):
    text = words(report_page({"day": morning()}))
    assert "That nothing was found makes no place safe." in text
    assert set(re.findall(r"[^.:;]*\bsafe\b[^.:;]*", text)) <= {
        " That nothing was found makes no place safe",
        " At no hour is any place below a gate safe to enter, with a roller or without",
        " no state shown here is safe to enter",
    }


def test_a_roller_of_a_single_step_is_told_though_it_lasts_no_time(morning):
    run = morning().isel(time=slice(1), profile_time=slice(1))
    assert "People: drowned roller an instant At 2 of 2 gates" in words(report_page({"day": run}))


def test_a_run_that_stopped_says_so(morning):
    assert "plan raise stopped at 10:00: interrupted" in words(
        report_page({"day": morning("stopped at 10:00: interrupted")})
    )


def test_the_caution_and_the_input_files_are_there_unchanged(morning):
    given = {"day_file": 'title = "<b>A & B</b>"\n', "canal_file": "name = 'x' # </script>\n"}
    page = report_page({"day": morning(attributes=given)})
    assert CAUTION in unescape(page)
    shown = [unescape(text) for text in re.findall(r"<pre[^>]*>(.*?)</pre>", page, re.DOTALL)]
    assert shown[:2] == [given["day_file"], given["canal_file"]]


def test_a_name_cannot_put_anything_into_the_page(morning):
    page = report_page({"day": morning(gate=np.array(["<i>Gate</i>", '"></svg>'], dtype=object))})
    assert "<i>Gate</i>" not in page
    assert '"></svg>"' not in page


def test_values_are_in_the_units_of_the_day(morning):
    text = words(report_page({"day": morning(attributes={"units_for_display": "us customary"})}))
    assert "end of the protected floor Middle check surfaces of the canal file 111.55 ft" in text


NO_JUMP = {name: np.full((49, 2), np.nan) for name in ("jump_end_distance", "protection_margin", "tailwater_margin")}


@pytest.mark.parametrize(
    "given",
    [
        {name: np.zeros((49, 2)) for name in ("gate_discharge", "jump_state", "gate_flow_state")} | NO_JUMP,
        {"lining_level": np.full(4, np.nan), "bank_level": np.full(4, np.nan), "pool_target_level": np.full(2, np.nan)},
    ],
    ids=["closed gates", "no edge and no target"],
)
def test_a_page_is_made_of(morning, given):
    assert "What goes wrong" in words(report_page({"day": morning(**given)}))


def test_a_page_is_made_of_a_canal_without_offtakes(morning):
    assert "What goes wrong" in words(report_page({"day": morning().isel(offtake=slice(0))}))


def test_a_run_without_a_long_profile_is_shown_by_its_gates(morning):
    assert "0 long profiles" in words(report_page({"day": morning().isel(profile_time=slice(0))}))


def test_plans_stand_side_by_side_with_what_differs_first(bad_hour, morning):
    text = words(report_page({"early": bad_hour, "late": morning()}))
    difference = text.index("B: late against A: early Middle check: jump beyond protection, none instead of 58 min")
    assert text.index("UTC+02:00 What goes wrong") < difference < text.index("Floor: jump beyond protection")


def test_runs_of_other_gates_are_refused(morning):
    other = morning(gate=np.array(["Middle check", "Other check"], dtype=object))
    with pytest.raises(UsageError, match="one and two do not have the same gates"):
        report_page({"one": morning(), "two": other})


def test_more_runs_than_find_room_are_refused(morning):
    with pytest.raises(UsageError, match="found 5 runs; at most 4"):
        report_page({str(place): morning() for place in range(5)})


def test_an_empty_run_is_refused(morning):
    with pytest.raises(UsageError, match="stopped before anything reached the disk"):
        report_page({"day": morning().isel(time=slice(0))})


def incident(where: str, time: np.datetime64) -> Incident:
    return Incident("fall", where, time, time, 1.0, time, 0.5, "m", "somebody")


def test_the_moments_are_those_of_profiles_and_worst_times(morning):
    run = morning()
    worst = run["time"].values[7]
    moments = moments_of([run], [[incident("Middle check", worst)]])
    assert moments.labels == ("06:00", "06:35", "07:00", "08:00", "09:00", "10:00")


@pytest.mark.parametrize(
    ("where", "gate"),
    [
        ("Last check", 1),
        ("Lower pool", 1),
        ("East lateral", 1),
        ("Lower pool, lower end", 1),
        ("Lower pool, upper end", 0),
    ],
)
def test_an_incident_leads_to_the_gate_that_shows_it(morning, where, gate):
    run = morning()
    at = run["time"].values[12]
    link = link_to(incident(where, at), run, moments_of([run], [[]]))
    assert (link.moment, link.gate) == (1, gate)


def test_the_nearest_rows_are_found():
    times = np.array([0, 10, 20], dtype="datetime64[s]")
    assert nearest_rows(times, np.array([-3, 0, 4, 6, 16, 99], dtype="timedelta64[s]")).tolist() == [0, 0, 0, 1, 2, 2]


def test_values_handed_to_the_browser_are_those_of_the_file(bad_hour, metric):
    moments = moments_of([bad_hour], [[]])
    arrays = run_arrays(bad_hour, moments, metric)
    shown = arrays.series["end"].reshape(-1, 2)[arrays.rows]
    assert np.array_equal(shown, bad_hour["jump_end_distance"].values[::12].astype(np.float32))
    levels = arrays.water_level.reshape(-1, 4)[arrays.profiles]
    assert np.array_equal(levels, bad_hour["water_level"].values.astype(np.float32))


def test_of_a_long_run_steps_are_left_out_and_none_of_what_is_kept_is_changed(morning, metric, monkeypatch):
    monkeypatch.setattr("toeline.report.page.arrays.MOST_SERIES_VALUES", 20)
    openings = np.random.default_rng(1).random((49, 2))
    run = morning(gate_opening=openings)
    arrays = run_arrays(run, moments_of([run], [[]]), metric)
    kept = arrays.series["opening"].reshape(-1, 2)
    rows = (arrays.elapsed / 300_000).astype(int)
    assert 0 < arrays.steps_left_out == 49 - len(rows)
    assert np.array_equal(kept, openings[rows].astype(np.float32))
    assert rows[arrays.rows].tolist() == [0, 12, 24, 36, 48]
    assert MOST_SERIES_VALUES >= 1441 * 40


def test_values_are_handed_over_in_the_units_shown(morning):
    run = morning(gate_opening=np.full((49, 2), 0.3048))
    arrays = run_arrays(run, moments_of([run], [[]]), Display(UnitSystem.us_customary))
    assert arrays.series["opening"][0] == pytest.approx(1.0)


def test_orders_are_marked_at_their_gate_by_what_became_of_them(morning, metric):
    run = morning(
        order_time=np.array([1200.0, 2400.0]), order_gate=np.array(["Last check", "Middle check"], dtype=object),
        order_kind=np.array([0, 1]), order_value=np.array([2.5, 0.1]), order_bay=np.array([0, 0]),
        order_opening_before=np.array([0.4, 0.4]), order_opening_after=np.array([1.25, 0.5]),
        order_completed=np.array([1500.0, 2500.0]), order_status=np.array([1, 0]),
        order_reason=np.array(["travel is 0 to 1.25 m", ""], dtype=object),
        order_source=np.array(["schedule", "schedule"], dtype=object),
    )  # fmt: skip
    marks = order_marks(run, metric)
    assert (marks["gate"], marks["elapsed"]) == ([1, 0], [1_200_000.0, 2_400_000.0])
    assert marks["opening"] == [1.25, 0.5]
    assert marks["marker"] == ["triangle", "circle"]
    assert marks["words"][0] == "06:20 open to 2.50 m: order trimmed"


def test_a_full_day_of_ten_gates_stays_below_eight_megabytes(tmp_path):
    canal, day = standard_day()
    day["output"] = {"every": "1 min", "profiles_every": "1 min"}
    run = simulate(scenario_of(tmp_path, canal, day))
    assert run["water_level"].size > 1_440 * 400
    assert len(report_page({"day": run}).encode()) < 8_000_000


def test_a_strip_shows_its_spells_to_scale_and_in_words(bad_hour):
    length = bad_hour["time"].values[-1] - bad_hour["time"].values[0]
    strip = hazard_strips(bad_hour, length)[0]
    assert (strip.floor, strip.people) == ("1 h", "3 h")
    assert "Middle check: drowned: a roller, deadly to people 3 h; jump beyond protection 1 h" in strip.drawing
    widths = {float(width) for width in re.findall(r'width="([\d.]+)" height="\d+" fill="#D55E00"', strip.drawing)}
    assert widths == {WIDTH / 4}


def test_the_headline_names_the_gravest_of_what_goes_wrong():
    found = [
        Wrong("Upper pool", "fall in 1 h over the limit", "06:10 to 07:31", (), None),
        Wrong("Last check", "jump beyond protection", "07:00 to 07:10", (), None),
    ]
    told = headline(found)
    assert told == (
        "2 things go wrong at 2 places. Gravest of all, Last check: jump beyond protection, 07:00 to 07:10."
    )
    assert headline(found[:1]) == "Upper pool: fall in 1 h over the limit, 06:10 to 07:31."
    assert headline([]) == "No incident was found."

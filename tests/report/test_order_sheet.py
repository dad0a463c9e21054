"""Order sheets in words, and as plain text and CSV."""

import csv
import io
import json

import numpy as np
import pytest

from toeline.constants import CAUTION
from toeline.errors import UsageError
from toeline.report.order_sheet import NOBODY, order_sheets
from toeline.report.order_sheet_csv import sheet_csv
from toeline.report.order_sheet_text import WIDTH, sheet_text

TRIMMED, REFUSED, REPLACED = 1, 2, 3
US = {"units_for_display": "us customary"}


def text_of(run, place: int = 0, **asked: object) -> str:
    """The text of one sheet, in one line."""
    return " ".join(sheet_text(order_sheets(run, **asked)[place]).split())


def rows_of(run) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(sheet_csv(order_sheets(run)[0], run))))


def test_each_gatekeeper_has_a_sheet_also_without_orders(ordered_run):
    sheets = order_sheets(ordered_run())
    assert [(sheet.whose, len(sheet.orders)) for sheet in sheets] == [("Upper beat", 2), ("Lower beat", 0)]
    assert "No orders for Last check." in text_of(ordered_run(), 1)


def test_each_gate_can_have_a_sheet(ordered_run):
    assert [sheet.whose for sheet in order_sheets(ordered_run(), "gate")] == ["Middle check", "Last check"]


def test_sheets_are_by_gate_where_nobody_is_named(ordered_run):
    run = ordered_run(gate_gatekeeper=np.array(["", ""], object))
    assert [sheet.whose for sheet in order_sheets(run)] == ["Middle check", "Last check"]
    with pytest.raises(UsageError, match="no gate has a gatekeeper"):
        order_sheets(run, "gatekeeper")


def test_gates_without_a_gatekeeper_are_not_forgotten(ordered_run):
    run = ordered_run(gate_gatekeeper=np.array(["", "Lower beat"], object))
    assert [sheet.whose for sheet in order_sheets(run)] == [NOBODY, "Lower beat"]


def test_a_run_that_stopped_gives_no_sheets(ordered_run):
    with pytest.raises(UsageError, match="not complete"):
        order_sheets(ordered_run(outcome="stopped at 10:00: interrupted"))


def test_the_heading_says_whose_where_when_and_in_which_units(ordered_run):
    text = text_of(ordered_run(attributes={"call": "Control room, channel 4"}))
    for expected in (
        "ORDER SHEET: Upper beat",
        "Alder branch: A short morning",
        "Sunday 2031-05-04, 06:00 to 10:00 (4 h), times of UTC+02:00",
        "plan raise; revision 0; run 00000000; Toeline 0.1.0",
        "metric units: m, m3/s",
        "Call: Control room, channel 4",
        CAUTION,
    ):
        assert expected in text


def test_without_a_number_to_call_there_is_a_blank(ordered_run):
    assert "Call: ____" in text_of(ordered_run())


def test_an_order_says_what_to_do_and_what_to_read(ordered_run):
    text = text_of(ordered_run())
    for expected in (
        "1. 06:30 Middle check: OPEN 12 TURNS From 0.300 m to 0.360 m. The leaf stands by 06:32.",
        "at 06:30 06:42 above the gate 51.43 m ________ 51.44 m ________ 51.40 to 51.46 51.42 to 51.47",
        "below the gate 50.60 m ________ 50.60 m ________ 50.59 to 50.61 50.59 to 50.61",
        "Stop and call if before you start, above the gate it is not 51.40 to 51.46 m or below the gate it is not "
        "50.59 to 50.61 m; afterwards, a reading is outside its band.",
        "2. 06:45 Middle check: OPEN 12 TURNS",
        "done at ________ opening ________ signed ________",
    ):
        assert expected in text


def test_the_band_is_told_with_what_is_in_it(ordered_run):
    assert "15 minutes" in text_of(ordered_run())
    assert "0.01 m on top, for reading the gauge" in text_of(ordered_run())
    wide = text_of(ordered_run(), allowance=0.05)
    assert "0.05 m on top, which the planner allows" in wide
    assert "50.55 to 50.65" in wide


def test_the_end_of_the_protected_floor_is_a_reason_to_stop(ordered_run):
    assert "(Middle check 23.0 m from it)" in text_of(ordered_run())
    assert "protected floor" not in text_of(ordered_run(), 1)


FALL = {"kind": "fall", "limit": 0.15, "window": 3600.0, "unit": "m", "places": ["Upper pool"], "source": "the owner"}
ABOVE = {
    "kind": "above", "limit": 51.5, "unit": "m", "places": ["Upper pool", "Lower pool"], "measured_from": "datum",
    "at": "lower end", "source": "lining",
}  # fmt: skip


def test_limits_of_the_owner_beside_the_gates_are_reasons_to_stop(ordered_run):
    freeboard = ABOVE | {"kind": "freeboard", "measured_from": "bank"}
    run = ordered_run(attributes={"limits": json.dumps([FALL, ABOVE, freeboard])})
    text = text_of(run)
    assert "the water above Middle check falls by more than 0.15 m in 1 h; the owner" in text
    assert "the water above Middle check is above 51.50 m (level above datum); lining" in text
    assert "below Middle check is" not in text
    assert "falls by more" not in text_of(run, 1)


def test_people_in_the_water_come_first_among_the_reasons_to_stop(ordered_run):
    assert "STOP AND CALL IF - anybody is in the water" in text_of(ordered_run())


def test_the_wave_of_a_move_is_told(ordered_run):
    bound = np.zeros((49, 2))
    bound[7] = 0.12
    assert "Wave of the move, at most: 0.12 m above the gate." in text_of(
        ordered_run(surge_height_bound_upstream=bound)
    )


def test_readings_just_before_the_next_move_are_told_as_such(ordered_run):
    run = ordered_run(pool_wave_round_trip=np.array([7200.0, 300.0]), settling=np.ones((49, 2)))
    assert "After: just before the gate moves again, while waves of a move still travel" in text_of(run)


def one_order(ordered_run, status: int, reason: str, **given: object):
    values = {"order_status": np.array([status]), "order_reason": np.array([reason], object)}
    return ordered_run(1, **values, order_value=np.array([2.5]), **given)


def test_a_trimmed_order_says_what_was_asked_and_what_to_do(ordered_run):
    text = text_of(one_order(ordered_run, TRIMMED, "travel is 0 to 0.360 m"))
    assert "! Asked: open to 2.50 m. Changed: travel is 0 to 0.360 m. Do what stands here." in text
    assert "OPEN 12 TURNS" in text


def test_a_refused_order_says_not_to_move(ordered_run):
    never = {"order_opening_after": np.array([0.30]), "order_completed": np.array([np.nan])}
    text = text_of(one_order(ordered_run, REFUSED, "the leaf is stuck", **never))
    assert "1. 06:30 Middle check: DO NOT MOVE The opening stays at 0.300 m." in text
    assert "! Asked: open to 2.50 m. Not to be done: the leaf is stuck." in text
    assert "seen at ________ signed ________" in text
    assert "TURNS" not in text


def test_an_order_that_the_next_one_replaces_does_not_wait_for_the_leaf(ordered_run):
    run = ordered_run(
        order_status=np.array([REPLACED, 0]),
        order_reason=np.array(["the next order came at an opening of 0.360 m", ""], object),
        order_completed=np.array([2700.0, 2790.0]),
    )
    first = text_of(run).partition("2. 06:45")[0]
    assert "The next order, at 06:45, comes while the leaf still moves, at about 0.360 m" in first
    assert "stands by" not in first


def test_a_move_that_the_end_of_the_day_interrupts_says_so(ordered_run):
    run = one_order(ordered_run, 0, "still moving at the end of the period", order_completed=np.array([np.nan]))
    assert "! Note: still moving at the end of the period." in text_of(run)


def test_an_order_without_a_change_leaves_the_gate_as_it_is(ordered_run):
    run = ordered_run(1, order_opening_after=np.array([0.30]))
    assert "LEAVE AS IT IS The opening stays at 0.300 m." in text_of(run)


def test_what_goes_wrong_at_the_gates_is_on_their_sheet_alone(ordered_run):
    state = np.ones((49, 2))
    state[14:26, 0] = 4
    margin = np.where(state == 4, -0.1, 0.3)
    run = ordered_run(jump_state=state, protection_margin=margin)
    assert "Middle check: jump beyond protection, 07:09 to 08:06 (57 min)." in text_of(run)
    assert "WHAT GOES WRONG" not in text_of(run, 1)


def test_moves_of_rules_are_said_not_to_be_on_the_sheet(ordered_run):
    run = ordered_run(order_source=np.array(["schedule", "hold discharge"], object))
    text = text_of(run)
    assert 'Middle check: 1 move by the rule "hold discharge" in the simulation. They are no orders.' in text
    assert "2. 06:45" not in text


def test_rounds_are_told_in_words(ordered_run):
    rule = {
        "kind": "gatekeeper rounds", "gate": "Middle check", "band": 0.02, "step": 0.05, "where": "below the gate",
        "target": {"times": [0, 7_200_000], "values": [50.5, 50.6], "shape": "steps"},
        "visits": None, "every": 10_800.0, "hours": ["06:00:00", "18:00:00"],
    }  # fmt: skip
    run = ordered_run(attributes={"resolved_settings": json.dumps({"rules": [rule]})})
    assert (
        "Middle check: rounds every 3 h, from 06:00 to 18:00. At each read below the gate (level above datum). "
        "Target 50.50 m from 06:00, 50.60 m from 08:00. Leave the gate alone within 0.02 m of it; "
        "higher: close by 0.050 m; lower: open by 0.050 m."
    ) in text_of(run)


def rounds_of(ordered_run, **rule):
    """A run with rounds at the Middle check."""
    given = {
        "kind": "gatekeeper rounds", "gate": "Middle check", "band": 0.02, "step": 0.05, "where": "below the gate",
        "target": None, "visits": None, "every": None, "hours": None,
    }  # fmt: skip
    return ordered_run(attributes={"resolved_settings": json.dumps({"rules": [given | rule]})})


def test_every_visit_of_rounds_has_its_blanks(ordered_run):
    run = rounds_of(ordered_run, visits=["05:30:00", "07:20:00", "09:50:00", "10:00:00"])
    (form,) = order_sheets(run)[0].rounds
    assert (form.gate, form.visits, form.count) == ("Middle check", ("07:20", "09:50"), 2)
    lines = text_of(run).partition("ROUNDS AT MIDDLE CHECK ")[2]
    blanks = " ".join(["________"] * 4)
    assert lines.startswith(f"visit read moved by opening signed 07:20 {blanks} 09:50 {blanks} ")


@pytest.mark.parametrize(
    ("hours", "visits"),
    [
        (["07:00:00", "09:00:00"], ("07:00", "08:00")),
        (["09:00:00", "07:00:00"], ("06:00", "09:00")),
        (None, ("06:00", "07:00", "08:00", "09:00")),
    ],
)
def test_visits_at_intervals_are_counted_from_midnight_within_their_hours(ordered_run, hours, visits):
    (form,) = order_sheets(rounds_of(ordered_run, every=3600.0, hours=hours))[0].rounds
    assert form.visits == visits


def test_more_visits_than_find_a_line_are_told(ordered_run):
    text = text_of(rounds_of(ordered_run, every=60.0))
    assert "And 180 more visits: go on by hand." in text


def test_a_sheet_in_us_customary_units_has_no_metre_on_it(ordered_run):
    run = one_order(
        ordered_run, TRIMMED, "openings between 0.150 and 0.300 m are not held", attributes=US,
        gate_turn=np.full(2, np.nan),
    )  # fmt: skip
    text = text_of(run)
    assert "US customary units: ft, ft3/s" in text
    assert "OPEN BY 0.20 ft From 0.98 ft to 1.18 ft." in text
    assert "openings between 0.49 ft and 0.98 ft are not held" in text
    assert "168.73 ft" in text
    assert " m " not in text
    assert " m." not in text


def test_lines_of_the_text_keep_to_80_columns(ordered_run):
    name = "Ł" * 20 + " näme of a very long beat in Ωμέγα and Щёкино"
    run = ordered_run(gate_gatekeeper=np.array([name, name], object))
    lines = sheet_text(order_sheets(run)[0]).splitlines()
    assert max(len(line) for line in lines) <= WIDTH


def test_every_order_has_a_row_in_the_csv_with_units_in_the_header(ordered_run):
    first, second = rows_of(ordered_run())
    assert (first["sheet"], first["gate"], first["status"], first["move"]) == (
        "Upper beat", "Middle check", "accepted", "open 12 turns",
    )  # fmt: skip
    assert (first["begin"], first["leaf_stands"]) == ("2031-05-04T06:30:00+02:00", "2031-05-04T06:31:30+02:00")
    assert (first["opening_from [m]"], first["opening_to [m]"], first["turns"]) == ("0.3000", "0.3600", "12.00")
    assert first["upstream_before [m]"] == "51.4300"
    assert (first["upstream_before_low [m]"], first["upstream_before_high [m]"]) == ("51.4050", "51.4550")
    assert (second["line"], second["caution"]) == ("2", CAUTION)


def test_the_csv_of_a_us_customary_day_is_in_feet(ordered_run):
    first, _ = rows_of(ordered_run(attributes=US))
    assert first["opening_to [ft]"] == "1.1811"  # 0.36 m / 0.3048


def test_a_refused_order_has_no_readings_in_the_csv(ordered_run):
    (row,) = rows_of(one_order(ordered_run, REFUSED, "the leaf is stuck", order_completed=np.array([np.nan])))
    assert (row["move"], row["leaf_stands"], row["turns"], row["upstream_before [m]"]) == ("do not move", "", "", "")


def test_the_csv_of_a_sheet_without_orders_is_its_header(ordered_run):
    run = ordered_run()
    assert sheet_csv(order_sheets(run)[1], run).count("\n") == 1

"""Every message for a fault in the limits of a canal file, and limits as a run carries them."""

from pathlib import Path

import pytest

from toeline.scenario import load_canal
from toeline.scenario.limits import limits_of

GOOD = {
    "kind": '"fall"',
    "window": '"1 h"',
    "limit": "0.15",
    "source": '"standing order 7"',
}
CASES = [
    # keys of the limit (None: left out), messages with the line counted from the header of the limit
    ({"source": None}, ["+0 limits[1] source: required, but not given"]),
    (
        {"source": '""'},
        [
            '+4 limits[1] source: found ""; allowed: text of one line, 1 to 400 characters, no blanks around it',
        ],
    ),
    (
        {"kind": '"drop"'},
        [
            '+1 limits[1] kind: found "drop"; allowed: "fall", "rise", "above", "below", "freeboard", '
            '"velocity", "moves", "head on offtake", "avoided opening" or "near modular limit"',
        ],
    ),
    ({"window": None}, ['+0 limits[1] window: required with kind = "fall", but not given']),
    (
        {"kind": '"freeboard"'},
        [
            '+2 limits[1] window: not used with kind = "freeboard"; leave it out, or choose another kind',
        ],
    ),
    ({"limit": "0"}, ["+3 limits[1] limit: found 0; allowed: above 0 m, up to 1000 m"]),
    (
        {"limit": '"15 min"'},
        [
            '+3 limits[1] limit: found "15 min"; allowed: a finite number in m, or text such as "2.5 m" '
            "with one of the units m, km, cm, mm, ft, in, mi",
        ],
    ),
    (
        {"kind": '"moves"', "limit": "2.5"},
        ["+3 limits[1] limit: found 2.5; allowed: a whole number from 1 to 100000"],
    ),
    (
        {"kind": '"near modular limit"', "limit": "2"},
        [
            '+3 limits[1] limit: found 2; allowed: text such as "15 min" with one of the units s, min, h, d',
        ],
    ),
    (
        {"pools": '["Uper pool"]'},
        [
            '+5 limits[1] pools[1]: found "Uper pool", which is not described; did you mean "Upper pool"?',
        ],
    ),
    (
        {"pools": '"Upper pool"'},
        [
            '+5 limits[1] pools: found "Upper pool"; allowed: "all", or an array of one or more names',
        ],
    ),
    (
        {"pools": '["Upper pool", "Upper pool"]'},
        ['+5 limits[1] pools: found "Upper pool" twice; allowed: each name once'],
    ),
    (
        {"gates": '"all"'},
        ['+5 limits[1] gates: not used with kind = "fall"; leave it out, or choose another kind'],
    ),
    (
        {"kind": '"freeboard"', "window": None, "measured_from": '"bed"'},
        [
            '+4 limits[1] measured_from: found "bed"; allowed with kind = "freeboard": "bank", "lining"',
        ],
    ),
    (
        {"kind": '"above"', "window": None, "measured_from": '"target"', "at": '"upper end"'},
        ['+5 limits[1] at: found "upper end"; a target is that of the lower end'],
    ),
    (
        {"kind": '"velocity"', "window": None, "surfaces": '["rip"]'},
        ['+4 limits[1] surfaces[1]: found "rip", which is not described; did you mean "riprap"?'],
    ),
    (
        {"kind": '"avoided opening"', "limit": '"2 min"', "gates": '["Head gate"]'},
        ['+5 limits[1] gates[1]: found "Head gate", which has no avoid_openings'],
    ),
]


def add_limit(keys):
    """Write a limit at the end of the canal file, one key a line; gives the line of its header."""
    file = Path("canal.toml")
    text = file.read_text(encoding="utf-8")
    lines = [f"{key} = {value}" for key, value in (GOOD | keys).items() if value]
    file.write_text("\n".join([text, "[[limits]]", *lines, ""]), encoding="utf-8")
    return text.count("\n") + 2


def placed(messages, header):
    """The messages with the lines of the file."""
    offsets, texts = zip(*(message.split(" ", 1) for message in messages), strict=True)
    return [f"canal.toml:{header + int(offset)}: {text}" for offset, text in zip(offsets, texts, strict=True)]


@pytest.mark.parametrize(("keys", "messages"), CASES)
def test_a_bad_limit_is_refused_with_its_line_and_what_is_allowed(folder, keys, messages):
    header = add_limit(keys)

    assert folder.messages() == placed(messages, header)


def test_a_limit_that_no_place_can_have_says_what_is_lacking(folder):
    folder.replace("canal.toml", "target_level = 21.8\n", "")
    folder.replace("canal.toml", "target_level = 20.7\n", "")
    header = add_limit({"kind": '"below"', "window": None, "measured_from": '"target"'})

    message = '+1 limits[1] kind: found "below", but none of the pools has target_level'
    assert folder.messages() == placed([message], header)


def limit_of_file(keys):
    add_limit(keys)
    (limit,) = limits_of(load_canal("canal.toml").canal)
    return limit


def test_a_run_carries_a_limit_in_si_with_all_names(folder):
    assert limit_of_file({}) == {
        "kind": "fall", "limit": 0.15, "unit": "m", "places": ["Upper pool", "Mill pool"],
        "source": "standing order 7", "window": 3600.0,
    }  # fmt: skip


def test_us_customary_limits_are_carried_in_si(us_folder):
    limit = limit_of_file({"limit": "0.5", "window": '"90 min"'})
    assert (limit["limit"], limit["window"]) == (pytest.approx(0.1524), 5400.0)


def test_a_value_may_carry_its_own_unit(folder):
    assert limit_of_file({"limit": '"6 in"'})["limit"] == pytest.approx(0.1524)


def test_a_limit_from_the_target_holds_where_there_is_one(folder):
    folder.replace("canal.toml", "target_level = 20.7\n", "")
    limit = limit_of_file({"kind": '"above"', "window": None, "measured_from": '"target"'})
    assert (limit["places"], limit["measured_from"], limit["at"]) == (["Upper pool"], "target", "lower end")


def test_levels_are_from_the_datum_unless_said(folder):
    limit = limit_of_file({"kind": '"below"', "window": None, "limit": "20.5"})
    assert (limit["measured_from"], limit["limit"]) == ("datum", 20.5)


def test_times_are_carried_in_seconds_for_the_gates_that_avoid_openings(folder):
    limit = limit_of_file({"kind": '"avoided opening"', "limit": '"2 min"'})
    assert (limit["limit"], limit["unit"], limit["places"]) == (120.0, "s", ["Upper check"])


def test_velocities_are_limited_over_every_surface_unless_said(folder):
    limit = limit_of_file({"kind": '"velocity"', "window": None, "limit": "2.0"})
    assert (limit["surfaces"], limit["unit"]) == (["apron", "riprap", "lining"], "m s-1")

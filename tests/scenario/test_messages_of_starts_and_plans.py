"""Every message for a fault in the start and the plans of a day file."""

import pytest

CASES = [
    # text in day.toml, text in its place, messages
    (
        '[start]\nstate = "steady"',
        '[inflow]\nvalues = [["00:00", 8]]\n[start]\nstate = "steady"',
        [
            'day.toml:22: inflow: not used with the canal\'s head kind = "reservoir": the head gate lets the water in',
        ],
    ),
    (
        'state = "steady"\n',
        'state = "steady"\nfile = "last.nc"\n',
        [
            'day.toml:23: start state: exactly one of "state" and "file" is required',
            "day.toml:25: start openings: not used with file, which holds the openings",
        ],
    ),
    (
        'state = "steady"\nopenings = "to hold targets"\ninflow = 8.0',
        'file = "last_night.nc"',
        [
            'day.toml:23: start file: found "last_night.nc"; there is no such file',
        ],
    ),
    (
        "inflow = 8.0\n",
        "",
        [
            'day.toml:22: start inflow: required with openings "to hold targets" and a reservoir, but not given',
        ],
    ),
    (
        'state = "steady"\n',
        'state = "dry"\n',
        [
            'day.toml:24: start openings: found "to hold targets"; allowed with a dry start: openings by gate',
            'day.toml:25: start inflow: not used without a steady start with openings "to hold targets"',
        ],
    ),
    (
        'openings = "to hold targets"\ninflow = 8.0',
        'openings = "to hold target"',
        [
            'day.toml:24: start openings: found "to hold target"; allowed: "to hold targets" or a table of '
            "openings by gate",
        ],
    ),
    (
        'openings = "to hold targets"\ninflow = 8.0',
        'openings = { "Head gate" = 0.5, "Uper check" = 0.3, "Upper check" = 0.22, "Tail gate" = 1.8 }',
        [
            'day.toml:24: start openings "Tail gate": found 1.8 m; allowed: up to the max_opening of the gate, 1.5 m',
            'day.toml:24: start openings "Uper check": "Uper check" is no gate of the canal; did you mean '
            '"Upper check"?',
            'day.toml:24: start openings "Upper check": found 0.22 m, which lies in a band of the gate\'s '
            "avoid_openings",
        ],
    ),
    (
        'openings = "to hold targets"\ninflow = 8.0',
        'openings = { "Head gate" = -0.5 }',
        [
            'day.toml:24: start openings "Head gate": found -0.5; allowed: from 0 m to 1000 m',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'at = "06:30", gate = "Head gate", discharge = 9.0, opening = 0.3',
        [
            'day.toml:29: plans proposed orders[1]: found "opening", "discharge"; allowed: exactly one of '
            '"opening", "by", "discharge"',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'at = "06:30", gate = "Head gate"',
        [
            'day.toml:29: plans proposed orders[1]: found none; allowed: exactly one of "opening", "by", "discharge"',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'at = "24:00", gate = "Head gate", discharge = 9.0',
        [
            'day.toml:29: plans proposed orders[1] at: found "24:00", the end of the period; allowed: a time before it',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'at = "25:10", gate = "Headgate", discharge = 9.0',
        [
            'day.toml:29: plans proposed orders[1] at: found "25:10"; a time of the first day goes from '
            '"00:00" to "24:00"; allowed after that: "+30 h" (from the start) or date and time (ISO 8601)',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'at = "06:30", gate = "Head gat", discharge = 9.0',
        [
            'day.toml:29: plans proposed orders[1] gate: found "Head gat", which is no gate of the canal; '
            'did you mean "Head gate"?',
        ],
    ),
    (
        'at = "06:30", gate = "Head gate", discharge = 9.0',
        'att = "06:30", gate = "Head gate", dicharge = 9.0',
        [
            "day.toml:29: plans proposed orders[1] at: required, but not given",
            'day.toml:29: plans proposed orders[1] att: unknown key; did you mean "at"?',
            'day.toml:29: plans proposed orders[1] dicharge: unknown key; did you mean "discharge"?',
        ],
    ),
    (
        'at = "07:15", gate = "Upper check", by = 0.10',
        'at = "06:30", gate = "Head gate", by = 0',
        [
            "day.toml:30: plans proposed orders[2] by: found 0, which moves nothing",
        ],
    ),
    (
        'at = "07:15", gate = "Upper check", by = 0.10',
        'at = "06:30", gate = "Head gate", by = 0.1',
        [
            'day.toml:30: plans proposed orders[2] at: "Head gate" already has an order for that time',
        ],
    ),
    (
        'orders = "orders.csv"',
        'orders = "none.csv"',
        [
            'day.toml:35: plans from_file orders: found "none.csv"; there is no such file',
        ],
    ),
    (
        'orders = "orders.csv"',
        "orders = 7",
        [
            "day.toml:35: plans from_file orders: found 7; allowed: an array of orders, or the name of a CSV "
            "file with the columns at,gate,bay,opening,by,discharge",
        ],
    ),
    (
        'orders = "orders.csv"',
        "rule = []",
        [
            'day.toml:35: plans from_file rule: unknown key; did you mean "rules"?',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_plan_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("day.toml", old, new)

    assert folder.messages() == messages

"""Every message for a fault in a CSV file of orders."""

import pytest

CASES = [
    # text in orders.csv, text in its place, messages
    (
        "at,gate,opening,by,discharge",
        "at,gate,opening,by,flow",
        [
            'orders.csv:2: unknown column "flow"; known: "at", "gate", "bay", "opening", "by", "discharge"',
        ],
    ),
    (
        "at,gate,opening,by,discharge",
        "at;gate;opening;by;discharge",
        [
            'orders.csv:2: the header lacks "at", "gate"; columns, separated by commas: at, gate, bay, opening, '
            "by, discharge",
        ],
    ),
    (
        "at,gate,opening,by,discharge",
        "at,gate,opening,opening,by",
        [
            'orders.csv:2: "opening" stands twice in the header',
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "06:30,Head gate,,,9.0,",
        [
            "orders.csv:3: found 6 cells; the header has 5: at, gate, opening, by, discharge",
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "06:30,Head gate,,,nine",
        [
            'orders.csv:3: discharge: found "nine"; allowed: a finite number in m3/s, or text such as "2.5 '
            'm3/s" with one of the units m3/s, L/s, m3/h, m3/day, ML/day, ft3/s, cfs, acre-ft/day',
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "06:30,Head gate,0.3,,9.0",
        [
            'orders.csv:3: found "opening", "discharge"; allowed: exactly one of "opening", "by", "discharge"',
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "6.30,Head gate,,,9.0",
        [
            'orders.csv:3: at: found "6.30"; allowed: a time such as "06:30" (on the first day), "+7 h" '
            '(from the start) or "2031-05-04T06:30:00+02:00" (ISO 8601)',
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        ",Head gate,,,9.0",
        [
            "orders.csv:3: at: required, but not given",
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "06:30,Hed gate,,,9.0",
        [
            'orders.csv:3: gate: found "Hed gate", which is no gate of the canal; did you mean "Head gate"?',
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        '06:30,"Head gate,,,9.0',
        [
            "orders.csv:3: not a row of comma-separated values: unexpected end of data",
        ],
    ),
    (
        "06:30,Head gate,,,9.0",
        "+9 h,Tail gate,,,9.0",
        [
            'orders.csv:6: at: "Tail gate" already has an order for that time',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_row_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("orders.csv", old, new)

    assert folder.messages() == messages

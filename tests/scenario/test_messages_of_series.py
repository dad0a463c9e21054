"""Every message for a fault in what changes during the day."""

import pytest

CASES = [
    # text in day.toml, text in its place, messages
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '[["00:00", 0.4], ["08:00", -0.9]]',
        [
            'day.toml:13: deliveries "North lateral"[2][2]: found -0.9; allowed: from 0 m3/s to 10000 m3/s',
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '[["08:00", 0.4], ["06:00", 0.9]]',
        [
            'day.toml:13: deliveries "North lateral"[2][1]: found "06:00", which is not after the time '
            "before it; times must rise",
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '[["00:00", 0.4], ["24:30", 0.9], ["+25 h", 0.9]]',
        [
            'day.toml:13: deliveries "North lateral"[2][1]: found "24:30"; a time of the first day goes from '
            '"00:00" to "24:00"; allowed after that: "+30 h" (from the start) or date and time (ISO 8601)',
            'day.toml:13: deliveries "North lateral"[3][1]: found "+25 h", which is 25 h after the start; '
            "the period ends 24 h after its start",
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '[["00:00", 0.4], "08:00"]',
        [
            'day.toml:13: deliveries "North lateral"[2]: found "08:00"; allowed: a pair [time, value]',
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        "[]",
        [
            'day.toml:13: deliveries "North lateral": found an array of 0; allowed: at least one pair [time, value]',
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '"0.4 m3"',
        [
            'day.toml:13: deliveries "North lateral": found "0.4 m3"; allowed: a finite number in m3/s, or '
            'text such as "2.5 m3/s" with one of the units m3/s, L/s, m3/h, m3/day, ML/day, ft3/s, cfs, '
            "acre-ft/day",
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '{ shape = "curves", values = [["00:00", 0.4]] }',
        [
            'day.toml:13: deliveries "North lateral" shape: found "curves"; allowed: "lines" or "steps"',
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '{ shape = "steps" }',
        [
            'day.toml:13: deliveries "North lateral" values: exactly one of "values" and "file" is required',
        ],
    ),
    (
        '[["00:00", 0.4], ["08:00", 0.9]]',
        '{ file = "north.csv" }',
        [
            'day.toml:13: deliveries "North lateral" file: found "north.csv"; there is no such file',
        ],
    ),
    (
        '"North lateral" = [',
        '"Nort lateral" = [',
        [
            'day.toml:13: deliveries "Nort lateral": "Nort lateral" is no offtake of the canal; did you mean '
            '"North lateral"?',
        ],
    ),
    (
        '"North lateral" = [',
        '"Farm turnout" = [',
        [
            'day.toml:13: deliveries "Farm turnout": "Farm turnout" is of kind orifice, not demand; known: '
            '"North lateral"',
        ],
    ),
    (
        '"Farm turnout" = {',
        '"South weir" = {',
        [
            'day.toml:16: offtake_openings "South weir": "South weir" is of kind weir, not orifice; known: '
            '"Farm turnout"',
        ],
    ),
    (
        'shape = "lines"\nvalues = [["00:00", 22.5], ["+24 h", 22.3]]',
        'shape = "lines"\nvaluse = [["00:00", 22.5], ["+24 h", 22.3]]',
        [
            'day.toml:20: head valuse: unknown key; did you mean "values"?',
        ],
    ),
    (
        '["+24 h", 22.3]',
        '["noon", 22.3]',
        [
            'day.toml:20: head values[2][1]: found "noon"; allowed: a time such as "06:30" (on the first '
            'day), "+7 h" (from the start) or "2031-05-04T06:30:00+02:00" (ISO 8601)',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_series_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("day.toml", old, new)

    assert folder.messages() == messages

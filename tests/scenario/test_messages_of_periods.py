"""Every message for a fault in the heading, period and output of a day file."""

from zoneinfo import available_timezones

import pytest

CASES = [
    # text in day.toml, text in its place, messages
    (
        'canal = "canal.toml"',
        'canal = "cannal.toml"',
        [
            'day.toml:1: canal: found "cannal.toml"; there is no such file',
        ],
    ),
    (
        'canal = "canal.toml"',
        "canal = 3",
        [
            "day.toml:1: canal: found 3; allowed: text of one line, 1 to 400 characters, no blanks around it",
        ],
    ),
    (
        'title = "A day for the tests"\n',
        'title = "A day\\nfor the tests"\n',
        [
            'day.toml:2: title: found "A day\\nfor the tests"; allowed: text of one line, 1 to 80 characters, '
            "no blanks around it",
        ],
    ),
    (
        "start = 2031-05-04T00:00:00+02:00",
        "start = 2031-05-04T00:00:00",
        [
            "day.toml:5: period start: found 2031-05-04T00:00:00; it needs its offset from UTC, as in "
            "2031-05-04T00:00:00+02:00",
        ],
    ),
    (
        "start = 2031-05-04T00:00:00+02:00",
        "start = 2031-05-04",
        [
            "day.toml:5: period start: found 2031-05-04; allowed: date and time with offset from UTC, such "
            "as 2031-05-04T00:00:00+02:00, in the years 1900 to 2200",
        ],
    ),
    (
        "start = 2031-05-04T00:00:00+02:00",
        'start = "tomorrow"',
        [
            'day.toml:5: period start: found "tomorrow"; allowed: date and time with offset from UTC, such '
            "as 2031-05-04T00:00:00+02:00, in the years 1900 to 2200",
        ],
    ),
    (
        "start = 2031-05-04T00:00:00+02:00",
        "start = 0031-05-04T00:00:00+02:00",
        [
            "day.toml:5: period start: found 0031-05-04T00:00:00+02:00; allowed: date and time with offset "
            "from UTC, such as 2031-05-04T00:00:00+02:00, in the years 1900 to 2200",
        ],
    ),
    (
        "[period]",
        'zone = "Europe/Berlln"\n[period]',
        [
            'day.toml:4: zone: found "Europe/Berlln"; allowed: a name of the tz database; did you mean '
            '"Europe/Berlin"?',
        ],
    ),
    (
        "[period]",
        'zone = "Mars/X"\n[period]',
        [
            'day.toml:4: zone: found "Mars/X"; allowed: a name of the tz database; none of '
            f"{len(available_timezones())} known ones is like it",
        ],
    ),
    (
        "[period]",
        'zone = "America/New_York"\n[period]',
        [
            'day.toml:6: period start: found 2031-05-04T00:00:00+02:00; in the zone "America/New_York" that '
            "moment is 2031-05-03T18:00:00-04:00",
        ],
    ),
    (
        'length = "24 h"',
        "length = 24",
        [
            'day.toml:6: period length: found 24; allowed: text such as "15 min" with one of the units s, min, h, d',
        ],
    ),
    (
        'length = "24 h"',
        'length = "24 hours"',
        [
            'day.toml:6: period length: found "24 hours"; allowed: text such as "15 min" with one of the '
            "units s, min, h, d",
        ],
    ),
    (
        'length = "24 h"',
        'length = "500 d"',
        [
            'day.toml:6: period length: found "500 d"; allowed: from 1 min to 400 d',
        ],
    ),
    (
        'length = "24 h"',
        'length = "30 s"',
        [
            'day.toml:6: period length: found "30 s"; allowed: from 1 min to 400 d',
        ],
    ),
    (
        'longest_step = "10 min"',
        "spacing = 0.5",
        [
            "day.toml:7: period spacing: found 0.5; allowed: from 1 m to 1000 m",
        ],
    ),
    (
        'longest_step = "10 min"',
        'local_inertia = "no"',
        [
            'day.toml:7: period local_inertia: found "no"; allowed: true or false',
        ],
    ),
    (
        'every = "1 min"',
        'every = "0 s"',
        [
            'day.toml:10: output every: found "0 s"; allowed: from 1 s to 24 h',
        ],
    ),
    (
        'length = "24 h"\nlongest_step = "10 min"\n\n[output]\nevery = "1 min"',
        'length = "400 d"\nlongest_step = "1 s"\n\n[output]\nevery = "1 min"\nevents_every = "2 s"',
        [
            "day.toml:7: period longest_step: found 1 s, 34,560,000 times in the period of 9600 h; allowed: up to "
            "10,000,000 times, here 4 s or longer",
            "day.toml:11: output events_every: found 2 s, 17,280,000 times in the period of 9600 h; allowed: up to "
            "10,000,000 times, here 4 s or longer",
        ],
    ),
    (
        'length = "24 h"\nlongest_step = "10 min"\n\n[output]\nevery = "1 min"',
        'length = "5 d"\nspacing = 1.0\n\n[output]\nprofiles_every = "1 s"',
        [
            "day.toml:10: output profiles_every: found 1 s, 432,000 long profiles of 3,000 points, at the spacing of "
            "1 m; allowed: up to 1,000,000,000 levels in all",
        ],
    ),
    (
        'every = "1 min"',
        'every = "10 min"\nevents_every = "4 min"',
        [
            "day.toml:11: output events_every: found 4 min; allowed: a whole part of every, 10 min",
        ],
    ),
    (
        'every = "1 min"',
        'every = "1 min"\nprofiles_every = "24 h"\n[limits]',
        [
            'day.toml:12: limits: unknown key; known: "canal", "title", "units", "zone", "period", "output", '
            '"inflow", "deliveries", "offtake_openings", "head", "tail", "losses", "start", "round_openings", "plans"',
        ],
    ),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_a_broken_period_is_refused_with_its_line_and_what_is_allowed(folder, old, new, messages):
    folder.replace("day.toml", old, new)

    assert folder.messages() == messages

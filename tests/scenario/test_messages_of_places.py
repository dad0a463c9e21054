"""Every message for a fault in escapes, gauges, losses and the roughness calendar."""

from pathlib import Path

import pytest

ESCAPE = '[[escapes]]\nname = "E"\npool = "Upper pool"\nchainage = 500.0\ncrest_level = 22.0\nlength = 10.0\n'
GAUGE = '[[gauges]]\nname = "S"\ngate = "Upper check"\nside = "upstream"\nzero_level = 19.0\n'
ENTRY = '[[roughness_calendar]]\nfrom = "06-01"\nfactor = 1.2\n'
CALENDAR_DAY = 'day of every year such as "06-01" (month-day, not "02-29"), or a date such as 2031-06-01'
CASES = [
    # text added to canal.toml, messages after the line
    (ESCAPE.replace("Upper pool", "Uper pool"), ['"E" pool: found "Uper pool", which is not described; did you mean']),
    (ESCAPE.replace("500.0", "1200.0"), ['"E" chainage: found 1200 m; allowed: up to the pool\'s end, 1000 m']),
    (ESCAPE.replace("22.0", "12.0"), ['"E" crest_level: found 12 m; allowed: not below the bed there, 19.904 m']),
    (ESCAPE.replace("10.0", "1500.0"), ['"E" length: found 1500 m; allowed: up to the length of the pool, 1000 m']),
    (ESCAPE + ESCAPE, ['escapes[2] "E" name: found "E", which is taken by an earlier one in escapes']),
    (ESCAPE + "coefficient = 4.0\n", ['"E" coefficient: found 4.0; allowed: above 0 m^0.5/s, up to 3 m^0.5/s']),
    (GAUGE + GAUGE, ['gauges[2] "S" name: found "S", which is taken by an earlier one in gauges']),
    (GAUGE.replace("Upper check", "Uper check"), ['"S" gate: found "Uper check", which is no gate of the canal; did']),
    (GAUGE.replace('side = "upstream"\n', ""), ['"S" side: required with gate, but not given']),
    (GAUGE + "chainage = 5.0\n", ['"S" chainage: not used with gate and side; a gauge stands beside a gate or along']),
    (
        GAUGE.replace('gate = "Upper check"\nside = "upstream"\n', 'pool = "Mill pool"\nchainage = 3000.0\n'),
        ['"S" chainage: found 3000 m; allowed: up to the pool\'s end, 2000 m'],
    ),
    (
        '[[gauges]]\nname = "S"\nzero_level = 19.0\n',
        ['gauges[1] "S": says nowhere where it stands; required: gate and side, or pool and chainage'],
    ),
    ('[losses]\nseepage = "-1 mm/day"\n', ['losses seepage: found "-1 mm/day"; allowed: from 0 mm/day to 10000']),
    ('[losses]\nrain = "3 m"\n', ["losses rain: found", "or text such as"]),
    (ENTRY.replace("06-01", "06-31"), [f'from: found "06-31"; allowed: {CALENDAR_DAY}']),
    (ENTRY.replace("06-01", "02-29"), [f'from: found "02-29"; allowed: {CALENDAR_DAY}']),
    (ENTRY.replace("06-01", "20310601"), [f'from: found "20310601"; allowed: {CALENDAR_DAY}']),
    (ENTRY.replace('"06-01"', "601"), [f"from: found 601; allowed: {CALENDAR_DAY}"]),
    (ENTRY.replace("1.2", "0.1"), ["factor: found 0.1; allowed: from 0.2 to 10"]),
    (
        ENTRY + 'pools = ["Mil pool"]\n',
        ['pools[1]: found "Mil pool", which is not described; did you mean "Mill pool"'],
    ),
    (ENTRY + "pools = []\n", ['pools: found an array of 0; allowed: "all", or an array of names of pools']),
    (
        ENTRY + ENTRY + 'pools = ["Mill pool"]\n',
        ["roughness_calendar[2] from: found 06-01, from which entry 1 already gives a factor for such a pool"],
    ),
]


@pytest.mark.parametrize(("text", "messages"), CASES, ids=[f"{k} {case[1][0][:40]}" for k, case in enumerate(CASES)])
def test_message(folder, text, messages):
    path = Path("canal.toml")
    path.write_text(path.read_text(encoding="utf-8") + "\n" + text, encoding="utf-8")
    found = folder.messages()
    assert len(found) == 1
    assert all(message in found[0] for message in messages)


def test_weather_of_the_day_is_refused_with_its_line(folder):
    path = Path("day.toml")
    text = '\n[losses]\nrain = [["07:00", "20 mm/h"], ["06:00", 0.0]]\n'
    path.write_text(path.read_text(encoding="utf-8") + text, encoding="utf-8")
    assert "losses rain[2][1]: found" in folder.messages()[0]
    assert "times must rise" in folder.messages()[0]


def test_seepage_of_the_day_in_a_pool_that_is_none(folder):
    folder.replace("day.toml", "[start]\n", '[losses]\nseepage = { "Uper pool" = 20.0 }\n\n[start]\n')
    assert folder.messages() == [
        'day.toml:23: losses seepage "Uper pool": "Uper pool" is no pool of the canal; did you mean "Upper pool"?'
    ]

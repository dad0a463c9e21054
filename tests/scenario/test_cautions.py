"""What is told of a day whose results do not show all that it says."""

import pytest

from toeline.scenario import load_scenario
from toeline.scenario.cautions import unseen_ends

EVERY, DELIVERY = 'every = "1 min"', '[["00:00", 0.4], ["08:00", 0.9]]'
LATE = "the last value begins at the very end of the period: it belongs to the next day, and no result shows it"
CASES = [
    # text in day.toml, text in its place, messages
    (EVERY, 'every = "1 h"', []),
    (
        EVERY,
        'every = "7 h"',
        [
            "day.toml:10: output every: found 7 h, which is no whole part of the period, 24 h: what happens in its "
            "last 3 h is stepped, but no result shows it"
        ],
    ),
    (
        EVERY,
        'every = "49 min"\nevents_every = "7 min"',
        [
            "day.toml:11: output events_every: found 7 min, which is no whole part of the period, 24 h: what happens "
            "in its last 5 min is stepped, but no result shows it"
        ],
    ),
    (DELIVERY, '[["00:00", 0.4], ["24:00", 0.9]]', [f'day.toml:13: deliveries "North lateral": {LATE}']),
    (DELIVERY, '{ shape = "lines", values = [["00:00", 0.4], ["24:00", 0.9]] }', []),
    (DELIVERY, '[["24:00", 0.4]]', []),
    ('[["06:00", 0.1]]', '[["06:00", 0.1], ["24:00", 0.2]]', [f'day.toml:16: offtake_openings "Farm turnout": {LATE}']),
]


@pytest.mark.parametrize(("old", "new", "messages"), CASES)
def test_caution(folder, old, new, messages):
    folder.replace("day.toml", old, new)
    assert [str(caution) for caution in unseen_ends(load_scenario("day.toml", plan="proposed"))] == messages

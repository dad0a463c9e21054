"""The factors of the roughness calendar, day by day."""

from datetime import UTC, date, datetime, timedelta, timezone

import numpy as np
import pytest
from tests.canals import day, scenario_of, stepped_canal

from toeline.network.build import network_of
from toeline.network.roughness import factor_on, roughness_changes

SEASON = [
    {"from": "04-01", "factor": 1.0, "shape": "lines"},
    {"from": "07-10", "factor": 1.4},
    {"from": "08-01", "factor": 1.1, "pools": ["P1"], "note": "weed cut"},
    {"from": "11-01", "factor": 1.0},
]


@pytest.fixture
def canal_with(tmp_path):
    def build(*entries):
        return scenario_of(tmp_path, stepped_canal(2, 1500.0, roughness_calendar=list(entries)), day(8.0)).canal

    return build


@pytest.mark.parametrize(
    ("at", "pool", "factor"),
    [
        (date(2031, 3, 31), "P0", 1.0),  # the last of the year before holds on
        (date(2031, 4, 1), "P0", 1.0),
        (date(2031, 5, 21), "P0", 1.2),  # half of the hundred days to 10 July
        (date(2031, 7, 10), "P0", 1.4),
        (date(2031, 9, 1), "P0", 1.4),
        (date(2031, 7, 31), "P1", 1.4),
        (date(2031, 8, 1), "P1", 1.1),
        (date(2032, 8, 1), "P1", 1.1),
        (date(2031, 12, 31), "P1", 1.0),
    ],
)
def test_season_repeats_every_year(canal_with, at, pool, factor):
    assert factor_on(at, canal_with(*SEASON).roughness_calendar, pool) == pytest.approx(factor, rel=1e-12)


def test_before_the_first_dated_entry_the_canal_is_as_its_sections_say(canal_with):
    calendar = canal_with({"from": "2031-06-01", "factor": 1.3}).roughness_calendar
    assert [factor_on(date(year, 6, 1), calendar, "P0") for year in (2030, 2031, 2040)] == [1.0, 1.3, 1.3]


def test_entry_of_one_year_goes_before_that_of_every_year(canal_with):
    calendar = canal_with({"from": "2031-06-01", "factor": 1.3}, {"from": "06-01", "factor": 1.1}).roughness_calendar
    assert [factor_on(date(year, 6, 1), calendar, "P0") for year in (2030, 2031, 2032)] == [1.1, 1.3, 1.1]


def test_run_of_days_changes_at_midnight_of_its_own_clock(canal_with):
    canal = canal_with({"from": "05-05", "factor": 1.2}, {"from": "05-07", "factor": 1.0})
    start = datetime(2031, 5, 4, 18, tzinfo=timezone(timedelta(hours=5, minutes=30)))
    changes = roughness_changes(canal, start, 5 * 86_400_000)
    assert [change.time / 3_600_000 for change in changes] == [0, 6, 54]
    assert [change.factors.tolist() for change in changes] == [[1.0, 1.0], [1.2, 1.2], [1.0, 1.0]]


def test_line_changes_every_midnight(canal_with):
    canal = canal_with({"from": "05-04", "factor": 1.0, "shape": "lines"}, {"from": "05-08", "factor": 1.4})
    changes = roughness_changes(canal, datetime(2031, 5, 4, tzinfo=UTC), 6 * 86_400_000)
    assert [change.factors[0] for change in changes] == pytest.approx([1.0, 1.1, 1.2, 1.3, 1.4])


def test_network_takes_factors_by_pool_and_leaves_the_floor_beyond_the_tail_gate(canal_with):
    network = network_of(canal_with(), 100.0)
    network.set_roughness(np.array([1.5, 2.0]))
    factor = network.channel.nodes.roughness / network.clean_roughness
    last = network.tables.pools.last_node
    assert np.unique(factor[: last[0] + 1]).tolist() == pytest.approx([1.5])
    assert np.unique(factor[last[0] + 1 : last[1] + 1]).tolist() == pytest.approx([2.0])
    assert np.unique(factor[last[1] + 1 :]).tolist() == [1.0]

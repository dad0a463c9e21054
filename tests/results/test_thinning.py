"""Thinning: every row around events and at whole intervals elsewhere, however blocks fall."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate
from toeline.findings.incidents import incidents
from toeline.findings.jumps import gate_jumps
from toeline.findings.ledger import ledger
from toeline.results.thinning import Thinning
from toeline.results.variables import growing

MINUTE = 60_000
EVENTS = {
    "gate_opening": (0.50, 0.51),
    "bay_opening": (0.50, 0.51),
    "gate_flow_state": (1, 3),
    "jump_state": (1, 3),
    "pool_bank_margin": (0.01, -0.01),
    "pool_lining_margin": (-0.01, 0.01),
    "escape_discharge": (0.0, 0.1),
}
"""Variables whose change is an event: before it, and from then on."""


class Kept:
    """Takes what is handed on."""

    def __init__(self):
        self.minutes: list[int] = []
        self.orders = 0

    def write(self, block):
        self.minutes += (block["time"] // MINUTE).tolist() if "time" in block else []
        self.orders += len(block.get("order_time", ()))


def rows(count: int, **changes: int) -> dict[str, np.ndarray]:
    """Rows every minute; a variable changes at the minute that is given for it, and at no other."""
    block = {variable.name: np.zeros((count, 2)) for variable in growing("time")}
    block["time"] = np.arange(count) * MINUTE
    for name, (before, after) in EVENTS.items():
        block[name] = np.full((count, 2), before)
        block[name][changes.get(name, count) :, 1] = after
    return block


def thinned(block, length: int, every: int = 10, within: int = 3) -> Kept:
    kept = Kept()
    thinning = Thinning(kept, every * MINUTE, within * MINUTE)
    for first in range(0, len(block["time"]), length):
        thinning.write({name: column[first : first + length] for name, column in block.items()})
    thinning.finish()
    return kept


@pytest.mark.parametrize("length", [1, 2, 7, 100])
@pytest.mark.parametrize("variable", EVENTS)
def test_rows_around_an_event_and_at_whole_intervals_are_kept(variable, length):
    kept = thinned(rows(48, **{variable: 25}), length)
    assert kept.minutes == [0, 10, 20, 22, 23, 24, 25, 26, 27, 28, 30, 40, 47]


def test_nothing_is_kept_twice_where_events_overlap():
    kept = thinned(rows(21, gate_opening=5, jump_state=7), 4)
    assert kept.minutes == [0, 2, 3, 4, 5, 6, 7, 8, 9, 10, 20]


def test_margin_that_is_missing_is_no_event():
    block = rows(21)
    block["pool_bank_margin"][:, 0] = np.nan
    assert thinned(block, 5).minutes == [0, 10, 20]


def test_what_is_not_along_time_passes():
    kept = Kept()
    Thinning(kept, MINUTE, MINUTE).write({"order_time": np.zeros(3)})
    assert kept.orders == 3


@pytest.fixture
def full_and_thin(tmp_path):
    """A day at every minute, and at every half-hour but around events."""
    orders = [order("03:10", "G0", by=0.3), order("09:50", "G1", by=-0.2)]
    coarse = {"every": "30 min", "events_every": "1 min", "events_within": "20 min"}
    runs = []
    for output in ({}, coarse):
        made = day({"shape": "steps", "values": [["00:00", 8.0], ["12:00", 9.0]]}, output=output, orders=orders)
        runs.append(simulate(scenario_of(tmp_path, stepped_canal(2, 2000.0), made)))
    return runs


def test_rows_of_a_thinned_run_are_those_of_the_full_one(full_and_thin):
    full, thin = full_and_thin
    assert 49 < thin.sizes["time"] < 250
    same = full.sel(time=thin.time)
    for variable in growing("time"):
        np.testing.assert_array_equal(thin[variable.name], same[variable.name])
    assert thin.order_completed.equals(full.order_completed)


def test_findings_of_a_thinned_run_are_those_of_the_full_one(full_and_thin):
    """Every state begins and ends in rows a minute apart, so hours differ by half such a row at each end."""
    full, thin = full_and_thin
    assert len(incidents(full)) == len(incidents(thin))
    for one, other in zip(gate_jumps(full), gate_jumps(thin), strict=True):
        assert one.jump_state_hours == pytest.approx(other.jump_state_hours, abs=1 / 30)
        assert one.flow_state_hours == pytest.approx(other.flow_state_hours, abs=1 / 30)
        assert sum(other.jump_state_hours.values()) == pytest.approx(24.0)
    assert ledger(full) == ledger(thin)

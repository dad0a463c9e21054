"""Hold discharge, followed on paper: 10 m3/s for 1 m of opening."""

import numpy as np
import pytest

from toeline.rules.hold_discharge import HoldDischarge
from toeline.scenario.series import Series

SETTINGS = {"gate": "Head gate", "every": 900.0}


def test_the_opening_is_that_of_the_gate_law(bench):
    rule = bench(HoldDischarge, target=6.2, **SETTINGS)
    assert rule.decide(0) == pytest.approx(0.62)


def test_the_target_may_change_during_the_day(bench):
    ramp = Series(np.array([0, 60 * 60_000]), np.array([5.0, 7.0]), "lines")
    rule = bench(HoldDischarge, target=ramp, **SETTINGS)
    assert [rule.decide(minute) for minute in (0, 15, 30, 60, 75)] == pytest.approx([0.50, 0.55, 0.60, 0.70, 0.70])


def test_the_gate_is_left_alone_inside_the_band(bench):
    rule = bench(HoldDischarge, target=5.2, band=0.25, **SETTINGS)
    assert rule.decide(0) == 0.50
    assert rule.record is None


def test_known_deliveries_are_sent_their_lead_times_ahead(bench):
    rule = bench(HoldDischarge, target=5.0, feedforward={"Upper pool": 1800.0, "Lower pool": 2400.0}, **SETTINGS)
    rule.ask("Far lateral", [0, 420], [0.4, 0.9])
    rule.ask("North lateral", [0, 420], [0.0, 0.2])
    # Far lateral: 1800 + 0.5·2400 = 3000 s before 07:00, 06:10: the decision of 06:15 opens for 0.5 m3/s.
    # North lateral: 0.9·1800 = 1620 s, 06:33: the decision of 06:45 opens for 0.2 m3/s more.
    openings = [rule.decide(minute) for minute in (0, 360, 375, 390, 405, 420)]
    assert openings == pytest.approx([0.50, 0.50, 0.55, 0.55, 0.57, 0.57])


@pytest.mark.parametrize(("kind", "minute"), [("wave", 420 - 30), ("volume", 420 - 45)])
def test_lead_times_of_the_pools(bench, kind, minute):
    # wave: 1500 + 0.5·1000 = 2000 s ahead of 07:00; volume: 1800 + 0.5·2400 = 3000 s; decisions every 15 min
    rule = bench(HoldDischarge, target=5.0, feedforward=kind, **SETTINGS)
    rule.ask("Far lateral", [0, 420], [0.4, 0.9])
    moved = [at for at in range(0, 435, 15) if rule.decide(at) > 0.5 and rule.record]
    assert moved == [minute]


def test_what_should_be_on_its_way_at_the_first_decision_goes_out_at_once(bench):
    rule = bench(HoldDischarge, target=5.0, feedforward="volume", **SETTINGS)
    rule.ask("Far lateral", [0, 30], [0.4, 0.9])
    # 3000 s ahead of 00:30 is before the start
    assert [rule.decide(minute) for minute in (0, 15, 30)] == pytest.approx([0.55, 0.55, 0.55])

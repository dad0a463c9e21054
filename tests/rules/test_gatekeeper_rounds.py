"""Gatekeeper rounds, followed on paper: one step of 5 cm a visit outside a band of 4 cm about 103.60 m."""

import pytest

from toeline.rules.gatekeeper_rounds import BELOW_GATE, GatekeeperRounds

SETTINGS = {"gate": "Mill check", "band": 0.04, "step": 0.05}


def test_one_step_a_visit_towards_the_target(bench):
    rule = bench(GatekeeperRounds, **SETTINGS)
    levels = (103.62, 103.65, 103.70, 103.63, 103.55, 103.58)
    openings = [rule.decide(180 * visit, headwater=level) for visit, level in enumerate(levels)]
    assert openings == pytest.approx([0.50, 0.55, 0.60, 0.60, 0.55, 0.55])


def test_a_level_read_below_the_gate_opens_when_it_is_low(bench):
    rule = bench(GatekeeperRounds, **SETTINGS, where=BELOW_GATE, target=101.20)
    assert rule.decide(0, tailwater=101.10) == pytest.approx(0.55)


def test_the_step_ends_at_the_end_of_travel(bench):
    rule = bench(GatekeeperRounds, opening=1.47, **SETTINGS)
    assert rule.decide(0, headwater=103.90) == 1.50
    assert rule.record.reason == "travel is 0 to 1.500 m"


def test_the_gate_is_shut_while_the_water_below_stands_higher_and_then_stands_as_before(bench):
    rule = bench(GatekeeperRounds, **SETTINGS)
    assert rule.decide(0, headwater=103.80, tailwater=103.805) == 0.50  # no staff is read so finely
    assert rule.decide(180, tailwater=103.90) == 0.0
    assert rule.decide(360) == 0.0
    assert rule.decide(540, tailwater=103.70) == 0.50
    assert rule.decide(720) == pytest.approx(0.55)

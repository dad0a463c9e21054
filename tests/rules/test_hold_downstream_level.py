"""Hold downstream level, followed on paper: the discharge is set, and the opening follows from the gate law."""

import pytest

from toeline.rules.hold_downstream_level import BELOW_GATE, HoldDownstreamLevel

SETTINGS = {"gate": "Mill check", "band": 0.02, "every": 600.0, "discharge_gain": 4.0, "reset": 3600.0}


def test_a_level_too_low_at_the_lower_end_opens(bench):
    rule = bench(HoldDownstreamLevel, **SETTINGS)
    assert rule.decide(0, lower_end=100.90) == 0.50
    # 0.10 too low, 0.08 beyond the band: 5 + 4·0.08·10/60 = 5.0533, + 4·0.08 = 5.3733 m3/s
    assert rule.decide(10, lower_end=100.80) == pytest.approx(0.537333, abs=1e-6)
    # 0.04 beyond: base 5.0533 + 4·0.04/6 = 5.08, wanted 5.24 m3/s
    assert rule.decide(20, lower_end=100.84) == pytest.approx(0.524)


def test_a_level_held_just_below_the_gate(bench):
    rule = bench(HoldDownstreamLevel, **SETTINGS | {"where": BELOW_GATE, "target": 101.20})
    rule.decide(0, tailwater=101.20)
    assert rule.decide(10, tailwater=101.10) == pytest.approx(0.537333, abs=1e-6)


def test_gains_found_for_the_pool(bench):
    rule = bench(HoldDownstreamLevel, **SETTINGS | {"discharge_gain": None, "reset": None})
    rule.decide(0, lower_end=100.90)
    # closed-loop time max(delay 1000, 36 000/18, 4·600) = 2400 s: 36 000/(2400 + 1000), 4·3400 s
    assert rule.rule.memory["gain"] == pytest.approx(36_000.0 / 3400.0)
    assert rule.rule.memory["reset"] == pytest.approx(13_600.0)


def test_nothing_winds_up_below_a_closed_gate(bench):
    rule = bench(HoldDownstreamLevel, opening=0.0, **SETTINGS)
    rule.decide(0, lower_end=100.90)
    for minute in range(10, 310, 10):
        assert rule.decide(minute, lower_end=101.10) == 0.0
    # 0.03 beyond: 0 + 4·0.03/6 + 4·0.03 = 0.14 m3/s
    assert rule.decide(310, lower_end=100.85) == pytest.approx(0.014)

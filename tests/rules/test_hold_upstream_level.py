"""Hold upstream level, followed on paper: gain 0.4, reset 40 min, every 5 min, band 0.02 m, target 103.60 m."""

import pytest

from toeline.rules.hold_upstream_level import HoldUpstreamLevel

SETTINGS = {"gate": "Mill check", "band": 0.02, "every": 300.0, "gain": 0.4, "reset": 2400.0}


def test_a_level_too_high_opens_by_gain_and_reset(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    assert rule.decide(0, headwater=103.60) == 0.50
    # 0.05 too high, 0.03 beyond the band: base 0.50 + 0.4·0.03·5/40 = 0.5015; wanted 0.5015 + 0.4·0.03 = 0.5135
    assert rule.decide(5, headwater=103.65) == pytest.approx(0.5135)
    # 0.08 beyond: base 0.5015 + 0.4·0.08·5/40 = 0.5055; wanted 0.5055 + 0.032 = 0.5375
    assert rule.decide(10, headwater=103.70) == pytest.approx(0.5375)


def test_a_level_too_low_closes(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    rule.decide(0, headwater=103.60)
    # 0.06 beyond the band: base 0.50 − 0.4·0.06·5/40 = 0.497; wanted 0.497 − 0.024 = 0.473
    assert rule.decide(5, headwater=103.52) == pytest.approx(0.473)


def test_the_gate_is_left_alone_inside_the_band(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    for minute, level in enumerate((103.60, 103.62, 103.58, 103.61)):
        assert rule.decide(5 * minute, headwater=level) == 0.50
    assert rule.record is None


def test_a_move_too_small_is_carried_over_without_a_record(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS | {"gain": 0.1})
    rule.decide(0, headwater=103.60)
    # 0.03 beyond: base 0.500375, wanted 0.503375: 3.4 mm, less than the smallest move of 1 cm
    assert rule.decide(5, headwater=103.65) == 0.50
    assert rule.record is None
    # 0.10 beyond: base 0.501625, wanted 0.511625: all of it at once
    assert rule.decide(10, headwater=103.72) == pytest.approx(0.511625)


def test_it_starts_without_a_bump(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    # 0.14 beyond at the first decision: base 0.50 − 0.056, then + 0.4·0.14·5/40 = 0.451; wanted 0.451 + 0.056 = 0.507
    assert rule.decide(0, headwater=103.76) == 0.50  # 7 mm are too small
    assert rule.decide(5, headwater=103.76) == pytest.approx(0.514)


def test_it_goes_on_from_what_somebody_else_has_set(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    rule.decide(0, headwater=103.60)
    rule.motion.order(60_000, "opening", 0.70, 0.70)
    # 0.03 beyond: base 0.70 − 0.012 + 0.0015 = 0.6895; wanted 0.7015, too small a move
    assert rule.decide(5, headwater=103.65) == 0.70
    # 0.08 beyond: base 0.6895 + 0.004 = 0.6935; wanted 0.7255
    assert rule.decide(10, headwater=103.70) == pytest.approx(0.7255)


def test_nothing_winds_up_while_the_leaf_is_at_the_end_of_its_travel(bench):
    rule = bench(HoldUpstreamLevel, opening=1.50, **SETTINGS)
    rule.decide(0, headwater=103.60)
    for minute in range(5, 125, 5):  # two hours too high with the gate fully open
        assert rule.decide(minute, headwater=103.80) == 1.50
    # 0.06 beyond on the other side: the base is still 1.50; 1.50 − 0.003 − 0.024 = 1.473
    assert rule.decide(125, headwater=103.52) == pytest.approx(1.473)


def test_nothing_winds_up_while_moves_are_refused(bench):
    rule = bench(HoldUpstreamLevel, limits={"moves_per_hour": 1}, **SETTINGS)
    rule.decide(0, headwater=103.60)
    assert rule.decide(5, headwater=103.65) == pytest.approx(0.5135)
    for minute in range(10, 65, 5):
        assert rule.decide(minute, headwater=103.70) == pytest.approx(0.5135)
        assert "moves in an hour" in rule.record.reason
    # an hour after the first move: base 0.5015 + 0.004 = 0.5055; wanted 0.5375
    assert rule.decide(65, headwater=103.70) == pytest.approx(0.5375)


def test_a_gain_without_a_reset_time_is_proportional_alone(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS | {"reset": None})
    rule.decide(0, headwater=103.60)
    for minute in range(5, 60, 5):
        assert rule.decide(minute, headwater=103.70) == pytest.approx(0.532)  # 0.50 + 0.4·0.08


def test_a_gain_in_discharge_terms(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS | {"gain": None, "discharge_gain": 6.0})
    rule.decide(0, headwater=103.60)
    # 5 m3/s pass; 0.03 beyond: 5 + 6·0.03·5/40 + 6·0.03 = 5.2025 m3/s, at 10 m3/s per m of opening
    assert rule.decide(5, headwater=103.65) == pytest.approx(0.52025)


def test_gains_found_for_the_pool(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS | {"gain": None, "reset": None})
    rule.decide(0, headwater=103.60)
    # closed-loop time max(36 000 m² over half of 36 m²/s, 4·300 s) = 2000 s, no delay: 36 000 m² / 2000 s = 18 m²/s,
    # at 10 m²/s of discharge per opening 1.8; reset 4·2000 s
    assert rule.rule.memory["gain"] == pytest.approx(1.8)
    assert rule.rule.memory["reset"] == pytest.approx(8000.0)
    # 0.03 beyond: 0.50 + 1.8·0.03·300/8000 + 1.8·0.03
    assert rule.decide(5, headwater=103.65) == pytest.approx(0.556025)


def test_feedforward_moves_inside_the_band(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS, feedforward="volume")
    rule.ask("Far lateral", [0, 180], [0.4, 0.9])
    # half of the Lower pool's 2400 s: 20 min before 03:00 the gate opens for 0.5 m3/s, 5 cm
    openings = [rule.decide(minute, headwater=103.60) for minute in (0, 150, 155, 160, 165)]
    assert openings == pytest.approx([0.50, 0.50, 0.50, 0.55, 0.55])


def test_nothing_winds_up_while_the_largest_move_stands_in_the_way(bench):
    rule = bench(HoldUpstreamLevel, limits={"largest_move": 0.02}, **SETTINGS)
    rule.decide(0, headwater=103.60)
    # 0.38 beyond: wanted 0.671, of which 2 cm are moved; the base stays at 0.50
    assert rule.decide(5, headwater=104.00) == pytest.approx(0.52)
    # 0.08 too low, 0.06 beyond: base 0.50 − 0.003, wanted 0.473, of which 2 cm are moved: the base stays again
    assert rule.decide(10, headwater=103.52) == pytest.approx(0.50)
    assert rule.rule.memory["base"] == pytest.approx(0.50)


def test_what_cannot_pass_lets_the_base_come_back_when_the_level_has_turned(bench):
    rule = bench(HoldUpstreamLevel, opening=1.40, **SETTINGS | {"gain": None, "discharge_gain": 6.0})
    rule.decide(0, headwater=103.60)
    rule.rule.memory["base"] = 18.0  # of a time with more head; no more than 15 m3/s pass now
    # 0.03 beyond on either side: 6·0.03·300/2400 = 0.0225 m3/s a decision, towards what is lacking not at all
    assert rule.decide(5, headwater=103.65) == 1.50
    assert rule.rule.memory["base"] == pytest.approx(18.0)
    assert rule.decide(10, headwater=103.55) == 1.50
    assert rule.rule.memory["base"] == pytest.approx(18.0 - 0.0225)


def test_the_gate_is_shut_while_the_water_below_stands_higher_and_goes_on_from_where_it_stood(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    rule.decide(0, headwater=103.60)
    assert rule.decide(5, headwater=103.80, tailwater=103.805) == 0.50  # no gauge is read so finely
    for minute in range(10, 65, 5):
        assert rule.decide(minute, headwater=103.80, tailwater=103.90) == 0.0
    # 0.18 beyond: as at a first decision at 0.50, base 0.50 − 0.072 + 0.009, wanted 0.509
    assert rule.decide(65, headwater=103.80, tailwater=101.20) == pytest.approx(0.509)
    assert rule.decide(70, headwater=103.60) == pytest.approx(0.509)
    assert rule.rule.memory["base"] == pytest.approx(0.437)
    assert "shut_from" not in rule.rule.memory


def test_a_shut_gate_is_opened_again_inside_the_band_too(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    assert rule.decide(0, headwater=103.60, tailwater=103.70) == 0.0  # the first decision of all
    assert rule.decide(5, headwater=103.60, tailwater=103.60) == 0.50


def test_a_gate_that_somebody_opens_against_the_head_is_shut_again_and_goes_on_from_there(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS)
    rule.decide(0, headwater=103.60, tailwater=103.70)
    rule.motion.order(60_000, "opening", 0.30, 0.30)
    assert rule.decide(5, headwater=103.60, tailwater=103.60) == 0.30
    assert rule.decide(10, headwater=103.60, tailwater=103.70) == 0.0
    assert rule.decide(15, headwater=103.60, tailwater=103.50) == 0.30


def test_a_stuck_gate_is_opened_again_when_it_can_be(bench):
    rule = bench(HoldUpstreamLevel, limits={"moves_per_hour": 1}, **SETTINGS)
    assert rule.decide(0, headwater=103.60, tailwater=103.70) == 0.0
    assert rule.decide(30, tailwater=103.50) == 0.0
    assert rule.decide(60) == 0.50


def test_what_is_known_ahead_waits_for_the_head(bench):
    rule = bench(HoldUpstreamLevel, **SETTINGS, feedforward="volume")
    rule.ask("Far lateral", [0, 180], [0.4, 0.9])
    # 20 min before 03:00 the gate opens by 5 cm; reversed meanwhile, it opens from where it stood when the head is back
    levels = {150: 101.20, 160: 103.70, 165: 101.20, 170: 101.20}
    openings = [rule.decide(minute, headwater=103.60, tailwater=level) for minute, level in levels.items()]
    assert openings == pytest.approx([0.50, 0.0, 0.55, 0.55])

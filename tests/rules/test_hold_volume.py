"""Hold volume, followed on paper: an error is to be made good within 2 h; reset 8 h; every 5 min; band 100 m³."""

import pytest

from toeline.rules.hold_volume import LOWER, HoldVolume


def test_too_little_opens_the_upper_gate(bench):
    rule = bench(HoldVolume, pool="Upper pool", band=100.0)
    assert rule.rule.gate == "Head gate"
    assert rule.decide(0, volume=50_000.0) == 0.50
    # 820 m³ too little, 720 beyond the band: 720/7200 = 0.1 m3/s; base 5 + 0.1·300/28 800 = 5.00104; wanted 5.10104
    assert rule.decide(5, volume=49_180.0) == pytest.approx(0.510104, abs=1e-6)


def test_too_much_opens_the_lower_gate(bench):
    rule = bench(HoldVolume, pool="Upper pool", by=LOWER, target=50_000.0, band=100.0)
    assert rule.rule.gate == "Mill check"
    rule.decide(0, volume=50_000.0)
    assert rule.decide(5, volume=50_820.0) == pytest.approx(0.510104, abs=1e-6)


def test_the_band_is_one_per_cent_of_the_target_where_none_is_given(bench):
    rule = bench(HoldVolume, pool="Upper pool")
    rule.decide(0, volume=50_000.0)
    assert rule.decide(5, volume=49_510.0) == 0.50
    # 1220 too little, 720 beyond 1 % of 50 000
    assert rule.decide(10, volume=48_780.0) == pytest.approx(0.510104, abs=1e-6)

"""A run on one page."""

import json

import numpy as np
import pytest

from toeline.constants import CAUTION
from toeline.report.run_summary import run_summary
from toeline.units import Display, UnitSystem


def one_bad_hour(values: tuple[float, float], gate: int = 0, start: int = 14) -> np.ndarray:
    """Per step and gate, the quiet value and for an hour another one."""
    series = np.full((49, 2), values[0])
    series[start : start + 12, gate] = values[1]
    return series


@pytest.fixture
def swept_hour(invented_run):
    """From about 07:10 for an hour the jump below the Middle check ends beyond the protected floor."""
    return invented_run(
        jump_state=one_bad_hour((1, 4)),
        protection_margin=one_bad_hour((0.30, -0.14)),
        jump_end_distance=one_bad_hour((9.0, 41.2)),
        gate_protection_end=np.array([34.0, 34.0]),
    )


def section(page: str, title: str) -> str:
    """The lines of one section, in one line."""
    _, _, after = page.partition(f"{title.upper()}\n")
    return " ".join(after.partition("\n\n")[0].split())


def test_what_goes_wrong_comes_first_with_place_time_and_amount(swept_hour, metric):
    page = run_summary(swept_hour, metric)
    first = section(page, "What goes wrong")
    assert page.index("WHAT GOES WRONG") < page.index("FLOOR AND PEOPLE")
    assert "Middle check: jump beyond protection, 07:08 to 08:07 (58 min)" in first
    assert "worst 0.14 m of tailwater missing at 07:10" in first
    assert "the jump ends up to 41.2 m from the gate; the floor is protected to 34.0 m" in first


def test_a_few_incidents_are_not_told_twice(swept_hour, metric):
    assert "In short" not in section(run_summary(swept_hour, metric), "What goes wrong")


def test_many_incidents_are_told_in_short_first_the_gravest_before_the_others(invented_run, metric):
    run = invented_run(
        pool_bank_margin=one_bad_hour((0.5, -0.004), start=30),
        pool_lining_margin=np.full((49, 2), -0.2),
        jump_state=one_bad_hour((1, 4)),
        protection_margin=one_bad_hour((0.30, -0.14)),
    )
    first = section(run_summary(run, metric), "What goes wrong")
    bank = "water above the bank: Upper pool; from 08:30; worst under 0.01 m above the bank"
    jump = "jump beyond protection: Middle check; from 07:08; worst 0.14 m of tailwater missing"
    lining = "water above the lining: Lower pool; Upper pool; from 06:00; worst at Lower pool 0.20 m above the lining"
    assert f"In short, 4 incidents, each told below: {bank} {jump} {lining} Lower pool: water above" in first


def test_both_hazards_stand_side_by_side(swept_hour, metric):
    line = section(run_summary(swept_hour, metric), "Floor and people")
    assert "floor: jump beyond protection people: drowned roller" in line
    assert "Middle check 58 min 3 h" in line
    assert "Last check - 4 h" in line


def test_a_quiet_run_is_not_called_safe(invented_run, metric):
    page = run_summary(invented_run(), metric)
    assert "No incident." in section(page, "What goes wrong")
    assert "makes no place safe" in section(page, "What goes wrong")


def test_many_incidents_of_one_kind_at_one_place_are_told_together(invented_run, metric):
    bad = np.zeros((49, 2), dtype=bool)
    bad[5:45:8, 0] = True
    run = invented_run(jump_state=np.where(bad, 4, 1), protection_margin=np.where(bad, -0.10, 0.30))
    first = section(run_summary(run, metric), "What goes wrong")
    assert first.count("Middle check") == 1
    assert "5 times between" in first


def test_volumes_not_delivered_add_up(invented_run, metric):
    demand, delivery = np.full((49, 1), 0.5), np.full((49, 1), 0.5)
    delivery[10:12] = delivery[30:32] = 0.1
    first = section(run_summary(invented_run(demand=demand, delivery=delivery), metric), "What goes wrong")
    assert "East lateral: delivery shortfall" in first
    assert "worst 0.100 m3/s" in first
    assert "volume not delivered 480 m3" in first


def test_margins_come_with_their_time(swept_hour, metric):
    assert "Middle check -0.14 m at 07:10 0.10 m at 06:00 41.2 m at 07:10" in section(
        run_summary(swept_hour, metric), "Least margins"
    )


def test_states_that_do_not_occur_are_left_out(swept_hour, metric):
    hours = section(run_summary(swept_hour, metric), "Hours in each state")
    assert "beyond protection" in hours
    assert "undular" not in hours
    assert "overtopped" not in hours


def test_the_ledger_is_in_both_units_with_its_residual(invented_run, metric):
    volume = np.linspace(0.0, 12_334.8183754752, 49)
    page = run_summary(invented_run(canal_inflow_volume=volume, canal_outflow_volume=volume), metric)
    water = section(page, "Water ledger")
    assert "taken in at the head 12,335 10.00" in water
    assert "let out at the tail 12,335 10.00" in water
    assert "delivered, East lateral 0 0.00" in water
    assert "residual 0 0.00" in water


def order(invented_run, status: int, reason: str):
    return invented_run(
        order_time=np.array([1200.0]), order_gate=np.array(["Middle check"], dtype=object), order_kind=np.array([0]),
        order_source=np.array(["schedule"], dtype=object),
        order_value=np.array([2.5]), order_opening_before=np.array([0.4]), order_opening_after=np.array([1.2]),
        order_completed=np.array([1500.0]), order_status=np.array([status]),
        order_reason=np.array([reason], dtype=object),
    )  # fmt: skip


def test_a_trimmed_order_tells_why(invented_run, metric):
    run = order(invented_run, 1, "travel is 0 to 1.200 m")
    orders = section(run_summary(run, metric), "Orders")
    assert orders == (
        "1 order, 0 carried out as given. 06:20 Middle check, open to 2.50 m: trimmed to 1.20 m: travel is 0 to 1.200 m"
    )


def test_an_order_carried_out_as_given_is_only_counted(invented_run, metric):
    assert section(run_summary(order(invented_run, 0, ""), metric), "Orders") == "1 order, 1 carried out as given."


def test_a_run_that_stopped_says_so_at_once(invented_run, metric):
    page = run_summary(invented_run(outcome="stopped at 10:00: interrupted"), metric)
    assert "stopped at 10:00: interrupted" in " ".join(page.partition("WHAT GOES WRONG")[0].split())
    assert "run stopped early" in section(page, "What goes wrong")


def test_a_run_without_a_row_says_that_nothing_is_there(invented_run, metric):
    assert "before anything reached the disk" in run_summary(invented_run().isel(time=slice(0)), metric)


def test_values_are_in_the_units_asked_for(swept_hour):
    page = run_summary(swept_hour, Display(UnitSystem.us_customary))
    assert "worst 0.46 ft of tailwater missing" in page
    assert " m at" not in page


@pytest.mark.parametrize("width", [40, 80])
def test_the_page_keeps_to_its_width_and_ends_with_the_caution(swept_hour, metric, width):
    page = run_summary(swept_hour, metric, width=width)
    assert max(len(line) for line in page.splitlines()) <= width
    assert section(page, "Caution") == CAUTION


def test_an_escape_that_spills_tells_when_and_how_much(invented_run, metric):
    volume = np.linspace(0.0, 1200.0, 49)[:, None]
    page = run_summary(invented_run(escape_discharge=one_bad_hour((0.0, 0.5))[:, :1], escape_volume=volume), metric)
    assert "Storm escape, Upper pool: spills 07:" in section(page, "ESCAPES")
    assert "1,200 m3 in all, at most 0.500 m3/s at 07:10" in section(page, "ESCAPES")


def test_an_escape_that_stays_dry_says_so(invented_run, metric):
    assert "Did not spill: Storm escape." in section(run_summary(invented_run(), metric), "ESCAPES")


def test_a_gauge_shows_its_readings_as_on_the_staff(invented_run, metric):
    readings = np.linspace(1.0, 1.48, 49)[:, None]
    text = section(run_summary(invented_run(gauge_reading=readings), metric), "STAFF GAUGES")
    assert "Staff 3 Lower pool 1.00 m 1.00 m at 06:00 1.48 m at 10:00" in " ".join(text.split())


def test_roughness_is_told_only_where_the_calendar_changes_it(invented_run, metric):
    quiet, weedy = invented_run(), invented_run(pool_roughness_factor=np.full((49, 2), 1.15))
    assert "ROUGHNESS" not in run_summary(quiet, metric)
    assert "Upper pool 1.150 1.150 1.150" in " ".join(section(run_summary(weedy, metric), "ROUGHNESS").split())


def test_the_ledger_is_told_pool_by_pool_with_losses(invented_run, metric):
    lost = np.outer(np.linspace(0.0, 1.0, 49), [40.0, 25.0])
    page = section(run_summary(invented_run(pool_loss_volume=lost), metric), "WATER LEDGER")
    words = " ".join(page.split())
    assert "lost in Upper pool 40 0.03" in words
    assert "m3 lost residual Upper pool 40 -40 Lower pool 25 -25 canal 65 -65" in words


def test_uneven_bays_are_told_with_what_is_not_modelled(invented_run, metric):
    page = run_summary(invented_run(bay_opening=one_bad_hour((0.3, 0.8))), metric)
    text = section(page, "BAYS THAT MOVE APART")
    assert "Last check: bays 1 and 2, side by side, differ most: by 0.50 m at 07:10." in text
    assert "side rollers" in text


def test_order_to_one_bay_names_it(invented_run, metric):
    order = {
        "order_time": np.array([600.0]), "order_gate": np.array(["Last check"], object), "order_bay": np.array([2]),
        "order_reason": np.array(["too small"], object), "order_status": np.array([2]),
        "order_source": np.array(["schedule"], object),
    }  # fmt: skip
    assert "Last check, bay 2, " in section(run_summary(invented_run(**order), metric), "ORDERS")


FALL = {
    "kind": "fall", "limit": 0.15, "unit": "m", "places": ["Upper pool", "Lower pool"], "window": 3600.0,
    "source": "standing order 7",
}  # fmt: skip
MOVES = {"kind": "moves", "limit": 4, "unit": "count", "places": ["Last check"], "window": 86_400.0, "source": "hoist"}


@pytest.fixture
def falling(invented_run):
    """From 08:00 the Upper pool falls by 24 cm in two hours: 12 cm an hour."""

    def run(**limit):
        levels = np.zeros((49, 2))
        levels[:, 0] = np.interp(np.arange(49), [24, 48], [2.0, 1.76])
        limits = json.dumps([FALL | limit, MOVES])
        return invented_run(pool_tail_level=levels, attributes={"limits": limits})

    return run


def test_a_limit_that_is_not_passed_is_told_with_its_use_and_source(falling, metric):
    limits = section(run_summary(falling(), metric), "Limits")
    assert "fall in 1 h, all pools, at most 0.15 m: 0.12 m (80 %), Upper pool, lower end" in limits
    assert "standing order 7" in limits
    assert "moves in 24 h, Last check, at most 4: 0 (0 %)" in limits
    assert "Held against values every 5 min" in limits
    assert "what came before the run is not in it" in limits


def test_a_limit_that_is_passed_is_an_incident_with_its_window(falling, metric):
    page = run_summary(falling(limit=0.06), metric)
    assert "Upper pool, lower end: fall in 1 h over the limit, 08:30 to 10:00" in section(page, "What goes wrong")
    assert "worst 0.12 m in the 1 h to 09:00; limit 0.06 m, standing order 7" in section(page, "What goes wrong")
    assert "over the limit: 0.12 m (200 %)" in section(page, "Limits")


def test_without_limits_the_page_says_what_was_not_checked(invented_run, metric):
    assert "not held against any" in section(run_summary(invented_run(), metric), "Limits")


def test_times_with_a_roller_are_told_for_every_gate(swept_hour, metric):
    hazards = section(run_summary(swept_hour, metric), "Floor and people")
    assert "Roller below Middle check: 06:00 to 07:10 (1 h 10 min); 08:10 to 10:00" in hazards
    assert "Roller below Last check: 06:00 to 10:00 (4 h)" in hazards


def test_indicators_stand_by_place(invented_run, metric):
    demand = np.full((49, 1), 0.5)
    run = invented_run(demand=demand, delivery=demand * 0.9, pool_target_level=np.array([1.0, np.nan]))
    text = section(run_summary(run, metric), "Indicators")
    assert "deliveries adequacy efficiency dependability whole canal 0.900 1.000 0.000" in text
    assert "East lateral 0.900 720 m3 0.000" in text
    assert "levels maximum error integrated error steady-state error Upper pool 1.000 1.021 1.000" in text
    assert "gates integrated movement" in text
    assert "moves" not in text


def test_without_demand_the_page_says_that_deliveries_have_no_indicators(invented_run, metric):
    text = section(run_summary(invented_run(demand=np.full((49, 1), np.nan)), metric), "Indicators")
    assert "no indicators of deliveries" in text

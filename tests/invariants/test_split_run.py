"""A day split at a full hour, and gone on with from the end state, equals the unbroken day."""

import numpy as np
import pytest
from tests.canals import Table, day, order, scenario_of, stepped_canal

from toeline import open_run, simulate

ORDERS = [
    order("02:30", "G0", by=0.10),
    order("05:58", "G1", by=0.20),  # still moving at six
    order("07:15", "G2", opening=0.30),
]
INFLOW = [(0, 8.0), (5, 8.0), (7, 11.0)]
"""Hours and m³/s; six lies in the middle of the ramp."""

AGREES = 1e-9


def canal() -> Table:
    take = {
        "name": "T0",
        "pool": "P1",
        "chainage": 700.0,
        "kind": "orifice",
        "sill_level": 1.2,
        "width": 0.5,
        "opening": 0.3,
    }
    return stepped_canal(3, 1500.0, offtakes=[take])


def inflow_between(start: float, end: float) -> Table:
    hours, values = zip(*INFLOW, strict=True)
    inner = [start, *(h for h in hours if start < h < end), end]
    return {"shape": "lines", "values": [[f"+{h - start:g} h", float(np.interp(h, hours, values))] for h in inner]}


def part(begin: int, end: int, local_inertia: bool, **tables) -> Table:
    orders = [dict(one) for one in ORDERS if begin <= int(one["at"][:2]) < end]
    period = {"start": f"2031-05-04T{begin:02d}:00:00Z", "local_inertia": local_inertia}
    return day(inflow_between(begin, end), length=f"{end - begin} h", period=period, orders=orders, **tables)


@pytest.mark.parametrize("hour", [4, 6], ids=["at rest", "while a gate moves and the inflow rises"])
@pytest.mark.parametrize("local_inertia", [False, True], ids=["quasi-steady", "local inertia"])
def test_split_run_equals_the_unbroken_one(tmp_path, hour, local_inertia):
    files = {name: tmp_path / f"{name}.nc" for name in ("whole", "first", "second")}
    simulate(scenario_of(tmp_path, canal(), part(0, 12, local_inertia), name="whole"), files["whole"]).close()
    simulate(scenario_of(tmp_path, canal(), part(0, hour, local_inertia), name="first"), files["first"]).close()
    follows = part(hour, 12, local_inertia, start={"file": "first.nc"})
    simulate(scenario_of(tmp_path, canal(), follows, name="second"), files["second"]).close()
    with open_run(files["whole"]) as whole, open_run(files["second"]) as second:
        same_times = whole.sel(time=second.time, profile_time=second.profile_time)
        for name in ("water_level", "pool_tail_level", "gate_opening", "gate_discharge", "delivery"):
            assert np.abs(same_times[name] - second[name]).max() <= AGREES, name
        assert np.abs(whole.end_level - second.end_level).max() <= AGREES


RULES = [
    {"kind": "hold downstream level", "gate": "G0", "feedforward": "volume"},
    {"kind": "hold upstream level", "gate": "G1", "every": "7 min"},
    {"kind": "hold volume", "pool": "P2", "by": "lower gate", "target": 30_000.0},
]


def test_a_day_under_rules_split_equals_the_unbroken_one(tmp_path):
    """To the last bit: gains found at the first start, bases, carried moves and moves of the last hour all go on."""

    def half(begin: int, end: int, name: str, **tables):
        takes = {"T1": [["+0 h", 0.2], ["+2 h", 0.5]]} if begin == 0 else {"T1": [["+0 h", 0.5]]}
        keys = part(begin, end, False, **tables) | {
            "inflow": 8.0, "deliveries": takes, "plans": {"only": {"rules": RULES}},
        }  # fmt: skip
        take = {"name": "T1", "pool": "P1", "chainage": 1400.0, "kind": "demand"}
        canal = stepped_canal(3, 1500.0, gate={"moves_per_hour": 3}, offtakes=[take])
        return scenario_of(tmp_path, canal, keys, name=name)

    files = {name: tmp_path / f"{name}.nc" for name in ("whole", "first", "second")}
    simulate(half(0, 12, "whole"), files["whole"]).close()
    simulate(half(0, 6, "first"), files["first"]).close()
    simulate(half(6, 12, "second", start={"file": "first.nc"}), files["second"]).close()
    with open_run(files["whole"]) as whole, open_run(files["second"]) as second:
        late = whole.isel(order=(whole.order_time >= second.time[0]).values)
        assert late.sizes["order"] > 10
        assert (late.order_status == 2).any()  # some are refused for moves an hour
        for name in ("order_time", "order_opening_after", "order_status", "order_reason"):
            assert (late[name].values == second[name].values).all(), name
        assert (whole.end_opening.values == second.end_opening.values).all()
        assert (whole.end_level.values == second.end_level.values).all()
        assert (whole.end_rule_value.values == second.end_rule_value.values).all()


def test_ledger_of_a_day_that_goes_on_from_an_end_state(tmp_path):
    simulate(scenario_of(tmp_path, canal(), part(0, 6, False), name="first"), tmp_path / "first.nc").close()
    run = simulate(scenario_of(tmp_path, canal(), part(6, 12, False, start={"file": "first.nc"}), name="second"))
    assert run.canal_inflow_volume[0] == run.balance_residual[0] == 0.0
    assert np.abs(run.balance_residual).max() <= 1e-9 * run.canal_inflow_volume[-1]


SHORT_OF_NOTHING = {
    "escapes": [
        {"name": "E0", "pool": "P0", "chainage": 1400.0, "crest_level": 3.35, "length": 10.0},
        {"name": "E1", "pool": "P1", "chainage": 1400.0, "crest_level": 2.9, "length": 6.0, "outside_level": 2.92},
    ],
    "losses": {"seepage": "300 mm/day", "evaporation": "8 mm/day"},
    "roughness_calendar": [{"from": "05-01", "factor": 1.3}, {"from": "05-05", "factor": 1.1}],
}
"""Escapes, losses and a calendar that changes at midnight of the first day."""


def night(begin: int, end: int, **tables) -> Table:
    """Part of the night that begins at 18:00; hours from there."""
    period = {"start": f"2031-05-{4 + (18 + begin) // 24:02d}T{(18 + begin) % 24:02d}:00:00Z"}
    orders = [order("19:30", "G1", by=-0.1)] if begin < 1 else []
    rain = [[f"+{hour - begin} h", value] for hour, value in ((begin, "10 mm/h"), (10, 0.0)) if begin <= hour < end]
    weather = {"losses": {"rain": {"shape": "steps", "values": rain}}}
    return day(9.0, length=f"{end - begin} h", period=period, orders=orders, **weather, **tables)


@pytest.mark.parametrize("hour", [4, 6], ids=["before midnight", "at midnight, when the roughness changes"])
def test_split_run_with_escapes_losses_and_roughness_equals_the_unbroken_one(tmp_path, hour):
    full = {**canal(), **SHORT_OF_NOTHING}
    whole = simulate(scenario_of(tmp_path, full, night(0, 12), name="whole"))
    simulate(scenario_of(tmp_path, full, night(0, hour), name="first"), tmp_path / "first.nc").close()
    second = simulate(scenario_of(tmp_path, full, night(hour, 12, start={"file": "first.nc"}), name="second"))
    same_times = whole.sel(time=second.time)
    assert whole.escape_discharge[-1].min() > 0.0
    for name in ("pool_tail_level", "escape_discharge", "pool_losses", "pool_roughness_factor"):
        assert np.abs(same_times[name] - second[name]).max() <= AGREES, name
    assert np.abs(second.balance_residual).max() <= 1e-9 * second.canal_inflow_volume[-1]

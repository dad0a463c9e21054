"""The example canal and its days load, and the canal is what its text says."""

from pathlib import Path

import pytest

from toeline.scenario import load_canal, load_scenario, plan_names

QUILLMERE = Path(__file__).parents[2] / "scenarios" / "quillmere"
DAYS = [
    "steady", "morning_increase", "evening_cut", "filling_from_dry", "rotation", "storm", "pump_trip", "isolation",
    "dewatering", "stuck_gate", "weed_season", "weed_cut", "four_rules",
]  # fmt: skip


def test_the_canal_has_five_pools_and_six_gates():
    canal = load_canal(QUILLMERE / "canal.toml").canal

    assert (len(canal.pools), len(canal.gates), len(canal.offtakes)) == (5, 6, 6)
    assert sum(pool.length for pool in canal.pools) == pytest.approx(17_800.0)
    assert {offtake.kind for offtake in canal.offtakes} == {"demand", "orifice", "weir"}
    assert {gate.kind for gate in canal.gates} == {"vertical", "radial"}


def test_every_pool_begins_with_an_apron_and_a_protected_transition():
    canal = load_canal(QUILLMERE / "canal.toml").canal
    for stretches in [*(pool.stretches for pool in canal.pools), canal.tail.stretches]:
        apron, riprap, lining = (canal.surfaces[stretch.surface] for stretch in stretches)
        assert (apron.apron, riprap.protected, riprap.apron, lining.protected) == (True, True, False, False)
        assert stretches[1].transition


@pytest.mark.parametrize("day", DAYS)
def test_every_day_loads_with_each_of_its_plans(day):
    path = QUILLMERE / f"{day}.toml"

    for plan in plan_names(path) or [None]:
        assert load_scenario(path, plan=plan).plan == plan


def test_every_day_in_the_folder_is_tested():
    assert {path.stem for path in QUILLMERE.glob("*.toml")} == {"canal", *DAYS}


def test_the_two_plans_of_the_morning_differ_at_the_lower_check_alone():
    early, later = (
        load_scenario(QUILLMERE / "morning_increase.toml", plan=name).orders for name in ("early", "with_the_water")
    )
    different = {(o.at, o.gate, o.kind, o.value) for o in early} ^ {(o.at, o.gate, o.kind, o.value) for o in later}

    assert {gate for _, gate, _, _ in different} == {"Lower check"}


@pytest.mark.parametrize("day", DAYS)
def test_every_day_stands_on_the_page_of_example_days(day):
    assert f"`{day}`" in (QUILLMERE.parents[1] / "docs" / "example_days.md").read_text(encoding="utf-8")

"""A day run again in other ways: what is compared, and what it finds on a small canal."""

import numpy as np
import pytest
from tests.canals import day, order, scenario_of, stepped_canal

from toeline import simulate
from toeline.errors import RunError
from toeline.studies import verify as study
from toeline.studies.members import sampled, with_changes
from toeline.studies.verify import verify

ORDERS = [order("00:20", "G0", by=0.08), order("01:00", "G1", by=0.05)]


def small_day(folder, *overrides, **tables):
    """Two pools of 1.5 km with two moves of gates in three hours."""
    made = day(8.0, length="3 h", **{"orders": ORDERS, **tables})
    return scenario_of(folder, stepped_canal(2, 1500.0), made, *overrides)


@pytest.fixture(scope="module")
def found(tmp_path_factory):
    return verify(small_day(tmp_path_factory.mktemp("verify")))


def member(found, name):
    return next(member for member in found.members if member.name == name)


def largest_level(found, name):
    return max(np.nan_to_num(m.largest.value) for m in member(found, name).movements if m.quantity == "level")


def test_changes_come_on_top_of_those_of_the_user(tmp_path):
    scenario = small_day(tmp_path, "period.spacing=50.0")
    changed = with_changes(scenario, scenario.plan, "period.local_inertia=true")
    assert (changed.day.period.spacing, changed.day.period.local_inertia) == (50.0, True)
    assert (changed.plan, changed.orders) == (scenario.plan, scenario.orders)
    assert changed.input_hash != scenario.input_hash


@pytest.mark.parametrize(
    ("length", "every", "expected"),
    [
        (86_400_000, 300_000, "60 s"),
        (86_400_000, 30_000, "30 s"),
        (60_000, 60_000, "1 s"),
        (864_000_000, 3_600_000, "600 s"),
    ],
)
def test_a_study_samples_1440_times_or_as_often_as_the_day(length, every, expected):
    assert sampled(length, every)[0] == f'output.every="{expected}"'


def test_every_way_is_run_and_says_what_it_changes(found):
    assert [m.name for m in found.members] == ["local inertia", "half the step", "half the spacing"]
    changes = {s.name: (s.before, s.after) for m in found.members for s in m.settings}
    assert changes == {
        "local_inertia": (0.0, 1.0),
        "level_tolerance": (0.003, 0.000375),
        "longest_step": (900.0, 450.0),
        "spacing": (100.0, 50.0),
    }


def test_inertia_moves_levels_most_while_waves_travel(found):
    inertia = member(found, "local inertia")
    settled, settling = (inertia.movement("level", settling=settling) for settling in (False, True))
    assert settling.largest.value > settled.largest.value > 0.0
    assert settling.largest.value > 0.002


def test_both_sides_of_a_moved_gate_with_a_pool_have_a_bound(found):
    assert [(check.gate, check.side) for check in found.bound_checks] == [
        ("G0", "above"),
        ("G0", "below"),
        ("G1", "above"),
    ]


def test_no_water_is_lost_and_the_ramp_passes(found):
    assert set(found.closures) == {"as it is", "local inertia", "half the step", "half the spacing"}
    assert found.is_within_tolerance
    assert found.ramp.is_passed
    assert not found.has_failed


def test_nothing_moves_on_a_quiet_day(tmp_path):
    found = verify(small_day(tmp_path, orders=None))
    assert largest_level(found, "local inertia") < 1e-6
    assert largest_level(found, "half the step") < 1e-6
    assert found.bound_checks == ()


def test_halving_the_step_again_moves_less(found, tmp_path):
    """Second order: a quarter for every halving, were the steps not also bound by the stops of the day."""
    finer = verify(small_day(tmp_path, 'period.level_tolerance="0.000375 m"', 'period.longest_step="450 s"'))
    assert 0.0 < largest_level(finer, "half the step") < 0.6 * largest_level(found, "half the step")


def test_a_day_with_inertia_is_held_against_one_without(tmp_path, found):
    other = verify(small_day(tmp_path, "period.local_inertia=true"))
    assert other.members[0].name == "without local inertia"
    assert largest_level(other, "without local inertia") == largest_level(found, "local inertia")
    assert [check.excess for check in other.bound_checks] == [check.excess for check in found.bound_checks]


def test_progress_rises_to_the_end(tmp_path):
    fractions = []
    verify(small_day(tmp_path, 'period.length="10 min"', orders=None), fractions.append)
    assert fractions == sorted(fractions)
    assert fractions[0] == 0.0
    assert 0.7 < fractions[-1] <= 1.0


def test_a_day_that_goes_on_from_a_run_keeps_its_spacing(tmp_path):
    first = small_day(tmp_path, 'period.length="1 h"', orders=None)
    simulate(first, tmp_path / "night.nc")
    later = {"start": "2031-05-04T01:00:00Z", "length": "1 h"}
    scenario = scenario_of(
        tmp_path, stepped_canal(2, 1500.0), day(8.0, period=later, start={"file": "night.nc"}), name="morning"
    )
    found = verify(scenario)
    assert "points lie at that run's own spacing" in member(found, "half the spacing").reason
    assert set(found.closures) == {"as it is", "local inertia", "half the step"}
    assert found.ramp.is_passed
    assert not found.has_failed


def test_a_way_that_cannot_be_solved_is_told_and_fails(tmp_path, monkeypatch):
    def simulate_but_inertia(scenario, **options):
        if scenario.day.period.local_inertia:
            raise RunError("no step could be solved")
        return simulate(scenario, **options)

    monkeypatch.setattr(study, "simulate", simulate_but_inertia)
    found = verify(small_day(tmp_path))
    assert member(found, "local inertia").reason == "no step could be solved"
    assert found.has_failed
    assert found.bound_checks == ()
    assert largest_level(found, "half the step") > 0.0


def test_a_ramp_that_cannot_be_tried_is_told_and_does_not_fail(tmp_path):
    canal = stepped_canal(1, 800.0)
    del canal["pools"][0]["target_level"]
    made = day(3.0, length="1 h", start={"state": "dry", "openings": {"G0": 0.5}})
    found = verify(scenario_of(tmp_path, canal, made))
    assert found.ramp is None
    assert "target_level" in found.ramp_reason
    assert found.is_within_tolerance
    assert not found.has_failed

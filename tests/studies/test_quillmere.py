"""The morning of the example canal under verify."""

from pathlib import Path

import numpy as np
import pytest

from toeline import load_scenario
from toeline.studies.verify import verify

DAY = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"
GAUGE_READING = 0.01


@pytest.fixture(scope="module")
def found():
    return verify(load_scenario(DAY, plan="early"))


def largest_level(member) -> float:
    return max(np.nan_to_num(m.largest.value) for m in member.movements if m.quantity == "level")


def test_step_and_spacing_move_no_level_by_what_a_gauge_shows(found):
    _, step, spacing = found.members
    assert largest_level(step) < 0.2 * GAUGE_READING
    assert largest_level(spacing) < 0.2 * GAUGE_READING


def test_surge_bounds_cover_inertia_to_what_a_gauge_shows(found):
    assert len(found.bound_checks) == 10
    assert max(check.excess.value for check in found.bound_checks) < GAUGE_READING


def test_inertia_shows_on_gauges_while_waves_travel_and_changes_no_incident(found):
    inertia = found.members[0]
    assert GAUGE_READING < inertia.movement("level", settling=True).largest.value < 0.1
    assert inertia.movement("level", settling=False).typical < GAUGE_READING
    assert {(i.what, i.where) for i in inertia.incidents} == {(i.what, i.where) for i in found.incidents}


def test_it_keeps_its_water_and_passes_the_ramp(found):
    assert found.is_within_tolerance
    assert found.ramp.is_passed

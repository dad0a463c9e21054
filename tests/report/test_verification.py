"""The page of `toeline verify` and its numbers, from runs made by hand."""

import json
from dataclasses import replace

import numpy as np
import pytest

from toeline.constants import CAUTION
from toeline.findings.closure import closure
from toeline.findings.incidents import incidents
from toeline.findings.movements import bound_checks, jump_changes, movements
from toeline.findings.ramp import RampPassage
from toeline.findings.verification import Member, Setting, Verification
from toeline.report.verification import verification_page
from toeline.report.verification_json import verification_json
from toeline.units import Display, UnitSystem

SETTING = {"local inertia": Setting("local_inertia", 0.0, 1.0), "half the spacing": Setting("spacing", 100.0, 50.0)}
RAMP = RampPassage((8.0, 8.8), (5.0, 5.7), 0.1, 7200.0, 7201.0, 0.0, 0.0, 8000.0, 1800.0, 9000.0)
QUIET = {"pool_losses": 0.0, "balance_residual": 0.0, "canal_storage": 5000.0, "pool_volume": 2500.0}
HALF_WAY = np.arange(49)[:, None] >= [24, 24]
"""From 08:00 on, in both pools or at both gates."""


@pytest.fixture
def run_of(invented_run):
    def build(**given):
        return invented_run(
            **{name: np.full((49, 2)[: 1 + name.startswith("pool")], value) for name, value in QUIET.items()} | given
        )

    return build


def found_in(run, gauge_reading=0.01, ramp=RAMP, ramp_reason="", **others) -> Verification:
    """What a study would find of these runs, the others by name with _ for a blank."""
    members = []
    for name, other in ((name.replace("_", " "), other) for name, other in others.items()):
        members.append(
            Member(
                name, (SETTING[name],), tuple(movements(run, other, gauge_reading)), tuple(jump_changes(run, other)),
                tuple(incidents(other)), closure(other),
            )
        )  # fmt: skip
    checks = tuple(bound_checks(run, others["local_inertia"])) if "local_inertia" in others else ()
    return Verification(
        run, gauge_reading, tuple(members), tuple(incidents(run)), closure(run), checks, ramp, ramp_reason
    )


def page_of(found, system=UnitSystem.metric, width=80):
    return verification_page(found, Display(system), width=width)


def section(page: str, title: str) -> str:
    """The lines of one section, in one line."""
    _, _, after = page.partition(f"{title.upper()}\n")
    return " ".join(after.partition("\n\n")[0].split())


def raised(run_of, by):
    return run_of(pool_tail_level=np.where(HALF_WAY, by, 0.0) * [1.0, 0.0])


def test_it_begins_with_what_it_comes_to_and_ends_with_the_caution(run_of):
    page = page_of(found_in(run_of(), local_inertia=run_of(), half_the_spacing=run_of()))
    titles = [line for line in page.splitlines() if line.isupper()]
    assert titles == [
        "IN SHORT", "WITH LOCAL INERTIA", "WITH HALF THE SPACING", "SURGE BOUNDS AGAINST INERTIA",
        "INCIDENTS IN EACH RUN", "MASS TEST", "RAMP TEST", "WHAT THIS LEAVES OUT", "CAUTION",
    ]  # fmt: skip
    assert section(page, "Caution") == CAUTION


def test_levels_that_no_gauge_would_show_are_said_to_be_so(run_of):
    page = page_of(found_in(run_of(), half_the_spacing=raised(run_of, 0.004)))
    short = section(page, "In short")
    assert "With half the spacing, levels move by 0.4 cm at most: no more than a gauge is read to (1 cm)." in short
    assert "spacing 50 m instead of 100 m" in section(page, "With half the spacing")


def test_levels_that_a_gauge_would_show_say_for_how_long(run_of):
    page = page_of(found_in(run_of(), half_the_spacing=raised(run_of, 0.034)))
    short = section(page, "In short")
    assert "by 3.4 cm at most once settled" in short
    assert "more than a gauge is read to (1 cm) for 2 h 02 min in all at the worst place" in short
    assert "levels, settled 3.4 cm 3.4 cm Upper pool, lower end, 08:00" in section(page, "With half the spacing")


def test_a_difference_too_small_to_be_written_is_not_called_none(run_of):
    page = page_of(found_in(run_of(), half_the_spacing=raised(run_of, 0.0002)))
    assert "levels move by <0.1 cm at most" in section(page, "In short")


def test_feet_for_those_who_read_feet(run_of):
    found = found_in(run_of(), gauge_reading=0.003048, half_the_spacing=raised(run_of, 0.03048))
    page = page_of(found, UnitSystem.us_customary)
    assert "by 0.10 ft at most once settled" in section(page, "In short")
    assert "a gauge is read to (0.01 ft)" in section(page, "In short")
    assert "spacing 164 ft instead of 328.1 ft" in section(page, "With half the spacing")


def test_only_what_both_runs_have_is_compared(run_of):
    lines = section(page_of(found_in(run_of(), half_the_spacing=run_of())), "With half the spacing")
    assert "jump ends, settled" in lines
    assert "settling" not in lines.replace("No pool was settling at any time.", "")


def test_discharges_are_told_with_their_share(run_of):
    run, other = run_of(gate_discharge=np.full((49, 2), 4.0)), run_of(gate_discharge=np.where(HALF_WAY, 4.1, 4.0))
    page = page_of(found_in(run, local_inertia=other))
    assert "0.100 m3/s Middle check, 08:00 (2.5 %)" in section(page, "With local inertia")


def test_jumps_in_another_state_are_told_by_gate(run_of):
    page = page_of(found_in(run_of(), local_inertia=run_of(jump_state=np.where(HALF_WAY & [True, False], 2, 1))))
    assert (
        "Middle check: the jump is in another state for 2 h 02 min once settled, mostly on apron instead of drowned"
        in (section(page, "With local inertia"))
    )
    assert "all gates together: 2 h 02 min with local inertia" in section(page, "In short")


def test_incidents_that_appear_or_vanish_are_told(run_of):
    swept = run_of(jump_state=np.where(HALF_WAY & [True, False], 4, 1), protection_margin=np.where(HALF_WAY, -0.1, 0.1))
    appears, gone = found_in(run_of(), local_inertia=swept), found_in(swept, local_inertia=run_of())
    what = "Middle check: jump beyond protection"
    assert f"Incidents: {what} appears with local inertia." in section(page_of(appears), "In short")
    assert f"Incidents: {what} is gone with local inertia." in section(page_of(gone), "In short")
    assert f"{what} - 2 h 02 min" in section(page_of(appears), "Incidents in each run")


def test_no_incident_is_not_called_safe(run_of):
    page = page_of(found_in(run_of(), local_inertia=run_of()))
    assert "Incidents: none in any run." in section(page, "In short")
    assert "makes no place safe" in section(page, "Incidents in each run")
    assert page.count("safe") == page.count("no place safe") + page.count("safe to enter")


@pytest.mark.parametrize(
    ("rise", "short", "row"),
    [
        (0.04, "The surge bounds cover all that inertia does", "above Middle check 5.0 cm 4.0 cm never"),
        (0.07, "at 1 of 1 place beside gates that move, by 2.0 cm at most", "2.0 cm at 08:00; 2 h 02 min in all"),
    ],
)  # fmt: skip
def test_surge_bounds_are_held_against_inertia(run_of, rise, short, row):
    run = run_of(surge_height_bound_upstream=np.where(HALF_WAY & [True, False], 0.05, 0.0))
    page = page_of(found_in(run, local_inertia=run_of(gate_headwater_level=np.where(HALF_WAY, rise, 0.0))))
    assert short in section(page, "In short")
    assert row in section(page, "Surge bounds against inertia")


def test_gates_that_answer_other_levels_are_told_where_surges_are(run_of):
    other = run_of(gate_opening=np.where(HALF_WAY & [True, False], 0.035, 0.0))
    page = page_of(found_in(run_of(), local_inertia=other))
    assert "Gates stand up to 3.5 cm apart with and without inertia" in section(page, "In short")
    assert "openings, settled 3.5 cm 3.5 cm Middle check, 08:00" in section(page, "With local inertia")


def test_gates_that_stand_alike_are_not_told(run_of):
    page = page_of(found_in(run_of(), local_inertia=run_of()))
    assert "Gates stand" not in page
    assert "openings," not in section(page, "With local inertia")


def test_water_that_is_lost_stands_out(run_of):
    leaking = run_of(pool_volume=np.where(HALF_WAY, 2400.0, 2500.0))
    page = page_of(found_in(run_of(), local_inertia=leaking))
    assert "The mass test is NOT passed; the ramp test is passed." in section(page, "In short")
    mass = section(page, "Mass test")
    assert "as it is 0 % 0 %, Upper pool within" in mass
    assert "local inertia 0 % 4 %, Upper pool NOT within" in mass


def test_a_ramp_is_told_with_tolerances_and_times(run_of):
    test = section(page_of(found_in(run_of())), "Ramp test")
    assert "from 8.000 m3/s to 8.800 m3/s" in test
    assert "volume taken up, not explained 0.014 % 0 to 0.5 % within" in test
    assert "of the rise leaves in the end 100 % 99 % to 101 % within" in test
    assert "The pools take up 7,200 m3, as much as the rise brings in 2 h 30 min." in test
    assert "a small fast wave needs 30 min" in test


def test_a_ramp_that_does_not_pass_stands_out(run_of):
    page = page_of(found_in(run_of(), ramp=replace(RAMP, outflow=(5.0, 5.3), fall_back=0.1)))
    assert "the ramp test is NOT passed" in section(page, "In short")
    assert section(page, "Ramp test").count("NOT within") == 2


def test_what_could_not_be_done_says_why(run_of):
    found = found_in(run_of(), ramp=None, ramp_reason="no water flows into the canal")
    found = replace(found, members=(Member("half the spacing", (SETTING["half the spacing"],), reason="it goes on"),))
    page = page_of(found)
    assert "With half the spacing: not run: it goes on." in section(page, "In short")
    assert "Not run: it goes on." in section(page, "With half the spacing")
    assert "Not done: no water flows into the canal." in section(page, "Ramp test")
    assert "the ramp test could not be done" in section(page, "In short")


@pytest.mark.parametrize("width", [40, 60, 80])
def test_the_page_keeps_to_its_width(run_of, width):
    page = page_of(found_in(run_of(), local_inertia=raised(run_of, 0.02), half_the_spacing=run_of()), width=width)
    assert max(map(len, page.splitlines())) <= width


def test_numbers_for_other_programs(run_of):
    found = found_in(run_of(), local_inertia=raised(run_of, 0.034))
    (entry,) = json.loads(verification_json([found]))
    assert (entry["canal"], entry["plan"], entry["passed"]) == ("Alder branch", "raise", True)
    level = entry["members"][0]["movements"][0]
    assert (level["quantity"], level["largest"]["time"]) == ("level", "2031-05-04T06:00:00.000Z")
    assert level["largest"]["value"] == pytest.approx(0.034)
    assert entry["members"][0]["movements"][1]["typical"] is None
    assert entry["ramp"]["inflow"] == [8.0, 8.8]
    assert "run" not in entry

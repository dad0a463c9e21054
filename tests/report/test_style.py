"""Colours, dashes and hatches: from the published palette, and told apart without colour."""

from itertools import combinations

import pytest

from toeline.report import style
from toeline.report.style import Area, Line, Mark
from toeline.units import Display, UnitSystem

THINGS = [thing for thing in vars(style).values() if isinstance(thing, Line | Area | Mark)]
THINGS += [*style.JUMP_STATES.values(), *style.FLOW_STATES.values(), *style.ORDER_STATUSES.values()]
TOGETHER = [
    (style.TAILWATER, style.MODULAR_LIMIT, style.DROWNING_LIMIT, style.APRON_LIMIT, style.PROTECTION_LIMIT),
    (style.WATER, style.TARGET, style.LINING, style.BANK, style.LIMIT),
    (style.DEMAND, style.DELIVERY),
    style.FALL_USES,
    tuple(style.plan_line(place, "") for place in range(6)),
]


def test_colours_are_those_of_okabe_and_ito():
    # Okabe & Ito, Color Universal Design, 2008: the eight colours as RGB from 0 to 255 (from memory).
    published = {
        (0, 0, 0), (230, 159, 0), (86, 180, 233), (0, 158, 115), (240, 228, 66), (0, 114, 178), (213, 94, 0),
        (204, 121, 167),
    }  # fmt: skip
    assert {tuple(bytes.fromhex(colour[1:])) for colour in style.PALETTE} == published


def lightness(colour: str) -> float:
    """Relative luminance of an sRGB colour, as WCAG 2 defines it."""
    parts = [part / 255 for part in bytes.fromhex(colour[1:])]
    linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return sum(weight * part for weight, part in zip((0.2126, 0.7152, 0.0722), linear, strict=True))


@pytest.mark.parametrize("states", [style.JUMP_STATES, style.FLOW_STATES], ids=["jump", "flow"])
def test_no_two_states_look_alike_in_grey(states):
    for one, other in combinations(states.values(), 2):
        assert one.hatch != other.hatch or abs(lightness(one.colour) - lightness(other.colour)) > 0.1


@pytest.mark.parametrize("lines", TOGETHER)
def test_no_two_lines_of_one_panel_have_the_same_dashes(lines):
    assert len({line.dash for line in lines}) == len(lines)


def test_both_hazards_differ_in_hatch_and_both_have_one():
    assert len({style.HAZARD_FLOOR.hatch, style.HAZARD_PEOPLE.hatch, ""}) == 3


def test_nothing_is_called_safe_or_good():
    assert [t.word for t in THINGS if {"safe", "good", "fine", "ok"} & set(t.word.lower().split())] == []


def test_faint_text_can_be_read():
    # WCAG 2.1, success criterion 1.4.3: a contrast of at least 4.5 to 1 (from memory).
    assert 1.05 / (lightness(style.FAINT_INK) + 0.05) > 4.5


def test_plans_come_round_again_after_six():
    assert style.plan_line(7, "x") == style.plan_line(1, "x")


@pytest.mark.parametrize(
    ("system", "expected"),
    [(UnitSystem.metric, "Discharge, m³/s"), (UnitSystem.us_customary, "Discharge, ft³/s")],
)
def test_axes_say_their_unit_as_print_writes_it(system, expected):
    assert style.axis_text("discharge", "discharge", Display(system)) == expected

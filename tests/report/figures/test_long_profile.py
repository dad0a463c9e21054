"""The long profile and the gates from the side."""

import numpy as np
import pytest
from tests.report.figures.drawn import areas, texts

from toeline.report.figures.gate_side_view import surface_below
from toeline.report.figures.long_profile import nearest_moment, pictures, worst_time
from toeline.report.style import DAY_RANGE, JUMP_STATES, LEAF, TARGET, WATER
from toeline.units import Display, UnitSystem

PLACE = {"node_pool": np.array([0, 0, 1, 1]), "chainage": np.array([0.0, 900.0, 900.0, 2000.0])}
BEDS = {"bed_level": np.array([10.0, 9.8, 9.0, 8.8]), "lining_level": np.full(4, 13.0), "bank_level": np.full(4, 13.5)}


@pytest.fixture
def run(invented_run):
    """Levels rise by 0.1 m from profile to profile; the jump is worst at 08:10 below the Middle check."""
    margins = np.full((49, 2), 0.3)
    margins[26, 0] = -0.2
    water = np.array([12.0, 12.0, 11.0, 11.0]) + 0.1 * np.arange(5)[:, None]
    return invented_run(
        water_level=water, protection_margin=margins, jump_state=np.where(margins < 0.0, 4, 1),
        gate_chainage=np.array([900.0, 2000.0]), pool_target_level=np.array([12.2, np.nan]),
        gate_sill_level=np.array([9.8, 8.8]), gate_floor_level=np.array([9.0, 8.0]), gate_opening=np.full((49, 2), 0.5),
        gate_max_opening=np.array([1.2, 1.2]), gate_headwater_level=np.full((49, 2), 12.0),
        gate_tailwater_level=np.full((49, 2), 11.0), **PLACE, **BEDS,
    )  # fmt: skip


def test_by_itself_it_is_the_profile_nearest_to_the_least_protection_margin(run, metric):
    moment = nearest_moment(run, worst_time(run))
    assert (moment.profile, moment.step) == (2, 26)
    (picture,) = pictures(run, metric)
    assert {"Long profile at 08:00", "The gates from the side at 08:10, heights stretched"} <= set(
        texts(picture.figure)
    )


def test_another_time_may_be_asked_for(run, metric):
    (picture,) = pictures(run, metric, at=run["time"].values[47])
    assert "Long profile at 10:00" in texts(picture.figure)


def test_the_water_line_is_that_of_the_profile_pool_by_pool(run, metric):
    (picture,) = pictures(run, metric)
    lines = [line for line in picture.figure.axes[0].lines if line.get_label() == WATER.word]
    assert [line.get_ydata().tolist() for line in lines] == [pytest.approx([12.2, 12.2]), pytest.approx([11.2, 11.2])]
    assert [line.get_xdata().tolist() for line in lines] == [[0.0, 0.9], [0.9, 2.0]]


def test_the_range_reaches_from_the_lowest_to_the_highest_level(run, metric):
    (picture,) = pictures(run, metric)
    first, _ = areas(picture.figure.axes[0], DAY_RANGE.word)
    assert first[2:] == (pytest.approx(12.0), pytest.approx(12.4))


def test_leaf_and_sill_stand_at_their_heights(run, metric):
    (picture,) = pictures(run, metric)
    leaf, _ = (line for line in picture.figure.axes[0].lines if line.get_label() == LEAF.word)
    assert leaf.get_ydata()[0] == pytest.approx(10.3)
    sill, _ = (line for line in picture.figure.axes[0].lines if line.get_label() == "sill")
    assert list(sill.get_ydata()) == pytest.approx([9.0, 9.8])


def test_a_pool_without_a_target_has_none(run, metric):
    (picture,) = pictures(run, metric)
    (target,) = [line for line in picture.figure.axes[0].lines if line.get_label() == TARGET.word]
    assert target.get_ydata()[0] == pytest.approx(12.2)


def test_the_jump_below_every_gate_is_told_by_a_square(run, metric):
    (picture,) = pictures(run, metric)
    labels = [mark.get_label() for mark in picture.figure.axes[0].collections]
    assert f"jump: {JUMP_STATES['beyond_protection'].word}" in labels
    assert f"jump: {JUMP_STATES['drowned'].word}" in labels


GATE = {
    "gate_floor_level": 9.0, "gate_sill_level": 9.8, "gate_opening": 0.5, "gate_tailwater_level": 11.0,
    "jet_depth": 0.3, "roller_depth": 1.2, "jump_toe_distance": 8.0, "jump_end_distance": 14.0,
}  # fmt: skip


@pytest.mark.parametrize(
    ("state", "changed", "distances", "levels"),
    [
        ("on_apron", {}, [0.0, 0.5, 8.0, 14.0, 40.0], [10.3, 9.3, 9.3, 11.0, 11.0]),
        ("drowned", {"jump_toe_distance": 0.0}, [0.0, 14.0, 40.0], [10.2, 11.0, 11.0]),
        ("swept_out_of_pool", {"jump_toe_distance": np.nan}, [0.0, 0.5, 40.0], [10.3, 9.3, 9.3]),
        ("none", {"jump_toe_distance": np.nan, "jet_depth": np.nan}, [0.0, 40.0], [11.0, 11.0]),
        ("on_apron", {"jump_end_distance": np.nan}, [0.0, 0.5, 8.0, 8.0, 40.0], [10.3, 9.3, 9.3, 11.0, 11.0]),
    ],
)
def test_the_surface_below_a_gate_goes_through_the_known_points(state, changed, distances, levels):
    x, surface = surface_below(GATE | changed, 40.0, state)
    assert x == pytest.approx(distances)
    assert surface == pytest.approx(levels)


def test_tables_hold_nodes_and_gates(run, metric):
    (picture,) = pictures(run, metric)
    nodes = picture.tables[""].csv_text().splitlines()
    assert nodes[0] == (
        "pool,chainage [m],bed [m],top of the lining [m],top of the bank [m],water level at 08:00 [m],"
        "lowest water level [m],highest water level [m]"
    )
    assert nodes[3] == "Lower pool,900.0000,9.0000,13.0000,13.5000,11.2000,11.0000,11.4000"
    assert picture.tables["gates"].csv_text().splitlines()[1].endswith(",beyond protection")


def test_chainage_is_in_thousands_of_feet_where_feet_are_asked_for(run):
    (picture,) = pictures(run, Display(UnitSystem.us_customary))
    assert "Chainage from the head, 1000 ft" in texts(picture.figure)
    assert picture.figure.axes[0].lines[0].get_xdata()[-1] == pytest.approx(900.0 / 304.8)


def test_a_run_without_a_profile_says_so(run, metric):
    (picture,) = pictures(run.isel(profile_time=slice(0, 0)), metric)
    assert "The run holds no long profile." in texts(picture.figure)

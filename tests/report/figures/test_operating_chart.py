"""The operating chart of a gate."""

import numpy as np
import xarray as xr
from tests.report.figures.drawn import line, panel, texts

from toeline.report.figures.operating_chart import pictures, region_edges
from toeline.report.style import DROWNING_LIMIT, JUMP_STATES, PROTECTION_LIMIT
from toeline.units import Display, UnitSystem

OPENINGS = np.array([0.2, 0.4, 0.6])


def chart(**changed: list[float]) -> xr.Dataset:
    """One headwater of 12 m over a floor at 9 m; limits rise with the opening."""
    limits = {
        "modular_limit_level": [10.5, 10.8, 11.0], "drowning_level": [10.4, 10.7, 10.9],
        "apron_limit_level": [10.0, 10.4, 10.7], "protection_limit_level": [np.nan, 10.0, 10.4],
    } | changed  # fmt: skip
    discharge = 10.0 * OPENINGS[None, :, None] * np.ones((1, 3, 4))
    return xr.Dataset(
        {
            **{name: (("headwater", "opening"), [levels]) for name, levels in limits.items()},
            "discharge": (("headwater", "opening", "tailwater"), discharge),
            "flow_state": (("headwater", "opening", "tailwater"), np.ones((1, 3, 4)), {"flag_meanings": "closed free"}),
        },
        {"headwater": [12.0], "opening": OPENINGS, "tailwater": np.linspace(9.0, 12.0, 4)},
        {"canal": "Alder branch", "gate": "Middle check", "floor_level": 9.0, "source": "Toeline 0.1.0"},
    )  # fmt: skip


def test_regions_follow_one_another_from_headwater_to_floor():
    edges = region_edges(chart().isel(headwater=0))
    assert {region: (low[1], high[1]) for region, (low, high) in edges.items()} == {
        "drowned": (10.7, 12.0), "on_apron": (10.4, 10.7), "on_protection": (10.0, 10.4),
        "beyond_protection": (9.0, 10.0),
    }  # fmt: skip


def test_a_limit_that_no_tailwater_reaches_leaves_no_region_below_it():
    low, high = region_edges(chart().isel(headwater=0))["beyond_protection"]
    assert (low[0], high[0]) == (9.0, 9.0)


def test_without_a_free_jet_there_is_no_region():
    edges = region_edges(chart(drowning_level=[np.nan] * 3).isel(headwater=0))
    assert all(np.isnan(low).all() for low, _ in edges.values())


def test_limits_that_cross_leave_no_region_turned_over():
    edges = region_edges(chart(apron_limit_level=[11.5, 11.5, 11.5]).isel(headwater=0))
    assert all(np.all(low <= high) for low, high in edges.values())


def test_limits_are_lines_of_opening_over_tailwater():
    (picture,) = pictures(chart(), Display(UnitSystem.metric))
    axes = panel(picture.figure, "headwater 12.00 m")
    tailwater, opening = line(axes, DROWNING_LIMIT.word)
    assert tailwater.tolist() == [10.4, 10.7, 10.9]
    assert opening.tolist() == OPENINGS.tolist()
    assert np.isnan(line(axes, PROTECTION_LIMIT.word)[0][0])


def test_every_region_stands_in_the_legend_with_the_caution():
    (picture,) = pictures(chart(), Display(UnitSystem.metric))
    written = texts(picture.figure)
    assert {JUMP_STATES[state].word for state in ("drowned", "on_apron", "on_protection", "beyond_protection")} <= set(
        written
    )
    assert "Alder branch: Middle check" in written
    assert any("verify gate scale" in text for text in written)


def test_tables_hold_limits_and_discharges():
    (picture,) = pictures(chart(), Display(UnitSystem.metric))
    assert picture.tables[""].csv_text().splitlines()[1] == "12.0000,0.2000,10.5000,10.4000,10.0000,"
    discharges = picture.tables["discharge"].csv_text().splitlines()
    assert discharges[1] == "12.0000,0.2000,9.0000,2.0000,free"
    assert len(discharges) == 1 + 12


def test_a_headwater_below_the_sill_draws_an_empty_chart():
    dry = chart().assign(discharge=np.nan * chart()["discharge"])
    (picture,) = pictures(dry, Display(UnitSystem.metric))
    assert "no flow at this headwater" in texts(picture.figure)

"""Deliveries and the ledger."""

import numpy as np
import pytest
from tests.report.figures.drawn import areas, line, minutes, panel, texts

from toeline.report.figures import deliveries, ledger
from toeline.report.style import DELIVERY, DEMAND, SHORTFALL, SPILL
from toeline.units import Display, UnitSystem

HOURS = np.arange(49)[:, None] * 5 / 60


@pytest.fixture
def short_of_water(invented_run):
    """0.5 m3/s asked for; from 07:00 until 08:00 only 0.2 given."""
    given = np.where((HOURS >= 1.0) & (HOURS <= 2.0), 0.2, 0.5)
    return invented_run(demand=np.full((49, 1), 0.5), delivery=given, delivery_volume=HOURS * 1000.0)


def test_asked_and_given_are_lines_and_the_lack_is_filled(short_of_water, metric):
    (picture,) = deliveries.pictures(short_of_water, metric)
    axes = panel(picture.figure, "East lateral, Lower pool")
    assert line(axes, DEMAND.word)[1] == pytest.approx(np.full(49, 0.5))
    assert line(axes, DELIVERY.word)[1].min() == pytest.approx(0.2)
    (lack,) = areas(axes, SHORTFALL.word)
    assert (minutes(axes, lack[0]), minutes(axes, lack[1]), lack[2], lack[3]) == (60.0, 120.0, 0.2, 0.5)


def test_volume_and_worst_lack_are_told(short_of_water, metric):
    (picture,) = deliveries.pictures(short_of_water, metric)
    assert "4,000 m3 given; at worst 0.300 m3/s short" in texts(picture.figure)


def test_an_offtake_that_is_asked_for_nothing_says_so(invented_run, metric):
    (picture,) = deliveries.pictures(invented_run(demand=np.full((49, 1), np.nan)), metric)
    assert any("nothing is asked" in text for text in texts(picture.figure))


def test_an_escape_has_a_panel_with_what_it_spilled(invented_run, metric):
    run = invented_run(escape_discharge=0.4 * (HOURS > 3.0), escape_volume=100.0 * np.maximum(HOURS - 3.0, 0.0))
    (picture,) = deliveries.pictures(run, metric)
    axes = panel(picture.figure, "Storm escape, Upper pool")
    assert line(axes, SPILL.word)[1].max() == pytest.approx(0.4)
    assert "100 m3 spilled" in texts(picture.figure)
    assert "Storm escape: spilled over an escape [m3/s]" in picture.tables[""].csv_text()


def test_a_canal_without_offtakes_says_so(invented_run, metric):
    (picture,) = deliveries.pictures(invented_run().isel(offtake=slice(0, 0), escape=slice(0, 0)), metric)
    assert "The canal has no offtakes." in texts(picture.figure)


@pytest.fixture
def balanced(invented_run):
    """10,000 m3 come in, 3,000 are delivered, 1,000 spilled, 5,000 let out, 1,500 kept above, 500 drawn from below."""
    growth = np.linspace(0.0, 1.0, 49)
    return invented_run(
        canal_inflow_volume=10_000 * growth, canal_outflow_volume=5_000 * growth,
        delivery_volume=3_000 * growth[:, None], escape_volume=1_000 * growth[:, None],
        pool_volume=growth[:, None] * [[1_500.0, -500.0]],
    )  # fmt: skip


def test_the_ledger_steps_from_what_came_in_down_to_nothing(balanced, metric):
    (picture,) = ledger.pictures(balanced, metric)
    (axes,) = picture.figure.axes
    steps = [(bar.get_x(), bar.get_x() + bar.get_width()) for bar in axes.patches]
    assert steps == [
        (0.0, 10_000.0), (10_000.0, 7_000.0), (7_000.0, 6_000.0), (6_000.0, 1_000.0), (1_000.0, -500.0),
        (-500.0, 0.0),
    ]  # fmt: skip
    assert [label.get_text() for label in axes.get_yticklabels()] == [
        "taken in at the head", "delivered, East lateral", "spilled, Storm escape", "let out at the tail",
        "kept in Upper pool", "kept in Lower pool",
    ]  # fmt: skip


def test_every_step_tells_its_volume(balanced, metric):
    (picture,) = ledger.pictures(balanced, metric)
    assert {"+10,000 m³", "-3,000 m³", "+500 m³"} <= set(texts(picture.figure))


def test_acre_feet_where_they_are_asked_for(balanced):
    (picture,) = ledger.pictures(balanced, Display(UnitSystem.us_customary))
    assert "+8.11 acre-ft" in texts(picture.figure)  # 1 acre-foot is 1233.48 m3 (international foot, by definition)
    assert picture.tables[""].csv_text().startswith("entry,volume [acre-ft]\ntaken in at the head,8.1071\n")


def test_every_pool_has_an_account_of_its_own(balanced, metric):
    (picture,) = ledger.pictures(balanced, metric)
    rows = picture.tables["pools"].csv_text().splitlines()
    assert rows[0] == "pool,in [m3],delivered [m3],spilled [m3],lost [m3],out [m3],kept [m3],residual [m3]"
    assert rows[3].startswith("canal,10000.0000,3000.0000,1000.0000,0.0000,5000.0000,1000.0000,")


def test_the_residual_is_in_the_table(balanced, metric):
    (picture,) = ledger.pictures(balanced.assign(canal_inflow_volume=2.0 * balanced["canal_inflow_volume"]), metric)
    assert picture.tables[""].csv_text().splitlines()[-1] == "residual,10000.0000"

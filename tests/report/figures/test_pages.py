"""All figures together: what each says about its run, its pages, and odd runs."""

import numpy as np
import pytest
import xarray as xr
from tests.report.figures.drawn import texts

from toeline.report.figures.catalogue import FIGURES, run_pictures
from toeline.report.figures.picture import page_name, pages
from toeline.report.figures.sheet import CAUTION, NO_GATES

EVERY_FIGURE = pytest.mark.parametrize("name", FIGURES)


@EVERY_FIGURE
def test_a_figure_names_canal_day_plan_period_zone_version_and_the_caution(name, invented_run, metric):
    for picture in run_pictures(invented_run(), metric, [name]):
        written = texts(picture.figure)
        assert "Alder branch: A short morning; plan raise" in written
        assert "Sunday 2031-05-04, 06:00 to 10:00 (4 h), UTC+02:00" in written
        assert {"Toeline 0.1.0", CAUTION} <= set(written)


@EVERY_FIGURE
def test_a_figure_has_words_and_tables_of_equal_columns(name, invented_run, metric):
    for picture in run_pictures(invented_run(), metric, [name]):
        assert picture.words.endswith(".")
        for table in picture.tables.values():
            assert len({len(column.cells) for column in table.columns}) == 1
            assert len({column.header for column in table.columns}) == len(table.columns)


@EVERY_FIGURE
def test_a_run_that_stopped_says_so_on_every_figure(name, invented_run, metric):
    for picture in run_pictures(invented_run("stopped at 08:00: interrupted"), metric, [name]):
        assert any("stopped at 08:00: interrupted" in text for text in texts(picture.figure))


def without_values(run: xr.Dataset) -> xr.Dataset:
    emptied = {
        name: variable.where(False)
        for name, variable in run.data_vars.items()
        if variable.dtype.kind == "f" and "time" in variable.dims
    }
    return run.assign(emptied)


ODD_RUNS = {
    "one step": lambda run: run.isel(time=slice(0, 1), profile_time=slice(0, 1)),
    "no profile": lambda run: run.isel(profile_time=slice(0, 0)),
    "no values": without_values,
    "no offtakes": lambda run: run.isel(offtake=slice(0, 0)),
    "no gates": lambda run: run.isel(gate=slice(0, 0)),
    "dry": lambda run: run.assign(water_level=0.0 * run["water_level"] + run["bed_level"]),
    "closed": lambda run: run.assign(gate_flow_state=0 * run["gate_flow_state"], jump_state=0 * run["jump_state"]),
}


def with_flags(changed: xr.Dataset, run: xr.Dataset) -> xr.Dataset:
    """Arithmetic drops the meanings of flags; give them back."""
    for name in ("gate_flow_state", "jump_state"):
        changed[name].attrs = run[name].attrs
    return changed


@EVERY_FIGURE
@pytest.mark.parametrize("odd", ODD_RUNS)
def test_odd_runs_can_be_drawn(name, odd, invented_run, metric):
    run = invented_run()
    drawn = list(run_pictures(with_flags(ODD_RUNS[odd](run), run), metric, [name]))
    assert all(picture.figure.axes or NO_GATES in texts(picture.figure) for picture in drawn)


def forty_gates(run: xr.Dataset) -> xr.Dataset:
    """The gates, pools and offtakes of a run over and over again, 25 m apart, with four nodes each."""
    again = {"gate": np.arange(40) % 2, "pool": np.arange(40) % 2, "offtake": np.zeros(40, int)}
    many = run.isel(again | {"node": np.arange(160) % 4})
    many = many.assign_coords({what: [f"{what} {k}" for k in range(40)] for what in again})
    places = {"gate_chainage": ("gate", np.arange(40) * 25.0), "chainage": ("node", np.arange(160) * 6.25)}
    return many.assign(places)


@EVERY_FIGURE
def test_forty_gates_go_over_several_pages_and_each_stands_on_one(name, invented_run, metric):
    drawn = list(run_pictures(forty_gates(invented_run()), metric, [name]))
    assert len(drawn) > 1
    assert [picture.name for picture in drawn] == [f"{name}.{page + 1}" for page in range(len(drawn))]
    assert all(picture.figure.get_size_inches()[1] < 14.0 for picture in drawn)


def test_pages_are_as_even_as_they_can_be():
    assert [len(page) for page in pages(range(13), 6)] == [5, 4, 4]
    assert [place for page in pages(range(13), 6) for place in page] == list(range(13))
    assert pages(range(0), 6) == [[]]


def test_a_single_page_has_no_number():
    assert [page_name("levels", 0, 1), page_name("levels", 1, 2)] == ["levels", "levels.2"]

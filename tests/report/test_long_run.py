"""A long run is read a few places, or rows, at a time: nothing it tells is other than of the same run as a whole."""

import re
import tracemalloc
from collections.abc import Callable
from contextlib import ExitStack

import numpy as np
import pytest
import xarray as xr
from tests.canals import scenario_of
from tests.seasons import EVERY_MINUTE, season

from toeline import open_run, simulate
from toeline.findings.comparison import compare
from toeline.findings.incidents import incidents
from toeline.findings.indicators import indicators
from toeline.report.order_sheet import order_sheets
from toeline.report.page.document import report_page
from toeline.report.run_summary import run_summary
from toeline.results import dataset
from toeline.units import Display, UnitSystem

METRIC = Display(UnitSystem.metric)
MOVES = {"first": 0.04, "other": 0.02}
LITTLE = 50_000
"""Bytes read at once: four places of one number of a day, a thousand of its rows of one place."""


@pytest.fixture(scope="module")
def files(tmp_path_factory):
    """A day of twenty pools at every minute, and the same day with smaller moves."""
    folder = tmp_path_factory.mktemp("runs")
    for name, move in MOVES.items():
        scenario = scenario_of(folder, *season(1, move, **EVERY_MINUTE), name=name)
        simulate(scenario, folder / f"{name}.nc").close()
    return folder


@pytest.fixture
def both(files, monkeypatch):
    """What something tells of the file read whole, and in parts."""

    def told(tell: Callable[..., object], *names: str) -> tuple[object, object]:
        with ExitStack() as stack:
            runs = [stack.enter_context(open_run(files / f"{name}.nc")) for name in names or ("first",)]
            whole = tell(*(run.compute() for run in runs))
            _read_little_at_once(monkeypatch)
            return whole, tell(*runs)

    return told


@pytest.mark.parametrize(
    "tell",
    [
        lambda run: run_summary(run, METRIC),
        lambda run: re.sub(r"[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}|p\d{4,}", "", report_page({"run": run})),
        lambda run: repr(order_sheets(run)),
        incidents,
    ],
    ids=["summary", "page", "order sheets", "incidents"],
)
def test_a_run_read_in_parts_tells_the_same(both, tell):
    whole, in_parts = both(tell)
    assert whole == in_parts


def test_indicators_of_a_run_read_in_parts_are_the_same_but_for_the_order_of_sums(both):
    whole, in_parts = both(indicators)
    assert [(one.name, one.where, one.note) for one in whole] == [(one.name, one.where, one.note) for one in in_parts]
    np.testing.assert_allclose([one.value for one in in_parts], [one.value for one in whole], rtol=1e-12)


def test_runs_compared_in_parts_differ_in_the_same(both):
    whole, in_parts = both(lambda first, other: compare({"first": first, "other": other}), *MOVES)
    assert (whole.contrasts, whole.incidents) == (in_parts.contrasts, in_parts.incidents)


def test_of_a_long_run_cut_in_time_nothing_is_told_from_beyond_the_cut(both):
    whole, in_parts = both(lambda run: incidents(run.isel(time=slice(0, 500))))
    assert whole == in_parts


def test_the_summary_of_a_long_run_holds_a_small_part_of_it(files, monkeypatch):
    _read_little_at_once(monkeypatch)
    with open_run(files / "first.nc") as run:
        run_summary(run, METRIC)
        assert _held(run) < 0.1 * run.nbytes
        tracemalloc.start()
        run_summary(run, METRIC)
        _, peak = tracemalloc.get_traced_memory()
        tracemalloc.stop()
    assert peak < 0.25 * run.nbytes


def _read_little_at_once(monkeypatch) -> None:
    for name, value in (("LONG_RUN", 0.0), ("PART", LITTLE), ("KEPT", 0.0)):
        monkeypatch.setattr(dataset, name, value)


def _held(run: xr.Dataset) -> int:
    """Bytes of a run that stay in memory."""
    return sum(variable.nbytes for variable in run.variables.values() if variable._in_memory)

"""The file against the CF conventions, by the published checker, without a network."""

import functools
import socket

import numpy as np
import pytest

from toeline.results.dataset import open_run
from toeline.results.netcdf_writer import NetcdfSink

SUITE = "cf:1.11"
NOT_APPLICABLE = ["check_grid_coordinates", "check_reduced_horizontal_grid", "check_duplicate_axis"]
"""Checks of latitude and longitude grids, of which a canal has none; they take most of the checker's time."""


@pytest.fixture
def no_network(monkeypatch):
    def refuse(*_args, **_options):
        raise OSError("tests use no network")

    monkeypatch.setattr(socket.socket, "connect", refuse)
    monkeypatch.setattr(socket, "getaddrinfo", refuse)


@pytest.fixture
def path(invented_run, tmp_path):
    run = invented_run()
    run.write_to(NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start))
    return tmp_path / "run.nc"


def complaints(results):
    for result in results:
        yield from complaints(result.children)
        has_failed = not result.children and result.value not in (True, None) and result.value[0] < result.value[1]
        if has_failed:
            yield result.name, result.msgs


@pytest.mark.usefixtures("no_network")
@pytest.mark.filterwarnings("ignore")  # the checker's own
def test_the_checker_finds_no_fault(path, monkeypatch):
    from compliance_checker.cf import util
    from compliance_checker.suite import CheckSuite

    # asked again by every check, and slow to answer
    monkeypatch.setattr(util, "get_geophysical_variables", functools.cache(util.get_geophysical_variables))
    CheckSuite.load_all_available_checkers()
    suite = CheckSuite()
    with suite.load_dataset(str(path)) as dataset:
        results, failed_checks = suite.run_all(dataset, [SUITE], skip_checks=NOT_APPLICABLE)[SUITE]
    assert list(complaints(results)) == []
    # the checker subtracts neighbouring labels to see whether they increase, which names cannot be
    assert failed_checks.keys() <= {"check_coordinate_variables_strict_monotonicity"}


@pytest.mark.parametrize("clock", ["time", "profile_time"])
def test_clocks_increase(path, clock):
    with open_run(path) as run:
        assert (np.diff(run[clock]) > np.timedelta64(0)).all()

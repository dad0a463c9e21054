"""Which inputs of two runs differ, from the settings that they carry."""

import json

import pytest
import xarray as xr

from toeline.findings.input_differences import (
    InputDifference,
    have_same_inputs,
    input_differences,
    largest_of_series,
)
from toeline.results.provenance import shared_input_hash

CANAL = {
    "gates": [{"name": "Mill check", "sill_level": 99.6}, {"name": "Heron check", "sill_level": 98.8}],
    "sections": {"canal": {"roughness": 0.015}},
    "units": "metric",
}
STEPS = {"times": [0, 3_600_000], "values": [0.4, 0.9], "shape": "steps"}
DAY = {"title": "a day", "canal": "canal.toml", "deliveries": {"North lateral": STEPS}, "start": {"file": "a.nc"}}
DIMENSIONS = {"canal.gates.*.sill_level": "length", "day.deliveries.*": "discharge"}


def run_of(canal: dict = CANAL, day: dict = DAY, start: str | None = None) -> xr.Dataset:
    """As much of a run as its settings need."""
    settings = {"canal": canal, "day": day, "start_file_digest": start, "dimensions": DIMENSIONS}
    attributes = {"resolved_settings": json.dumps(settings), "shared_input_hash": shared_input_hash(settings)}
    return xr.Dataset(attrs=attributes)


@pytest.mark.parametrize(
    "day",
    [DAY | {"title": "another"}, DAY | {"canal": "../canal.toml"}, DAY | {"start": {"file": "b.nc"}}],
    ids=["title", "where the canal lies", "where the start lies"],
)
def test_names_are_no_inputs(day):
    assert have_same_inputs(run_of(), run_of(day=day))
    assert input_differences(run_of(), run_of(day=day)) == []


def test_units_for_people_are_no_input():
    assert have_same_inputs(run_of(), run_of(canal=CANAL | {"units": "us customary"}))


def test_a_number_is_told_by_its_key_both_values_and_what_it_measures():
    gates = [CANAL["gates"][0], {"name": "Heron check", "sill_level": 98.9}]
    other = run_of(canal=CANAL | {"gates": gates})
    assert not have_same_inputs(run_of(), other)
    assert input_differences(run_of(), other) == [
        InputDifference(("canal", "gates", "Heron check", "sill_level"), 98.8, 98.9, "length")
    ]


def test_a_number_without_dimension_has_none():
    other = run_of(canal=CANAL | {"sections": {"canal": {"roughness": 0.021}}})
    assert [one.dimension for one in input_differences(run_of(), other)] == [None]


def test_a_table_that_one_run_lacks_is_one_difference():
    other = run_of(canal=CANAL | {"gates": CANAL["gates"][:1]})
    (difference,) = input_differences(run_of(), other)
    assert (difference.path, difference.other) == (("canal", "gates", "Heron check"), None)


def test_a_start_from_another_state_is_a_difference():
    assert [one.path for one in input_differences(run_of(start="1"), run_of(start="2"))] == [("start_file_digest",)]


def test_a_series_is_one_setting_and_told_where_it_differs_most():
    later = STEPS | {"times": [0, 7_200_000]}
    (difference,) = input_differences(run_of(), run_of(day=DAY | {"deliveries": {"North lateral": later}}))
    assert (difference.path, difference.dimension) == (("day", "deliveries", "North lateral"), "discharge")
    assert largest_of_series(difference.first, difference.other) == (3_600_000, 0.9, 0.4)


def test_lines_are_compared_between_their_points():
    first = {"times": [0, 7_200_000], "values": [0.0, 2.0], "shape": "lines"}
    other = {"times": [0, 3_600_000, 7_200_000], "values": [0.0, 4.0, 2.0], "shape": "lines"}
    assert largest_of_series(first, other) == (3_600_000, pytest.approx(1.0), 4.0)


def test_a_run_without_a_digest_is_not_taken_for_the_same():
    old = run_of()
    del old.attrs["shared_input_hash"]
    assert not have_same_inputs(old, old)

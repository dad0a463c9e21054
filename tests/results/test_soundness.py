"""Files of results that were changed by hand are refused with the name of what is wrong, not read until it hurts."""

import json
from typing import get_args

import netCDF4
import pytest

from toeline.errors import UsageError
from toeline.results.dataset import read_run
from toeline.results.netcdf_writer import NetcdfSink
from toeline.results.provenance import ATTRIBUTES
from toeline.results.soundness import LIMIT_KINDS
from toeline.results.variables import VARIABLES
from toeline.scenario.schema.limits import Limit

LIMIT = {
    "kind": "fall",
    "limit": 0.3,
    "unit": "m",
    "places": ["pool 1 Ä"],
    "source": "standing order 7",
    "window": 60.0,
}


@pytest.fixture
def refusal(invented_run, tmp_path):
    """What is said of a run after something was done to its file."""

    def after(change) -> str:
        run = invented_run()
        path = run.write_to(NetcdfSink(tmp_path / "run.nc", run.static(), run.attributes, run.start)).written_path
        with netCDF4.Dataset(path, "a") as file:
            change(file)
        with pytest.raises(UsageError) as refused, read_run(path):
            pass
        told = str(refused.value)
        path.unlink()
        assert told.startswith(str(path))
        return told

    return after


@pytest.mark.parametrize("name", sorted(set(ATTRIBUTES) - {"source"}))
def test_a_missing_attribute_is_named(refusal, name):
    assert f"it has no attribute {name}; run its day again" in refusal(lambda file: file.delncattr(name))


@pytest.mark.parametrize("name", sorted(set(ATTRIBUTES) - {"source"}))
def test_an_attribute_that_is_no_text_is_named(refusal, name):
    assert f"its attribute {name} is 3.5, expected: " in refusal(lambda file: file.setncattr(name, 3.5))


@pytest.mark.parametrize("text", ['[{"kind": ', "null", "[" * 100_000])
@pytest.mark.parametrize("name", ["resolved_settings", "surface_names", "limits", "avoided_openings"])
def test_broken_json_is_named_with_what_is_expected(refusal, name, text):
    told = refusal(lambda file: file.setncattr(name, text))
    assert f"its attribute {name} is '{text[:30]}" in told
    assert "expected: JSON, a" in told


@pytest.mark.parametrize(
    ("name", "text", "expected"),
    [
        ("history", "made yesterday", "a time such as"),
        ("units_for_display", "furlongs", "'metric' or 'us customary'"),
        ("zone", "../etc/passwd", "a name of the tz database"),
        ("utc_offset", "two hours", "an offset such as"),
        ("surface_names", '[3, "bed"]', "an array of names"),
        ("avoided_openings", '{"gate 1 Ä": [[0.1]]}', "pairs of numbers"),
        ("resolved_settings", '{"canal": 3}', "the tables canal and day"),
        ("resolved_settings", '{"rules": [{}]}', "the tables canal and day"),
        ("resolved_settings", '{"canal": {"gates": 3}}', "that of shared_input_hash"),
        ("shared_input_hash", "0" * 64, "that of shared_input_hash"),
    ],
)
def test_attributes_that_are_more_than_words_are_looked_into(refusal, name, text, expected):
    assert expected in refusal(lambda file: file.setncattr(name, text)).partition("expected: ")[2]


@pytest.mark.parametrize(
    "change",
    [{"kind": "fal"}, {"limit": "much"}, {"places": "all"}, {"source": None}, {"measured_from": "bank"}, {"colour": 1}],
)
def test_limits_that_nobody_could_hold_a_run_against_are_refused(refusal, change):
    told = refusal(lambda file: file.setncattr("limits", json.dumps([LIMIT | change])))
    assert "its attribute limits is '[{" in told


def test_a_limit_at_an_unknown_place_is_refused(refusal):
    told = refusal(lambda file: file.setncattr("limits", json.dumps([LIMIT | {"places": ["Elsewhere"]}])))
    assert "its attribute limits names 'Elsewhere', expected: a place or a surface of the run" in told


def test_the_kinds_of_limits_are_those_of_canal_files():
    assert set(LIMIT_KINDS) == set(get_args(Limit.model_fields["kind"].annotation))


@pytest.mark.parametrize("name", ["gate_opening", "gate", "time", "surface", "order_time", "water_level"])
def test_a_missing_variable_is_named(refusal, name):
    assert f"it has no {name}; run its day again" in refusal(lambda file: file.renameVariable(name, "other"))


def other_dimension(name: str):
    def change(file: netCDF4.Dataset) -> None:
        file.renameVariable(name, "other")
        file.createDimension("elsewhere", 3)
        file.createVariable(name, "f8", ("elsewhere",))

    return change


@pytest.mark.parametrize("name", ["gate_opening", "time", "gate", "end_level", "end_time"])
def test_a_variable_with_another_dimension_is_named(refusal, name):
    told = refusal(other_dimension(name))
    expected = ", ".join(VARIABLES[name].dimensions)
    assert f"its variable {name} has the dimensions (elsewhere), expected: ({expected})" in told


@pytest.mark.parametrize(
    ("variable", "attribute", "text", "expected"),
    [
        ("gate_opening", "units", "ft", "expected: 'm'"),
        ("jump_state", "flag_meanings", "high low", "expected: 'none drowned"),
        ("surface", "flag_meanings", "bed", "one for each of surface_names"),
        ("time", "units", "yes", "expected: times"),
        ("time", "units", "bananas since noon", "time units 'bananas since noon'"),
    ],
)
def test_spoilt_attributes_of_variables_are_named(refusal, variable, attribute, text, expected):
    assert expected in refusal(lambda file: file[variable].setncattr(attribute, text))


@pytest.mark.parametrize(("name", "value"), [("jump_state", 77), ("order_status", 9), ("settling", -1)])
def test_a_flag_without_a_meaning_is_named(refusal, name, value):
    def change(file):
        file[name].set_auto_maskandscale(False)
        file[name][:] = value

    assert f"its variable {name} holds {value}, expected: 0 to {len(VARIABLES[name].flags) - 1}" in refusal(change)

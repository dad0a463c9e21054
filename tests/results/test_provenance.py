"""Global attributes: complete, and equal for equal inputs."""

import json
from datetime import UTC, datetime

import pytest

from toeline.constants import CAUTION
from toeline.results.provenance import ATTRIBUTES, run_attributes, shared_input_hash, shared_settings

INPUTS = {
    "title": "A dry day",
    "canal": "Quillmere main canal",
    "plan": None,
    "canal_text": "a",
    "day_text": "b",
    "settings": {"spacing": 100.0, "level_tolerance": 0.003},
    "input_hash": "0" * 64,
    "surface_names": ["apron"],
    "units_for_display": "us customary",
    "zone": None,
    "start": datetime.fromisoformat("2031-05-04T00:00:00-09:30"),
    "version": "0.1.0",
    "created": datetime(2031, 5, 3, 12, tzinfo=UTC),
}


def test_every_attribute_is_explained_and_written():
    assert run_attributes(**INPUTS).keys() | {"outcome"} == ATTRIBUTES.keys()


def test_the_caution_goes_with_the_results():
    assert run_attributes(**INPUTS)["comment"] == CAUTION


def test_the_clock_shows_in_the_history_alone():
    attributes = run_attributes(**INPUTS)
    later = run_attributes(**INPUTS | {"created": datetime(2032, 1, 1, tzinfo=UTC)})
    assert {name for name in attributes if attributes[name] != later[name]} == {"history"}


def test_what_the_day_does_not_give_is_empty():
    attributes = run_attributes(**INPUTS)
    assert (attributes["plan"], attributes["zone"]) == ("", "")


def test_offset_and_settings_can_be_read_back():
    attributes = run_attributes(**INPUTS)
    assert attributes["utc_offset"] == "-09:30"
    assert json.loads(attributes["resolved_settings"]) == INPUTS["settings"]


def test_settings_that_are_not_numbers_are_refused():
    with pytest.raises(ValueError, match="not JSON compliant"):
        run_attributes(**INPUTS | {"settings": {"spacing": float("nan")}})


SETTINGS = {
    "canal": {"name": "Alder branch", "units": "metric"},
    "day": {"canal": "a.toml", "title": "a day", "units": None, "start": {"file": "a.nc", "state": None}},
    "start_file_digest": "0",
    "dimensions": {"day.period.spacing": "length"},
}


def test_names_of_files_titles_and_units_for_people_are_no_shared_settings():
    assert shared_settings(SETTINGS) == {
        "canal": {"name": "Alder branch"},
        "day": {"start": {"state": None}},
        "start_file_digest": "0",
    }


def test_the_settings_are_left_as_they_are():
    shared_settings(SETTINGS)
    assert SETTINGS["day"]["start"]["file"] == "a.nc"


def test_the_shared_digest_tells_one_start_from_another():
    assert shared_input_hash(SETTINGS) != shared_input_hash(SETTINGS | {"start_file_digest": "1"})


def test_the_shared_digest_does_not_depend_on_the_order_of_keys():
    assert shared_input_hash(SETTINGS) == shared_input_hash(dict(reversed(SETTINGS.items())))

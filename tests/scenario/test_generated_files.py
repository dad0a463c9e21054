"""The JSON Schema and the reference page are what the schema generates."""

import json
from importlib.resources import files
from pathlib import Path

import pytest

from toeline.scenario.json_schema import SCHEMA_FILES, schema_text
from toeline.scenario.reference_page import reference_page
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day
from toeline.scenario.schema.plans import OrderEntry
from toeline.scenario.schema.table import table_inside

REFERENCE_PAGE = Path(__file__).parents[2] / "docs" / "input_reference.md"


@pytest.mark.parametrize("name", SCHEMA_FILES)
def test_the_shipped_json_schema_is_in_step(name):
    assert (files("toeline.scenario") / name).read_text(encoding="utf-8") == schema_text(SCHEMA_FILES[name])


def test_the_reference_page_is_in_step():
    assert REFERENCE_PAGE.read_text(encoding="utf-8") == reference_page()


def tables(table):
    yield table
    for field in table.keys().values():
        inner = table_inside(field.annotation)
        if inner is not None:
            yield from tables(inner)


@pytest.mark.parametrize("table", sorted({*tables(Canal), *tables(Day), OrderEntry}, key=lambda table: table.__name__))
def test_every_key_is_described_as_a_sentence(table):
    for key, field in table.keys().items():
        assert field.description, key
        assert field.description.endswith((".", ")")), key


def test_the_json_schema_knows_keys_and_words():
    schema = json.loads(schema_text(Canal))

    assert schema["required"] == ["name", "units", "sections", "surfaces", "pools", "head", "tail"]
    assert schema["additionalProperties"] is False
    assert schema["$defs"]["Gate"]["properties"]["kind"]["enum"] == ["vertical", "radial"]
    assert schema["$defs"]["Stretch"]["properties"]["length"]["type"] == ["number", "string"]

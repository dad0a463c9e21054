"""JSON Schema of both input files, for editors: `python -m toeline.scenario.json_schema` writes them anew."""

import json
from pathlib import Path
from typing import Any

from pydantic.json_schema import GenerateJsonSchema, JsonSchemaValue
from pydantic_core import core_schema

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day
from toeline.scenario.schema.table import Table

SCHEMA_FILES: dict[str, type[Table]] = {"canal.schema.json": Canal, "day.schema.json": Day}
"""Names of the files, beside this module, and what they describe."""


class _TomlSchema(GenerateJsonSchema):
    """TOML has no null; and defaults, which are SI inside and not as typed, are left to the descriptions."""

    def nullable_schema(self, schema: core_schema.NullableSchema) -> JsonSchemaValue:
        return self.generate_inner(schema["schema"])

    def default_schema(self, schema: core_schema.WithDefaultSchema) -> JsonSchemaValue:
        return self.generate_inner(schema["schema"])

    def field_title_should_be_set(self, schema: Any) -> bool:
        return False


def schema_text(table: type[Table]) -> str:
    """Give the JSON Schema of an input file."""
    schema = {"$schema": _TomlSchema.schema_dialect, **table.model_json_schema(schema_generator=_TomlSchema)}
    return json.dumps(schema, indent=2, ensure_ascii=False) + "\n"


def write_schemas() -> None:
    """Write both files beside this module."""
    for name, table in SCHEMA_FILES.items():
        Path(__file__).with_name(name).write_text(schema_text(table), encoding="utf-8")


if __name__ == "__main__":
    write_schemas()

"""JSON Schema of both input files, for editors: `python -m toeline.scenario.json_schema` writes them anew."""

import json
from pathlib import Path

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day
from toeline.scenario.schema.table import Table
from toeline.scenario.schema.toml_json_schema import TomlJsonSchema

SCHEMA_FILES: dict[str, type[Table]] = {"canal.schema.json": Canal, "day.schema.json": Day}
"""Names of the files, beside this module, and what they describe."""


def schema_text(table: type[Table]) -> str:
    """Give the JSON Schema of an input file."""
    schema = {"$schema": TomlJsonSchema.schema_dialect, **table.model_json_schema(schema_generator=TomlJsonSchema)}
    return json.dumps(schema, indent=2, ensure_ascii=False) + "\n"


def write_schemas() -> None:
    """Write both files beside this module."""
    for name, table in SCHEMA_FILES.items():
        Path(__file__).with_name(name).write_text(schema_text(table), encoding="utf-8")


if __name__ == "__main__":
    write_schemas()

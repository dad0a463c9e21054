"""From the values a run produces to what is stored: dtypes, clocks, and the CF attributes of every variable."""

import json
import re
from collections.abc import Mapping
from datetime import UTC, datetime

import numpy as np

from toeline.results import variables as registry
from toeline.results.variables import CLOCK, GROWING_DIMENSIONS, LABELLED_DIMENSIONS, Variable, growing

Rows = dict[str, np.ndarray]
"""Arrays of one leading dimension by variable name, all with the same number of rows."""

INTEGER_CLOCKS = ("time", "profile_time")
"""Blocks carry these as whole milliseconds since the start; all other times are seconds."""


def sizes_of(static: Mapping[str, np.ndarray]) -> dict[str, int]:
    """Lengths of the fixed dimensions: as many gates, pools and so on as their labels."""
    return {dimension: len(static[dimension]) for dimension in LABELLED_DIMENSIONS}


def rows_by_dimension(block: Mapping[str, np.ndarray]) -> dict[str, Rows]:
    """Sort a block by leading dimension and bring its values to the form in which they are stored.

    A block must carry all variables of a growing dimension or none of them; ValueError says what is missing, unknown
    or of unequal length.
    """
    unknown = block.keys() - {variable.name for dimension in GROWING_DIMENSIONS for variable in growing(dimension)}
    if unknown:
        raise ValueError(f"a block carries variables that the registry does not know: {sorted(unknown)}")
    present = [d for d in GROWING_DIMENSIONS if any(variable.name in block for variable in growing(d))]
    return {dimension: _rows(dimension, block) for dimension in present}


def _rows(dimension: str, block: Mapping[str, np.ndarray]) -> Rows:
    variables = growing(dimension)
    missing = [variable.name for variable in variables if variable.name not in block]
    if missing:
        raise ValueError(f"a block with rows along {dimension} lacks {missing}")
    lengths = {variable.name: len(block[variable.name]) for variable in variables}
    if len(set(lengths.values())) > 1:
        raise ValueError(f"the rows of a block along {dimension} differ in number: {lengths}")
    return {variable.name: stored(variable, block[variable.name]) for variable in variables}


def stored(variable: Variable, values: np.ndarray) -> np.ndarray:
    """A copy of `values` in the dtype of the file."""
    if variable.dtype == "text":
        return np.array(values, dtype=object)
    values = np.asarray(values)
    if variable.name in INTEGER_CLOCKS:
        if values.dtype.kind != "i":
            raise ValueError(f"{variable.name} must be whole milliseconds, not {values.dtype}")
        values = values / 1000.0
    return values.astype(variable.dtype)


def fill_value(variable: Variable) -> float | None:
    """NaN marks what is missing; coordinates, flags and labels are never missing."""
    is_coordinate = variable.dimensions == (variable.name,)
    return np.nan if variable.dtype in ("f4", "f8") and not is_coordinate else None


def cf_attributes(variable: Variable, start: datetime, surface_names: list[str]) -> dict[str, object]:
    """The CF attributes of a variable, but for its fill value. `start` is the aware time at which clocks read 0."""
    flags = tuple(_flag_word(name) for name in surface_names) if variable.name == "surface" else variable.flags
    attributes: dict[str, object] = {"long_name": variable.long_name}
    if variable.standard_name:
        attributes["standard_name"] = variable.standard_name
    attributes |= _clock_attributes(start) if variable.unit == CLOCK else _unit_attributes(variable)
    if flags:
        attributes["flag_values"] = np.arange(len(flags), dtype="i1")
        attributes["flag_meanings"] = " ".join(flags)
    if variable.cell_methods:
        attributes["cell_methods"] = variable.cell_methods
    if variable.companions:
        attributes["ancillary_variables"] = " ".join(variable.companions)
    if variable.dimensions[-1:] == ("node",) and variable.name not in ("node", "chainage"):
        attributes["coordinates"] = "chainage"
    if variable.comment:
        attributes["comment"] = variable.comment
    return attributes


def _unit_attributes(variable: Variable) -> dict[str, object]:
    return {"units": variable.unit} if variable.unit else {}


def _clock_attributes(start: datetime) -> dict[str, object]:
    if start.tzinfo is None:
        raise ValueError("the start of the period must carry its offset from UTC")
    instant = start.astimezone(UTC).replace(tzinfo=None).isoformat(sep=" ")
    return {"units": f"seconds since {instant}Z", "calendar": "standard", "units_metadata": "leap_seconds: none"}


def surface_names_of(attributes: Mapping[str, str]) -> list[str]:
    """The names behind the values of `surface`, from the global attributes."""
    names: list[str] = json.loads(attributes["surface_names"])
    return names


def _flag_word(name: str) -> str:
    """A name as CF allows it in flag_meanings: one word of letters, digits and _ - . + @."""
    return re.sub(r"[^A-Za-z0-9_.+@-]+", "_", name)


def end_state_values(end_state: Mapping[str, np.ndarray]) -> Rows:
    """The end state as stored; empty where a run has none. ValueError if a part is missing or unknown."""
    return _complete(registry.end_state(), end_state) if end_state else {}


def static_values(static: Mapping[str, np.ndarray]) -> Rows:
    """The fixed variables as stored. ValueError if one is missing or unknown."""
    return _complete(registry.fixed(), static)


def _complete(variables: list[Variable], values: Mapping[str, np.ndarray]) -> Rows:
    names = {variable.name for variable in variables}
    if values.keys() != names:
        raise ValueError(f"variables missing or unknown: {sorted(values.keys() ^ names)}")
    return {variable.name: stored(variable, values[variable.name]) for variable in variables}

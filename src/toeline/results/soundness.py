"""Whether a file that calls itself a run holds what its readers count on, so that none of them stumbles over it."""

import json
from collections.abc import Callable, Iterator
from contextlib import suppress
from datetime import datetime
from itertools import chain
from typing import Any, TypeGuard
from zoneinfo import ZoneInfo

import numpy as np
import xarray as xr

from toeline.results.provenance import ATTRIBUTES, RULES, STUCK, shared_input_hash
from toeline.results.variables import CLOCK, VARIABLES, Variable
from toeline.units import UnitSystem

LONGEST_SHOWN = 40
"""Characters of a value that a message repeats."""

LIMIT_KINDS: dict[str, tuple[str, ...]] = {
    **dict.fromkeys(
        ("fall", "rise", "velocity", "moves", "head on offtake", "avoided opening", "near modular limit"), ("",)
    ),
    **dict.fromkeys(("above", "below"), ("datum", "target", "bed")),
    "freeboard": ("bank", "lining"),
}
"""Kinds of limits that a file may carry, and what the heights of each may be measured from."""

_LIMIT_KEYS = {"kind", "limit", "unit", "places", "source", "window", "measured_from", "at", "surfaces"}
_ENDS = ("", "lower end", "upper end")


def misfit_of(run: xr.Dataset) -> str | None:
    """What of a run is not as this version writes it, and how it should be, as a clause; None where all is.

    Attributes are looked into, of variables only what they are made of: to read all values would take too long. The
    state at the end may be missing, as a run that stopped early has none.
    """
    return next(chain(_lacking(run), _attribute_misfits(run), _variable_misfits(run)), None)


def flag_misfit_of(run: xr.Dataset) -> str | None:
    """Which flag of a run in memory has a value that means nothing, as a clause; None where none has."""
    for name, variable in VARIABLES.items():
        values = run[name].values if variable.flags and name in run.variables else np.empty(0)
        strange = values[(values < 0) | (values >= len(variable.flags))] if values.size else values
        if strange.size:
            return f"its variable {name} holds {strange[0]}, expected: 0 to {len(variable.flags) - 1}"
    return None


def _lacking(run: xr.Dataset) -> Iterator[str]:
    written = [variable.name for variable in VARIABLES.values() if not variable.is_state]
    yield from (f"it has no {name}" for name in written if name not in run.variables)
    yield from (f"it has no attribute {name}" for name in ATTRIBUTES if name not in run.attrs)


def _attribute_misfits(run: xr.Dataset) -> Iterator[str]:
    for name in ATTRIBUTES:
        found = run.attrs[name]
        expected, is_as_expected = _EXPECTED.get(name, ("text", _is_text))
        if not (_is_text(found) and is_as_expected(found)):
            yield f"its attribute {name} is {_shown(found)}, expected: {expected}"
    digest = shared_input_hash(json.loads(run.attrs["resolved_settings"]))
    if run.attrs["shared_input_hash"] != digest:
        yield f"its attribute resolved_settings has the digest {digest[:8]}..., expected: that of shared_input_hash"
    yield from _unknown_places(run)


def _unknown_places(run: xr.Dataset) -> Iterator[str]:
    """Places and surfaces of limits that the run does not have."""
    known = {name for place in ("pool", "gate", "offtake") for name in run[place].values.tolist()}
    surfaces = set(json.loads(run.attrs["surface_names"]))
    for limit in json.loads(run.attrs["limits"]):
        for unknown in [*({*limit["places"]} - known), *({*limit.get("surfaces", ())} - surfaces)]:
            yield f"its attribute limits names {_shown(unknown)}, expected: a place or a surface of the run"


def _variable_misfits(run: xr.Dataset) -> Iterator[str]:
    for name, variable in VARIABLES.items():
        if name in run.variables:
            yield from _misfits_of_variable(run.variables[name], variable, len(json.loads(run.attrs["surface_names"])))


def _misfits_of_variable(found: xr.Variable, variable: Variable, surfaces: int) -> Iterator[str]:
    its = f"its variable {variable.name}"
    if found.dims != variable.dimensions:
        along, expected = (f"({', '.join(map(str, dims))})" for dims in (found.dims, variable.dimensions))
        yield f"{its} has the dimensions {along}, expected: {expected}"
    is_what, kinds = _stored(variable)
    if found.dtype.kind not in kinds:
        yield f"{its} is stored as {found.dtype}, expected: {is_what}"
    if variable.unit not in (None, CLOCK) and found.attrs.get("units") != variable.unit:
        yield f"{its} has the units {_shown(found.attrs.get('units', ''))}, expected: '{variable.unit}'"
    meanings = str(found.attrs.get("flag_meanings", "")).split()
    if variable.name == "surface" and len(meanings) != surfaces:
        yield f"{its} has {len(meanings)} flag_meanings, expected: {surfaces}, one for each of surface_names"
    if variable.flags and meanings != list(variable.flags):
        yield f"{its} has the flag_meanings {_shown(' '.join(meanings))}, expected: '{' '.join(variable.flags)}'"


def _stored(variable: Variable) -> tuple[str, str]:
    """What the values of a variable are once read, in a word and as kinds of numpy."""
    if variable.unit == CLOCK:
        return "times", "M"
    return ("text", "OUT") if variable.dtype == "text" else ("numbers", "fiu")


def _shown(found: object) -> str:
    text = f"'{found}'" if isinstance(found, str) else str(found)
    return text if len(text) <= LONGEST_SHOWN else f"{text[:LONGEST_SHOWN]}..."


def _is_text(found: object) -> bool:
    return isinstance(found, str)


def _is_number(found: object) -> bool:
    return isinstance(found, (int, float)) and not isinstance(found, bool)


def _are_texts(found: object) -> bool:
    return isinstance(found, list) and all(map(_is_text, found))


def _are_tables(found: object) -> TypeGuard[list[dict[str, Any]]]:
    return isinstance(found, list) and all(isinstance(entry, dict) for entry in found)


def _are_settings(found: Any) -> bool:
    has_tables = all(isinstance(found.get(key, {}), dict) for key in ("canal", "day"))
    rules, stuck = found.get(RULES, []), found.get(STUCK, [])
    if not (has_tables and _are_tables(rules) and _are_tables(stuck)):
        return False
    return all(_is_text(rule["kind"]) for rule in rules) and all(map(_is_stuck, stuck))


def _is_stuck(entry: dict[str, Any]) -> bool:
    return _is_text(entry["gate"]) and _is_number(entry["begin"]) and _is_number(entry["end"])


def _are_limits(found: object) -> bool:
    return _are_tables(found) and all(map(_is_limit, found))


def _is_limit(entry: dict[str, Any]) -> bool:
    has_kind = entry.get("measured_from", "") in LIMIT_KINDS[entry["kind"]] and entry.get("at", "") in _ENDS
    has_texts = _is_text(entry["unit"]) and _is_text(entry["source"])
    has_numbers = _is_number(entry["limit"]) and _is_number(entry.get("window", 0.0))
    has_names = _are_texts(entry["places"]) and _are_texts(entry.get("surfaces", []))
    return has_kind and has_texts and has_numbers and has_names and entry.keys() <= _LIMIT_KEYS


def _are_bands(found: object) -> bool:
    return isinstance(found, dict) and all(
        isinstance(bands, list) and all(map(_is_band, bands)) for bands in found.values()
    )


def _is_band(found: object) -> bool:
    return isinstance(found, list) and len(found) == 2 and all(map(_is_number, found))


def _json_of(is_as_expected: Callable[[object], bool]) -> Callable[[str], bool]:
    return lambda text: _succeeds(lambda: is_as_expected(json.loads(text)))


def _succeeds(work: Callable[[], Any]) -> bool:
    """Whether work gives something true, and does not fail for what it is given."""
    with suppress(ValueError, KeyError, TypeError, AttributeError, OSError, RecursionError):
        return bool(work())
    return False


_EXPECTED: dict[str, tuple[str, Callable[[str], bool]]] = {
    "history": (
        "a time such as 2031-05-04T06:00:00Z, then what was done",
        lambda text: _succeeds(lambda: datetime.fromisoformat(text.partition(" ")[0])),
    ),
    "resolved_settings": ("JSON, a table with the tables canal and day", _json_of(_are_settings)),
    "surface_names": ("JSON, an array of names", _json_of(_are_texts)),
    "limits": ("JSON, an array of tables with kind, limit, unit, places and source", _json_of(_are_limits)),
    "avoided_openings": ("JSON, a table with an array of pairs of numbers for each gate", _json_of(_are_bands)),
    "units_for_display": (
        " or ".join(f"'{system}'" for system in UnitSystem),
        lambda text: _succeeds(lambda: UnitSystem(text)),
    ),
    "zone": (
        "a name of the tz database, or nothing",
        lambda text: not text or _succeeds(lambda: ZoneInfo(text)),
    ),
    "utc_offset": (
        "an offset such as '+02:00'",
        lambda text: _succeeds(lambda: datetime.strptime(text, "%z")),
    ),
}
"""Attributes that are more than words: what is expected, said and tested."""

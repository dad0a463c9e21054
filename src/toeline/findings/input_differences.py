"""Which inputs of two runs differ beside their plans: key by key, from the settings that every run carries."""

import json
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import xarray as xr

from toeline.results.provenance import DIMENSIONS, RULE_DIMENSIONS, RULES, STUCK, shared_settings

KeyPath = tuple[str, ...]

_SERIES_KEYS = {"times", "values", "shape"}


@dataclass(frozen=True)
class InputDifference:
    """One setting of canal or day that is not the same in both runs.

    `path` leads to it, with names of places and, where they have none, their numbers from 1. `first` and `other` are in
    SI, times in ms from the start of the period; None where it is not given. `dimension` is that of the values, None
    where they have none or are no numbers.
    """

    path: KeyPath
    first: Any
    other: Any
    dimension: str | None


def have_same_inputs(first: xr.Dataset, other: xr.Dataset) -> bool:
    """Whether all that the numbers depend on beside the plans is the same, by the digests that the runs carry."""
    digest: str | None = first.attrs.get("shared_input_hash")
    return digest is not None and digest == other.attrs.get("shared_input_hash")


def input_differences(first: xr.Dataset, other: xr.Dataset) -> list[InputDifference]:
    """All settings of canal and day that differ, in the order of their names."""
    before, after = (json.loads(run.attrs["resolved_settings"]) for run in (first, other))
    dimensions = before.get(DIMENSIONS, {}) | after.get(DIMENSIONS, {})
    return list(_differences((), shared_settings(before), shared_settings(after), dimensions))


def plan_differences(first: xr.Dataset, other: xr.Dataset) -> list[InputDifference]:
    """What differs in the plans beside their orders: rules by kind and gate, and spells of stuck leaves by gate or bay.

    Durations of rules are in s, the spells [begin, end] in ms from the start of the period.
    """
    before, after = (json.loads(run.attrs["resolved_settings"]) for run in (first, other))
    measured = before.get(RULE_DIMENSIONS, {}) | after.get(RULE_DIMENSIONS, {})
    rules = _differences((), _rules(before), _rules(after), {})
    stuck = _differences((), _stuck(before), _stuck(after), {})
    return [
        replace(one, path=(name, *one.path), dimension=measured.get(one.path[0], {}).get(one.path[-1]))
        for name, differences in ((RULES, rules), (STUCK, stuck))
        for one in differences
    ]


def _rules(settings: Mapping[str, Any]) -> dict[str, dict[str, Any]]:
    """Settings of the rules, by kind and gate."""
    rules: dict[str, dict[str, Any]] = {}
    for rule in settings.get(RULES, []):
        own = {key: value for key, value in rule.items() if key not in ("kind", "gate")}
        rules.setdefault(rule["kind"], {})[rule.get("gate", "")] = own
    return rules


def _stuck(settings: Mapping[str, Any]) -> dict[str, list[list[int]]]:
    spells: dict[str, list[list[int]]] = {}
    for spell in settings.get(STUCK, []):
        place = f"{spell['gate']}, bay {spell['bay']}" if spell.get("bay") else spell["gate"]
        spells.setdefault(place, []).append([spell["begin"], spell["end"]])
    return spells


def largest_of_series(first: Any, other: Any) -> tuple[int, float, float] | None:
    """Where two settings are series of the day: when they differ most [ms from the start], and the values of both."""
    if not (_is_series(first) and _is_series(other)):
        return None
    times = sorted({*first["times"], *other["times"]})
    before, after = (_values_at(series, times) for series in (first, other))
    row = int(np.argmax(abs(after - before)))
    return times[row], float(before[row]), float(after[row])


def _is_series(value: Any) -> bool:
    return isinstance(value, dict) and value.keys() == _SERIES_KEYS


def _values_at(series: Mapping[str, Any], times: list[int]) -> np.ndarray:
    """The values of a series; at a step the new one."""
    if series["shape"] == "lines":
        return np.interp(times, series["times"], series["values"])
    rows = np.searchsorted(series["times"], times, side="right") - 1
    return np.asarray(series["values"])[np.maximum(rows, 0)]


def _differences(path: KeyPath, first: Any, other: Any, dimensions: Mapping[str, str]) -> Iterator[InputDifference]:
    if first == other:
        return
    inner = _parts(first), _parts(other)
    if any(part is None for part in inner):
        yield InputDifference(path, first, other, _dimension(path, dimensions))
        return
    before, after = (part or {} for part in inner)
    for name in sorted(before.keys() | after.keys()):
        yield from _differences((*path, name), before.get(name), after.get(name), dimensions)


def _parts(value: Any) -> dict[str, Any] | None:
    """The inner settings of a table or an array of tables, by name or number; None for what has none."""
    if isinstance(value, dict):
        return None if _is_series(value) else value
    if isinstance(value, list) and value and all(isinstance(item, dict) for item in value):
        return {str(item.get("name", number)): item for number, item in enumerate(value, start=1)}
    return None


def _dimension(path: KeyPath, dimensions: Mapping[str, str]) -> str | None:
    for pattern, dimension in dimensions.items():
        parts = pattern.split(".")
        if len(parts) == len(path) and all(part in ("*", key) for part, key in zip(parts, path, strict=True)):
            return dimension
    return None

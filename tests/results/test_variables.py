"""The registry: consistent in itself, whatever the values."""

import re

from toeline.results import variables as registry
from toeline.results.variables import GROWING_DIMENSIONS, VARIABLES, end_state, fixed, growing

CF_STANDARD_NAMES = {  # from the CF standard name table, https://cfconventions.org/standard-names.html
    "time",
    "status_flag",
    "quality_flag",
    "water_surface_height_above_reference_datum",
    "water_volume_transport_in_river_channel",
}


def test_every_variable_is_listed_once():
    groups = [group for name, group in vars(registry).items() if name.startswith("_") and isinstance(group, tuple)]
    listed = [item.name for group in groups for item in group if isinstance(item, registry.Variable)]
    assert len(listed) == len(set(listed)) == len(VARIABLES)


def test_every_variable_is_either_growing_fixed_or_end_state():
    parts = [growing(dimension) for dimension in GROWING_DIMENSIONS] + [fixed(), end_state()]
    assert sorted(v.name for part in parts for v in part) == sorted(VARIABLES)


def names_where(is_wrong) -> list[str]:
    return [variable.name for variable in VARIABLES.values() if is_wrong(variable)]


def test_companions_exist_on_the_same_dimensions():
    pairs = [(variable, VARIABLES[name]) for variable in VARIABLES.values() for name in variable.companions]
    assert [(v.name, companion.name) for v, companion in pairs if v.dimensions != companion.dimensions] == []


def test_flags_are_single_bytes():
    assert names_where(lambda variable: variable.flags and variable.dtype != "i1") == []


def test_flag_meanings_are_words_that_cf_allows():
    word = re.compile(r"[A-Za-z0-9_.+@-]+")
    assert names_where(lambda variable: not all(map(word.fullmatch, variable.flags))) == []


def test_standard_names_are_real():
    assert names_where(lambda variable: variable.standard_name not in CF_STANDARD_NAMES | {None}) == []


def test_numbers_carry_a_unit_and_words_carry_none():
    numbers = {"f4", "f8", "i4"}
    without = names_where(lambda variable: (variable.unit is not None) != (variable.dtype in numbers))
    assert without == ["order_value", "end_rule_value", "end_rate"]  # whose rows differ in unit


def test_volumes_and_times_are_double_precision():
    assert names_where(lambda variable: variable.unit in ("m3", registry.CLOCK) and variable.dtype != "f8") == []


def test_gate_discharge_is_qualified():
    assert "discharge_quality" in VARIABLES["gate_discharge"].companions

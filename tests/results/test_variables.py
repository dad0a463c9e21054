"""The registry: consistent in itself, whatever the values."""

import re

import pytest

from toeline.results import variables as registry
from toeline.results.variables import GROWING_DIMENSIONS, VARIABLES, end_state, fixed, growing

EVERY = pytest.mark.parametrize("variable", VARIABLES.values(), ids=lambda variable: variable.name)

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


@EVERY
def test_companions_exist_on_the_same_dimensions(variable):
    assert all(VARIABLES[companion].dimensions == variable.dimensions for companion in variable.companions)


@EVERY
def test_flags_are_single_bytes_with_words_that_cf_allows(variable):
    assert all(re.fullmatch(r"[A-Za-z0-9_.+@-]+", word) for word in variable.flags)
    assert not variable.flags or variable.dtype == "i1"


@EVERY
def test_standard_names_are_real(variable):
    assert variable.standard_name is None or variable.standard_name in CF_STANDARD_NAMES


@EVERY
def test_numbers_carry_a_unit_and_words_carry_none(variable):
    is_number = variable.dtype not in ("text", "i1") and variable.name != "order_value"  # whose unit differs by row
    assert (variable.unit is not None) == is_number


@EVERY
def test_volumes_and_times_are_double_precision(variable):
    assert variable.dtype == "f8" or variable.unit not in ("m3", registry.CLOCK)


def test_gate_discharge_is_qualified():
    assert "discharge_quality" in VARIABLES["gate_discharge"].companions

"""From blocks to stored rows: nothing missing, nothing unknown, clocks in the right unit."""

from datetime import datetime

import numpy as np
import pytest

from toeline.results.encoding import cf_attributes, rows_by_dimension, static_values, stored
from toeline.results.variables import VARIABLES


@pytest.fixture
def block(invented_run):
    return next(invented_run().blocks(10))


def test_a_block_may_carry_rows_along_time_alone(block):
    along_time = {name: values for name, values in block.items() if VARIABLES[name].dimensions[0] == "time"}
    assert set(rows_by_dimension(along_time)) == {"time"}


def test_a_missing_variable_is_named(block):
    del block["gate_opening"]
    with pytest.raises(ValueError, match="lacks \\['gate_opening'\\]"):
        rows_by_dimension(block)


def test_an_unknown_variable_is_named(block):
    with pytest.raises(ValueError, match="gate_colour"):
        rows_by_dimension(block | {"gate_colour": np.zeros(10)})


def test_rows_of_unequal_number_are_refused(block):
    with pytest.raises(ValueError, match="differ in number"):
        rows_by_dimension(block | {"demand": block["demand"][:-1]})


def test_seconds_in_place_of_milliseconds_are_refused():
    with pytest.raises(ValueError, match="whole milliseconds"):
        stored(VARIABLES["time"], np.array([0.0, 60.0]))


def test_stored_rows_do_not_follow_the_block(block):
    rows = rows_by_dimension(block)["time"]
    before = rows["pool_volume"].copy()
    block["pool_volume"][:] = -1.0
    np.testing.assert_array_equal(rows["pool_volume"], before)


def test_a_missing_fixed_variable_is_named(invented_run):
    static = invented_run().static()
    del static["bank_level"]
    with pytest.raises(ValueError, match="bank_level"):
        static_values(static)


def test_a_start_without_offset_is_refused():
    with pytest.raises(ValueError, match="offset"):
        cf_attributes(VARIABLES["time"], datetime(2031, 5, 4), [])


def test_surface_names_become_words(invented_run):
    attributes = cf_attributes(VARIABLES["surface"], invented_run().start, ["apron", "rip rap", "Kies, grob"])
    assert attributes["flag_meanings"] == "apron rip_rap Kies_grob"

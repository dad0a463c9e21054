"""What the time loop writes bears the names and codes of the registry."""

import pytest

from toeline.engine import gate_motion, rows
from toeline.hydraulics import hydraulic_jump, jump_location, underflow_gate
from toeline.results import variables
from toeline.results.variables import VARIABLES, growing

OUTPUT = (
    rows.GATE_OUTPUT,
    rows.BAY_OUTPUT,
    rows.POOL_OUTPUT,
    rows.OFFTAKE_OUTPUT,
    rows.ESCAPE_OUTPUT,
    rows.GAUGE_OUTPUT,
    rows.CANAL_OUTPUT,
)


def test_every_row_of_output_is_known_and_complete():
    names = {name for kind in OUTPUT for name in kind.names}
    assert names == {variable.name for variable in growing("time")}
    assert {*rows.PROFILE_OUTPUT.names, "profile_time"} == {variable.name for variable in growing("profile_time")}


def test_flags_are_bytes_in_both():
    for kind in OUTPUT:
        for name in kind.names:
            assert (kind[name].kind == "i" and kind[name].itemsize == 1) == bool(VARIABLES[name].flags), name


@pytest.mark.parametrize(
    ("words", "codes"),
    [
        (
            variables.FLOW_STATES,
            "CLOSED FREE NEAR_MODULAR_LIMIT DROWNED CLEAR_OF_WATER CLEAR_AND_DROWNED OVERTOPPED REVERSE",
        ),
        (
            variables.DISCHARGE_QUALITIES,
            "QUALITY_GOOD QUALITY_NEAR_LIMIT QUALITY_LIP_NEAR_SURFACE QUALITY_VERY_DROWNED QUALITY_REVERSE "
            "QUALITY_UNEVEN_BAYS",
        ),
        (
            variables.JUMP_STATES,
            "JUMP_NONE JUMP_DROWNED JUMP_ON_APRON JUMP_ON_PROTECTION JUMP_BEYOND_PROTECTION JUMP_SWEPT_OUT",
        ),
        (variables.JUMP_KINDS, "NO_JUMP UNDULAR WEAK OSCILLATING STEADY STRONG"),
        (variables.LENGTH_QUALITIES, "LENGTH_NOT_DEFINED LENGTH_GOOD LENGTH_POORLY_KNOWN"),
        (variables.ORDER_STATUSES, "ACCEPTED TRIMMED REFUSED REPLACED"),
    ],
)
def test_codes_stand_in_the_order_of_the_words(words, codes):
    homes = (underflow_gate, jump_location, hydraulic_jump, gate_motion)
    values = [next(getattr(home, code) for home in homes if hasattr(home, code)) for code in codes.split()]
    assert values == list(range(len(words)))


def test_kinds_of_order():
    assert gate_motion.KINDS == variables.ORDER_KINDS

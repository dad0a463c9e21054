"""What every numeric key of the input files measures."""

import pytest

from toeline.scenario.setting_dimensions import setting_dimensions


@pytest.mark.parametrize(
    ("key", "dimension"),
    [
        ("canal.pools.*.bed_level", "length"),
        ("canal.pools.*.stretches.*.length", "length"),
        ("canal.sections.*.bottom_width", "length"),
        ("canal.gates.*.hoist_speed", "speed"),
        ("canal.gates.*.leaf_weir_coefficient", "weir coefficient"),
        ("canal.tail.level", "length"),
        ("day.period.length_ms", "duration"),
        ("day.inflow", "discharge"),
        ("day.deliveries.*", "discharge"),
        ("day.losses.seepage.*", "rate of loss"),
        ("day.start.openings.*", "length"),
    ],
)
def test_a_key_has_its_dimension(key, dimension):
    assert setting_dimensions()[key] == dimension


@pytest.mark.parametrize("key", ["canal.sections.*.roughness", "canal.gates.*.bays", "canal.gates.*.name"])
def test_what_has_no_dimension_is_left_out(key):
    assert key not in setting_dimensions()

"""Values of findings, written for people."""

import pytest

from toeline.report.quantities import quantity_words
from toeline.units import Display, UnitSystem


@pytest.mark.parametrize(
    ("value", "unit", "words"),
    [
        (1.234, "m", "1.23 m"),
        (1.234, "m s-1", "1.23 m/s"),
        (1.2344, "m3 s-1", "1.234 m3/s"),
        (1234.4, "m3", "1234 m3"),
        (1.5, "h", "1 h 30 min"),
        (90.0, "s", "2 min"),
        (3.0, "1", "3"),
        (0.054668, "1", "0.05467"),
        (1.4e-16, "1", "0"),
        (-1e-9, "1", "0"),
        (12345.6, "1", "12346"),
        (2.5, "W", "2.5 W"),
        (float("nan"), "m", "-"),
    ],
)
def test_quantity_words(value, unit, words):
    assert quantity_words(value, unit, Display(UnitSystem.metric)) == words


def test_us_customary():
    assert quantity_words(0.3048, "m", Display(UnitSystem.us_customary)) == "1.00 ft"

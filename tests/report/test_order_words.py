"""Orders in words."""

import pytest

from toeline.report.order_words import order_words
from toeline.units import Display, UnitSystem


@pytest.mark.parametrize(
    ("kind", "value", "words"),
    [
        ("opening", 0.8, "open to 0.80 m"),
        ("opening", 0.0, "close"),
        ("by", 0.1, "open by 0.10 m"),
        ("by", -0.1, "close by 0.10 m"),
        ("discharge", 7.5, "pass 7.500 m3/s"),
    ],
)
def test_an_order_says_what_is_to_be_done(kind, value, words):
    assert order_words(kind, value, Display(UnitSystem.metric)) == words

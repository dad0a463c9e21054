"""Unit spellings, exact factors, and values written for people."""

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from toeline.units import (
    FILE_UNITS,
    SPELLINGS,
    Display,
    UnitSystem,
    parse_quantity,
    quantity_text,
)

METRIC, US = UnitSystem.metric, UnitSystem.us_customary

# International yard and pound agreement, 1959: 1 yard = 0.9144 m exactly; 1 mile = 1760 yards, 1 acre = 4840 square
# yards, from memory. The rest follows by multiplication.
FOOT = Fraction(9144, 10_000) / 3
INCH = FOOT / 12
ACRE = 4840 * (3 * FOOT) ** 2
DAY, HOUR, MINUTE = 86_400, 3600, 60
EXACT = {
    ("length", "ft"): FOOT,
    ("length", "in"): INCH,
    ("length", "mi"): 1760 * 3 * FOOT,
    ("length", "km"): Fraction(1000),
    ("length", "cm"): Fraction(1, 100),
    ("length", "mm"): Fraction(1, 1000),
    ("area", "ft2"): FOOT**2,
    ("area", "acre"): ACRE,
    ("area", "ha"): Fraction(10_000),
    ("area", "km2"): Fraction(1_000_000),
    ("volume", "L"): Fraction(1, 1000),
    ("volume", "ML"): Fraction(1000),
    ("volume", "ft3"): FOOT**3,
    ("volume", "acre-ft"): ACRE * FOOT,
    ("discharge", "L/s"): Fraction(1, 1000),
    ("discharge", "m3/h"): Fraction(1, HOUR),
    ("discharge", "m3/day"): Fraction(1, DAY),
    ("discharge", "ML/day"): Fraction(1000, DAY),
    ("discharge", "ft3/s"): FOOT**3,
    ("discharge", "cfs"): FOOT**3,
    ("discharge", "acre-ft/day"): ACRE * FOOT / DAY,
    ("velocity", "ft/s"): FOOT,
    ("speed", "ft/s"): FOOT,
    ("speed", "m/min"): Fraction(1, MINUTE),
    ("speed", "cm/min"): Fraction(1, 100 * MINUTE),
    ("speed", "mm/min"): Fraction(1, 1000 * MINUTE),
    ("speed", "cm/s"): Fraction(1, 100),
    ("speed", "mm/s"): Fraction(1, 1000),
    ("speed", "ft/min"): FOOT / MINUTE,
    ("speed", "in/min"): INCH / MINUTE,
    ("duration", "min"): Fraction(MINUTE),
    ("duration", "h"): Fraction(HOUR),
    ("duration", "d"): Fraction(DAY),
    ("discharge per length", "ft2/s"): FOOT**2,
    ("rate of loss", "mm/day"): Fraction(1, 1000 * DAY),
    ("rate of loss", "mm/h"): Fraction(1, 1000 * HOUR),
    ("rate of loss", "m/day"): Fraction(1, DAY),
    ("rate of loss", "in/day"): INCH / DAY,
    ("rate of loss", "in/h"): INCH / HOUR,
    ("rate of loss", "ft/day"): FOOT / DAY,
}


@pytest.mark.parametrize(("dimension", "spelling"), EXACT)
def test_factor_is_the_exact_one(dimension, spelling):
    assert SPELLINGS[dimension][spelling] == pytest.approx(float(EXACT[dimension, spelling]), rel=2e-16)


def test_every_spelling_has_an_exact_factor_or_is_si():
    unchecked = {
        spelling
        for dimension, spellings in SPELLINGS.items()
        for spelling, factor in spellings.items()
        if factor != 1.0 and (dimension, spelling) not in EXACT and dimension != "velocity"
    }

    assert unchecked == {"ft^0.5/s"}
    assert SPELLINGS["weir coefficient"]["ft^0.5/s"] ** 2 == pytest.approx(float(FOOT), rel=1e-15)


IN_UDUNITS = {"cfs": "ft3/s", "mi": "mile", "in": "inch", "in/min": "inch/min", "in/day": "inch/day"}
SI = {
    "length": "m",
    "area": "m2",
    "volume": "m3",
    "discharge": "m3/s",
    "discharge per length": "m2/s",
    "duration": "s",
}  # others: m/s


@pytest.mark.parametrize("dimension", [dimension for dimension in SPELLINGS if dimension != "weir coefficient"])
def test_factor_agrees_with_udunits(dimension):
    cf_units = pytest.importorskip("cf_units")
    for spelling, factor in SPELLINGS[dimension].items():
        unit = cf_units.Unit(IN_UDUNITS.get(spelling, spelling.replace("acre-ft", "acre_foot")))
        survey_foot = 1e-5 if "acre" in spelling else 0.0  # its acre is of the US survey foot, and rounded
        assert unit.convert(1.0, cf_units.Unit(SI.get(dimension, "m/s"))) == pytest.approx(
            factor, rel=1e-12 + survey_foot
        )


@pytest.mark.parametrize(
    ("value", "dimension", "system", "si"),
    [
        (2.5, "length", METRIC, 2.5),
        (10, "length", US, 3.048),
        ("12 ft", "length", METRIC, 3.6576),
        ("0.15 m/min", "speed", US, 0.0025),
        ("350 ft3/s", "discharge", METRIC, 9.9108963072),
        ("350cfs", "discharge", METRIC, 9.9108963072),
        ("2 m³/s", "discharge", US, 2.0),
        (" -1.5e1 cm ", "length", US, -0.15),
        ("90 min", "duration", METRIC, 5400.0),
        (0.3, "speed", METRIC, 0.005),
        (1, "velocity", US, 0.3048),
        (4, "rate of loss", US, 4 * 0.0254 / 86_400),
    ],
)
def test_a_number_is_in_the_unit_of_the_file_and_text_in_its_own(value, dimension, system, si):
    assert parse_quantity(value, dimension, system) == pytest.approx(si, rel=1e-15)


@pytest.mark.parametrize(
    ("value", "dimension", "message"),
    [
        (
            "6 yd",
            "length",
            'found "6 yd"; allowed: a finite number in m, or text such as "2.5 m" with one of the units '
            "m, km, cm, mm, ft, in, mi",
        ),
        (
            "6",
            "length",
            'found "6"; allowed: a finite number in m, or text such as "2.5 m" with one of the units '
            "m, km, cm, mm, ft, in, mi",
        ),
        (90, "duration", 'found 90; allowed: text such as "15 min" with one of the units s, min, h, d'),
        ("0,5 h", "duration", 'found "0,5 h"; allowed: text such as "15 min" with one of the units s, min, h, d'),
    ],
)
def test_a_refusal_names_the_allowed_units(value, dimension, message):
    with pytest.raises(ValueError, match=r"^found ") as raised:
        parse_quantity(value, dimension, METRIC)

    assert str(raised.value) == message


@pytest.mark.parametrize("value", [math.nan, math.inf, 10**400, True, "1e400 m", "", "m", "nan m", "1 m 2 m"])
def test_what_is_no_finite_quantity_is_refused(value):
    with pytest.raises(ValueError, match="; allowed: a finite number in m"):
        parse_quantity(value, "length", METRIC)


@given(
    st.floats(-1e6, 1e6),
    st.sampled_from([(dimension, spelling) for dimension in SPELLINGS for spelling in SPELLINGS[dimension]]),
)
def test_text_with_a_unit_means_number_times_factor(number, unit):
    dimension, spelling = unit

    assert parse_quantity(f"{number!r} {spelling}", dimension, METRIC) == number * SPELLINGS[dimension][spelling]


@given(st.floats(-9999, 9999), st.sampled_from(sorted(FILE_UNITS)), st.sampled_from(UnitSystem))
def test_quantity_text_reads_back_to_four_decimals(number, dimension, system):
    unit = SPELLINGS[dimension][FILE_UNITS[dimension][system]]

    text = quantity_text(number * unit, dimension, system)

    assert parse_quantity(text, dimension, system) / unit == pytest.approx(number, abs=0.5001e-4)


@pytest.mark.parametrize(
    ("seconds", "text"),
    [(86_400, "24 h"), (5400, "1.5 h"), (900, "15 min"), (90, "1.5 min"), (100, "100 s"), (0.5, "0.5 s"), (0, "0 s")],
)
def test_durations_are_written_in_a_unit_that_fits(seconds, text):
    assert quantity_text(seconds, "duration", METRIC) == text


@pytest.mark.parametrize(
    ("system", "what", "value", "text"),
    [
        (METRIC, "level", 103.6249, "103.62 m"),
        (US, "level", 103.6249, "339.98 ft"),
        (METRIC, "depth", 2.005001, "2.01 m"),
        (METRIC, "opening", -0.0001, "0.00 m"),
        (METRIC, "opening", 0.4, "0.40 m"),
        (METRIC, "opening", 0.4441, "0.444 m"),
        (METRIC, "amount", 0.0042, "under 0.01 m"),
        (US, "amount", 0.001, "under 0.01 ft"),
        (METRIC, "amount", 0.08, "0.08 m"),
        (METRIC, "distance", 30.43, "30.4 m"),
        (US, "distance", 30.48, "100 ft"),
        (METRIC, "setting", 0.4374, "0.437 m"),
        (US, "setting", 0.4374, "1.44 ft"),
        (METRIC, "length", 1234.5, "1234.50 m"),
        (METRIC, "level_difference", 0.0234, "2.3 cm"),
        (US, "level_difference", 0.0234, "0.08 ft"),
        (METRIC, "level_difference", math.nan, "-"),
        (METRIC, "discharge", 8.12345, "8.123 m3/s"),
        (US, "discharge", 8.12345, "286.9 ft3/s"),
        (METRIC, "volume", 123456.7, "123,457 m3"),
        (US, "volume", 1233.48183754752, "1.00 acre-ft"),
        (METRIC, "velocity", 0.876, "0.88 m/s"),
        (US, "velocity", 0.3048, "1.00 ft/s"),
        (METRIC, "speed", 0.0025, "0.150 m/min"),
        (US, "speed", 0.00254, "0.500 ft/min"),
        (METRIC, "rate_of_loss", 0.025 / 86_400.0, "25.0 mm/day"),
        (US, "rate_of_loss", 0.0254 / 86_400.0, "1.00 in/day"),
        (METRIC, "level", math.nan, "-"),
    ],
)
def test_display_writes_values_for_people(system, what, value, text):
    assert getattr(Display(system), what)(value) == text

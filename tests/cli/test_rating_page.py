"""The rating of a gate as a page and as a CSV file."""

import csv
import math
from dataclasses import dataclass

import pytest

from toeline.cli.rating_page import rating_page, write_csv
from toeline.results.variables import FLOW_STATES
from toeline.units import Display, UnitSystem


@dataclass(frozen=True)
class Row:
    headwater_level: float
    tailwater_level: float
    opening: float
    discharge: float
    flow_state: str
    modular_limit_level: float = 102.31
    protection_limit_level: float = math.nan
    quality: str = "good"


ROWS = [
    Row(103.6, 101.8, 0.4, 4.1234, "free"),
    Row(103.6, 102.3, 0.4, 4.05, "near_modular_limit", quality="near_modular_limit"),
    Row(103.6, 101.8, 0.5, 5.2, "free", 102.5, 101.6),
    Row(103.6, 102.3, 0.5, 5.2, "free", 102.5, 101.6),
]


def test_discharges_stand_by_opening_and_tailwater_with_both_limits():
    page = rating_page(ROWS, "Middle check, Alder branch", Display(UnitSystem.metric), 80)
    assert "HEADWATER 103.60 m\n" in page
    assert "  opening   limit  leaves    101.80    102.30\n" in page
    assert "     0.40  102.31       -  4.123 f   4.050 n?\n" in page
    assert "     0.50  102.50  101.60  5.200 f   5.200 f\n" in page


def test_the_page_explains_the_marks_that_it_uses_and_no_others():
    page = rating_page(ROWS, "Middle check, Alder branch", Display(UnitSystem.metric), 80)
    assert "f free; n near modular limit; ? discharge poorly known." in page
    assert "overtopped" not in page


def test_every_state_of_the_flow_has_a_mark_of_its_own():
    rows = [Row(103.6, 101.0 + place, 0.4, 1.0, state) for place, state in enumerate(FLOW_STATES)]
    page = rating_page(rows, "Middle check", Display(UnitSystem.metric), 80)
    legend = " ".join(page.split())
    assert [state for state in FLOW_STATES if state.replace("_", " ") not in legend] == []


@pytest.mark.parametrize("width", [40, 80])
def test_the_page_keeps_to_its_width(width):
    rows = [Row(103.6, 101.0 + place / 10, 0.4, 1.0, "free") for place in range(11)]
    page = rating_page(rows, "Middle check, Alder branch", Display(UnitSystem.us_customary), width)
    assert max(len(line) for line in page.splitlines()) <= width


def test_the_csv_file_names_its_units_and_leaves_out_what_is_not_there(tmp_path):
    write_csv(tmp_path / "rating.csv", ROWS, UnitSystem.us_customary)
    with (tmp_path / "rating.csv").open(newline="") as file:
        first, *_ = list(csv.DictReader(file))
    assert float(first["discharge [ft3/s]"]) == pytest.approx(4.1234 / 0.3048**3, abs=1e-4)
    assert float(first["opening [ft]"]) == pytest.approx(0.4 / 0.3048, abs=1e-4)
    assert first["protection_limit_level [ft]"] == ""
    assert first["flow_state"] == "free"

"""Order sheets to print, read back with another library than the one that writes them."""

import io
import re
from datetime import UTC, datetime

import numpy as np
import pytest
from pypdf import PdfReader
from pypdf.generic import ContentStream

from toeline.constants import FIELD_CAUTION
from toeline.errors import UsageError
from toeline.report.order_sheet import order_sheets
from toeline.report.order_sheet_pdf import sheet_pdf

CREATED = datetime(2031, 5, 3, 18, tzinfo=UTC)
SMALLEST_LETTERS = 11.0
"""pt: what can be read at arm's length at a gate (common practice, no source)."""
SMALLEST_BLANK = 8.0 / 25.4 * 72.0
"""pt: 8 mm, the height of a handwritten line (common practice, no source)."""
POINT = 0.01
PAPERS = {"A4": (210.0 / 25.4 * 72.0, 297.0 / 25.4 * 72.0), "Letter": (8.5 * 72.0, 11.0 * 72.0)}
"""Width and height in pt. A4: ISO 216, 210 by 297 mm. Letter: 8.5 by 11 in (ANSI/ASME Y14.1, size A)."""


def printed(run, paper: str = "A4", place: int = 0) -> PdfReader:
    return PdfReader(io.BytesIO(sheet_pdf(order_sheets(run)[place], paper, CREATED)))


def words(page) -> str:
    return " ".join(page.extract_text().split())


def operations(reader: PdfReader):
    for page in reader.pages:
        yield from ContentStream(page.get_contents(), reader).operations


def texts(pages) -> list[tuple[str, float, float, float]]:
    """Every piece of text of some pages with its size, and where it begins [pt from the left and from the bottom]."""
    found: list[tuple[str, float, float, float]] = []

    def note(text, matrix, text_matrix, font, size):
        if text.strip():
            found.append((text, size, text_matrix[4] + matrix[4], text_matrix[5] + matrix[5]))

    for page in pages:
        page.extract_text(visitor_text=note)
    return found


@pytest.mark.parametrize("paper", PAPERS)
def test_every_page_has_the_size_of_the_paper(ordered_run, paper):
    for page in printed(ordered_run(5), paper).pages:
        assert (float(page.mediabox.width), float(page.mediabox.height)) == pytest.approx(PAPERS[paper], abs=POINT)


@pytest.mark.parametrize("paper", PAPERS)
def test_no_letter_is_smaller_than_11_pt(ordered_run, paper):
    assert min(size for _, size, _, _ in texts(printed(ordered_run(5), paper).pages)) >= SMALLEST_LETTERS


@pytest.mark.parametrize("paper", PAPERS)
def test_forty_orders_each_appear_once_over_numbered_pages(ordered_run, paper):
    reader = printed(ordered_run(14, **forty()), paper)
    text = " ".join(words(page) for page in reader.pages)
    assert re.findall(r"(\d+)\. \d\d:\d\d Middle check OPEN", text) == [str(number) for number in range(1, 41)]
    for number, page in enumerate(reader.pages, start=1):
        assert f"page {number} of {len(reader.pages)}" in words(page)


def forty() -> dict[str, object]:
    """Forty orders, five minutes apart."""
    seconds = 1800.0 + 300.0 * np.arange(40)
    return {
        "order_time": seconds,
        "order_completed": seconds + 60.0,
        "order_gate": np.full(40, "Middle check", object),
        "order_source": np.full(40, "schedule", object),
        "order_kind": np.zeros(40),
        "order_value": np.full(40, 0.5),
        "order_opening_before": np.full(40, 0.4),
        "order_opening_after": np.full(40, 0.5),
        "order_status": np.zeros(40),
        "order_reason": np.full(40, "", object),
    }


def test_every_page_carries_the_heading_the_units_and_the_caution(ordered_run):
    for page in printed(ordered_run(5)).pages:
        text = words(page)
        for expected in (
            "Upper beat",
            "Orders of Alder branch: A short morning",
            "Sunday 2031-05-04",
            "times of UTC+02:00",
            "plan raise; revision 0; run 00000000; Toeline 0.1.0; metric units: m, m3/s",
            FIELD_CAUTION,
        ):
            assert expected in text


@pytest.mark.parametrize("paper", PAPERS)
def test_nothing_is_printed_outside_the_margins(ordered_run, paper):
    name = "Łąka–Ängström–Ωμέγα–Щёкино " * 2 + "with a very long name"
    reader = printed(ordered_run(6, gate_gatekeeper=np.array([name, name], object)), paper)
    width, height = PAPERS[paper]
    margin = 10.0 / 25.4 * 72.0
    places = [(x, y) for _, _, x, y in texts(reader.pages)]
    assert all(margin <= x <= width - margin and margin <= y <= height - margin for x, y in places)
    boxes = [[float(value) for value in operands] for operands, operator in operations(reader) if operator == b"re"]
    assert all(margin <= x and x + box <= width - margin for x, _, box, _ in boxes)


def test_blanks_are_high_enough_to_write_in(ordered_run):
    boxes = [operands for operands, operator in operations(printed(ordered_run(3))) if operator == b"re"]
    heights = [abs(float(height)) for _, _, _, height in boxes]
    readings, signatures, once = 2 * 2, 3, 3
    assert sum(height >= SMALLEST_BLANK for height in heights) >= 3 * (readings + signatures) + once


def test_nothing_on_the_page_depends_on_colour(ordered_run):
    colours = [operands for operands, operator in operations(printed(ordered_run(3))) if operator in (b"rg", b"RG")]
    assert all(len({float(value) for value in colour}) == 1 for colour in colours)


def test_a_sheet_without_orders_says_so(ordered_run):
    reader = printed(ordered_run(), place=1)
    assert len(reader.pages) == 1
    assert "No orders for Last check." in words(reader.pages[0])


def test_a_long_reason_is_wrapped_and_whole(ordered_run):
    reason = "; ".join(f"reason {number} of the planner" for number in range(1, 30))
    run = ordered_run(1, order_status=np.array([1]), order_reason=np.array([reason], object))
    assert reason in " ".join(words(page) for page in printed(run).pages)


def test_names_in_other_letters_are_printed(ordered_run):
    run = ordered_run(gate_gatekeeper=np.array(["Łąka, Ängström, Ωμέγα, Щёкино", ""], object))
    assert "Łąka, Ängström, Ωμέγα, Щёкино" in words(printed(run).pages[0])


def test_letters_that_the_font_lacks_are_named(ordered_run):
    run = ordered_run(gate_gatekeeper=np.array(["水門", ""], object))
    with pytest.raises(UsageError, match=r"lacks 水 門.*--format text"):
        printed(run)


def test_equal_sheets_are_equal_files(ordered_run):
    sheet = order_sheets(ordered_run())[0]
    assert sheet_pdf(sheet, "A4", CREATED) == sheet_pdf(sheet, "A4", CREATED)


def test_long_times_and_names_of_gauges_do_not_run_into_each_other(ordered_run):
    zone = {"zone": "America/Los_Angeles"}  # where this order comes after midnight, and is told with its date
    run = ordered_run(1, order_time=np.array([12_600.0]), order_completed=np.array([12_690.0]), attributes=zone)
    page = printed(run).pages[0]
    lines = [(round(x), y) for _, _, x, y in texts([page])]
    together = [sorted(y for x, y in lines if x == left) for left in {x for x, _ in lines}]
    assert "before, 2031-05-04" in words(page)
    assert min(np.diff(column).min(initial=np.inf) for column in together) >= SMALLEST_LETTERS

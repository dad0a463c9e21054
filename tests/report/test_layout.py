"""Plain text for a page of a given width."""

import pytest

from toeline.report.layout import counted, paragraph, table

HEADER = ("", "pool", "level")
ROWS = [("Orchard check", "Orchard pool", "103.62 m"), ("Mill check", "Mill pool", "-0.40 m")]


def test_words_stand_to_the_left_and_numbers_to_the_right():
    assert table(HEADER, ROWS, 80).splitlines() == [
        "                 pool             level",
        "  Orchard check  Orchard pool  103.62 m",
        "  Mill check     Mill pool      -0.40 m",
    ]


def test_a_table_wider_than_the_page_becomes_one_block_a_row():
    assert table(HEADER, ROWS[:1], 38).splitlines() == [
        "  Orchard check",
        "    pool: Orchard pool",
        "    level: 103.62 m",
    ]


@pytest.mark.parametrize("width", [20, 40, 80])
def test_a_paragraph_keeps_to_the_page(width):
    filled = paragraph("the jump stands beyond the protected floor " * 5, width)
    assert max(len(line) for line in filled.splitlines()) <= width


def test_a_table_without_rows_is_its_header():
    assert table(("gate", "level"), [], 80) == "  gate  level"


@pytest.mark.parametrize(("count", "words"), [(0, "0 orders"), (1, "1 order"), (2, "2 orders")])
def test_counted(count, words):
    assert counted(count, "order") == words

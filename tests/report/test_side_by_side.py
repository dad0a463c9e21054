"""Runs side by side as a table."""

import pytest

from toeline.report.side_by_side import Group, side_by_side

GROUPS = [
    Group(
        "gate travel",
        (("Mill check", ("0.78 m ", "0.18 m*", "0.20 m ")), ("Tail gate", ("0.10 m*", "0.30 m ", "-"))),
    ),
    Group("a title that is longer than every row", (("the canal", ("1 ", "2*", "1 ")),)),
]
COLUMNS = ("A", "B", "C")


def lines(width: int, keep: int = 1) -> list[str]:
    return "\n".join(side_by_side(GROUPS, COLUMNS, width, keep=keep)).splitlines()


def test_titles_stand_above_their_rows_and_take_no_column():
    assert lines(45) == [
        "                      A        B        C",
        "  gate travel",
        "    Mill check  0.78 m   0.18 m*  0.20 m",
        "    Tail gate   0.10 m*  0.30 m         -",
        "  a title that is longer than every row",
        "    the canal        1        2*       1",
    ]


def test_columns_that_find_no_room_follow_beside_the_first():
    page = lines(34)
    assert [line.split() for line in page if line.split()[0] == "A"] == [["A", "B"], ["A", "C"]]
    assert page.count("  gate travel") == 2


def test_without_a_kept_column_each_stands_once():
    assert [line.split() for line in lines(34, keep=0) if line.split()[0] in COLUMNS] == [["A", "B"], ["C"]]


def test_on_a_narrow_page_every_row_is_a_block():
    assert lines(24)[:4] == ["  gate travel, Mill", "    check", "    A: 0.78 m", "    B: 0.18 m*"]


@pytest.mark.parametrize("width", [24, 34, 45, 80])
def test_every_cell_is_told_and_no_line_is_too_wide(width):
    page = lines(width)
    assert max(map(len, page)) <= width
    for cell in ("0.78 m", "0.18 m*", "0.20 m", "0.30 m"):
        assert any(cell in line for line in page)

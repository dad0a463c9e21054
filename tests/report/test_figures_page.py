"""The page of the figures is what the style says."""

from pathlib import Path

from toeline.report.figures_page import figures_page

PAGE = Path(__file__).parents[2] / "docs" / "figures.md"


def test_the_page_is_in_step():
    assert PAGE.read_text(encoding="utf-8") == figures_page()

"""The reference page in docs is the registry, word for word."""

from pathlib import Path

from toeline.results.reference_page import reference_page

PAGE = Path(__file__).parents[2] / "docs" / "output_reference.md"


def test_the_page_is_in_step_with_the_registry():
    remedy = "write it anew: python -m toeline.results.reference_page > docs/output_reference.md"
    assert PAGE.read_text(encoding="utf-8") == reference_page(), remedy

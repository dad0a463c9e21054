"""The README keeps to what is there."""

import re
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def test_ci_does_exactly_the_two_commands():
    commands = re.findall(r"^python3 -m venv .*$", README, re.MULTILINE)
    script = (ROOT / ".ci" / "run").read_text(encoding="utf-8")
    assert re.findall(r'="(python3 -m venv .*)"$', script, re.MULTILINE) == commands
    assert len(commands) == 2


def test_every_page_that_the_pages_link_to_is_there():
    pages = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *(ROOT / "docs").glob("*.md")]
    assert [
        f"{page.name}: {link}"
        for page in pages
        for link in re.findall(r"\]\(([^)#:]+)\)", page.read_text(encoding="utf-8"))
        if not (page.parent / link).exists()
    ] == []

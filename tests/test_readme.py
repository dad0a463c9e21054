"""The README keeps to what is there."""

import re
import shlex
from pathlib import Path

import pytest
from click.testing import CliRunner

from toeline.cli.main import main

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


def session() -> list[tuple[str, list[str]]]:
    """The commands of the README's session, each with the lines of its output that are shown."""
    (block,) = re.findall(r"^```console\n(.*?)^```$", README, re.MULTILINE | re.DOTALL)
    _, *commands = re.split(r"^\$ ", block, flags=re.MULTILINE)
    return [(first, shown) for first, *shown in (command.splitlines() for command in commands)]


def words(text: str) -> str:
    """The text without its numbers and the breaks of its lines."""
    return " ".join(re.sub(r"[\d.,:]*\d", "#", text).split())


@pytest.mark.parametrize(("command", "shown"), session(), ids=[command for command, _ in session()])
def test_the_session_is_what_the_commands_say(command, shown, tmp_path, monkeypatch):
    (tmp_path / "scenarios").symlink_to(ROOT / "scenarios", target_is_directory=True)
    monkeypatch.chdir(tmp_path)
    result = CliRunner().invoke(main, shlex.split(command)[1:])
    assert result.exit_code == 0
    said = words(result.output)
    assert [line for line in shown if line != "[...]" and words(line) not in said] == []

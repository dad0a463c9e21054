"""A good pair of input files in the working folder, to be spoilt one place at a time."""

import shutil
from pathlib import Path

import pytest

from toeline.errors import ScenarioError
from toeline.scenario import load_scenario

FILES = Path(__file__).with_name("files")


class Folder:
    """The working folder of a test with its input files."""

    def replace(self, file: str, old: str, new: str) -> None:
        """Replace a piece of text that stands once in a file."""
        path = Path(file)
        text = path.read_text(encoding="utf-8")
        assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times in {file}"
        path.write_text(text.replace(old, new), encoding="utf-8")

    def messages(self, plan: str = "proposed") -> list[str]:
        """Give the messages of all faults found on loading the day."""
        with pytest.raises(ScenarioError) as raised:
            load_scenario("day.toml", plan=plan)
        return str(raised.value).splitlines()


def _copied(name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Folder:
    shutil.copytree(FILES / name, tmp_path, dirs_exist_ok=True)
    monkeypatch.chdir(tmp_path)
    return Folder()


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Folder:
    """A metric canal and day that load."""
    return _copied("good", tmp_path, monkeypatch)


@pytest.fixture
def us_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Folder:
    """A canal and day in US customary units that load."""
    return _copied("us_customary", tmp_path, monkeypatch)

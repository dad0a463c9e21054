"""The digest of the sources that the numbers of a run depend on."""

import shutil
from pathlib import Path

import pytest

from toeline.results import sources


@pytest.fixture
def digest(tmp_path, monkeypatch):
    """A copy of the package, and its digest as it stands."""
    package = tmp_path / "toeline"
    shutil.copytree(Path(sources.__file__).parent.parent, package, ignore=shutil.ignore_patterns("__pycache__"))
    monkeypatch.setattr(sources, "__file__", str(package / "results" / "sources.py"))
    return package, sources.source_digest.__wrapped__


@pytest.mark.parametrize("name", ["engine/step.py", "rules/hold_volume.py", "simulate.py", "constants.py"])
def test_an_edit_of_what_numbers_depend_on_changes_it(digest, name):
    package, of_package = digest
    before = of_package()
    (package / name).write_text((package / name).read_text() + "\n")
    assert of_package() != before


def test_an_edit_of_what_reads_the_finished_file_does_not(digest):
    package, of_package = digest
    before = of_package()
    (package / "report" / "style.py").write_text("")
    assert of_package() == before


def test_it_is_the_same_wherever_the_package_lies(digest):
    _, of_package = digest
    assert of_package() == sources.source_digest()

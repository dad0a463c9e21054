"""The starter files: they load as they are, and are never written over others."""

import pytest

from toeline.errors import UsageError
from toeline.scenario import load_scenario, write_starter
from toeline.scenario.starter import STARTER_FILES, starter_text


def test_the_starter_files_load_as_they_are(tmp_path):
    write_starter(tmp_path)

    scenario = load_scenario(tmp_path / "day.toml")

    assert (len(scenario.canal.pools), len(scenario.canal.gates), scenario.plan) == (2, 2, "proposed")


def test_a_missing_folder_is_made(tmp_path):
    paths = write_starter(tmp_path / "new" / "canal")

    assert [path.read_text(encoding="utf-8") for path in paths] == [starter_text(name) for name in STARTER_FILES]


@pytest.mark.parametrize("name", STARTER_FILES)
def test_nothing_is_written_where_one_of_the_files_exists(tmp_path, name):
    (tmp_path / name).write_text("mine", encoding="utf-8")

    with pytest.raises(UsageError) as raised:
        write_starter(tmp_path)

    assert str(raised.value) == f"{tmp_path / name}: this file exists already; nothing was written"
    assert [path.name for path in tmp_path.iterdir()] == [name]
    assert (tmp_path / name).read_text(encoding="utf-8") == "mine"


def test_a_file_in_place_of_the_folder(tmp_path):
    (tmp_path / "file").write_text("", encoding="utf-8")

    with pytest.raises(UsageError) as raised:
        write_starter(tmp_path / "file")

    assert str(raised.value) == f"{tmp_path / 'file'}: cannot write there: file exists"

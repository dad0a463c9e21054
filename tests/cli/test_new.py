"""`toeline new`."""


def test_the_starter_is_written_and_free_of_faults(tmp_path, call):
    result = call("new", str(tmp_path / "mine"))
    assert result.exit_code == 0
    assert "toeline run" in result.stdout
    assert call("check", str(tmp_path / "mine" / "day.toml")).exit_code == 0


def test_a_file_that_stands_is_kept_and_nothing_is_written(tmp_path, call):
    (tmp_path / "day.toml").write_text("mine")
    result = call("new", str(tmp_path))
    assert (result.exit_code, result.stdout) == (2, "")
    assert "day.toml" in result.stderr
    assert [file.name for file in tmp_path.iterdir()] == ["day.toml"]

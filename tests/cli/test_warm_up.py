"""`toeline warm-up`: what it says, and what it removes."""

import os
import time

import pytest
from numba import config

from toeline.engine.advance import advance
from toeline.hydraulics import kernel
from toeline.hydraulics.jump_location import protection_margin
from toeline.hydraulics.uniform_flow import kinematic_celerity

pytestmark = pytest.mark.skipif(bool(config.DISABLE_JIT), reason="nothing is compiled")

DAY = 86_400.0


@pytest.fixture
def here(tmp_path, monkeypatch, compiles_nothing):
    """A folder of compiled code with nothing beside it, in place of that of this process."""
    folder = tmp_path / "0123456789abcdef0123"
    folder.mkdir()
    (folder / "engine.advance.advance-1.code").write_bytes(b"x" * 2_000_000)
    monkeypatch.setattr(kernel, "FOLDER", folder)
    return folder


@pytest.fixture
def compiles_nothing(monkeypatch):
    monkeypatch.setattr("toeline.cli.warm_up.compile_everything", lambda: None)


def older(here, days, name="fedcba9876543210fedc"):
    other = here.parent / name
    other.mkdir()
    (other / "engine.advance.advance-2.code").write_bytes(b"y" * 500_000)
    os.utime(other, (time.time() - days * DAY,) * 2)
    return other


def test_tells_the_folder_and_its_size(here, call):
    result = call("warm-up")
    assert result.exit_code == 0
    assert result.stdout == f"Compiled code: {here}, 2.0 MB\n"
    assert "Everything is compiled" in result.stderr


def test_offers_to_remove_what_others_left_and_removes_nothing_unasked(here, call):
    other = older(here, days=3)
    result = call("warm-up")
    assert "1 folder, 0.5 MB, last used" in result.stdout
    assert "toeline warm-up --remove-others" in result.stdout
    assert other.is_dir()


def test_removes_on_demand_but_not_what_another_version_works_with(here, call):
    idle, at_work = older(here, days=3), older(here, days=0.5, name="aaaaaaaaaaaaaaaaaaaa")
    result = call("warm-up", "--remove-others")
    assert "removed: 1 folder, 0.5 MB" in result.stdout
    assert (idle.exists(), at_work.exists(), here.exists()) == (False, True, True)


def test_says_that_nothing_can_be_kept(monkeypatch, call, compiles_nothing):
    monkeypatch.setattr(kernel, "FOLDER", None)
    assert "no folder can be written" in call("warm-up").stdout


def test_compiles_the_time_loop_and_what_a_rating_and_verifying_need(call):
    assert call("warm-up").exit_code == 0
    assert all(entry.signatures for entry in (advance, protection_margin, kinematic_celerity))

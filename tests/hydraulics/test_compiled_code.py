"""Compiled code outlives the process that made it, and only as long as it is used."""

import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numba
import pytest

from toeline.hydraulics import compiled_code
from toeline.hydraulics.compiled_code import FORGOTTEN_AFTER, code_folder, others_beside
from toeline.hydraulics.kernel import FOLDER, kernel
from toeline.hydraulics.kernel_cache import KernelCache

STAMP, OTHER = "0123456789abcdef0123", "fedcba9876543210fedc"
needs_numba = pytest.mark.skipif(bool(numba.config.DISABLE_JIT), reason="nothing is compiled")


@pytest.fixture
def home(tmp_path, monkeypatch):
    monkeypatch.setenv("TOELINE_CACHE_DIR", str(tmp_path / "home"))
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "spare"))
    (tmp_path / "spare").mkdir()
    return tmp_path / "home"


def unused_for(seconds, folder, file="a.b-1.code"):
    folder.mkdir(parents=True)
    (folder / file).touch()
    os.utime(folder, (time.time() - seconds,) * 2)
    return folder


@kernel
def doubled(x):
    return x + x


@kernel
def doubled_and_one(x):
    return doubled(x) + 1


def test_a_kernel_that_kernels_link_in_can_be_called_too():
    assert (doubled_and_one(2.0), doubled(2.0)) == (5.0, 4.0)


def test_a_new_version_removes_what_nobody_used_for_a_month(home):
    forgotten = unused_for(FORGOTTEN_AFTER + 60.0, home / OTHER)
    in_use = unused_for(FORGOTTEN_AFTER - 60.0, home / OTHER[::-1])
    assert code_folder(STAMP) == home / STAMP
    assert (forgotten.exists(), in_use.exists()) == (False, True)


def test_use_keeps_a_folder(home):
    mine = unused_for(FORGOTTEN_AFTER + 60.0, home / STAMP)
    assert code_folder(STAMP) == mine
    code_folder(OTHER)
    assert mine.exists()


@pytest.mark.parametrize(("name", "file"), [("notes", "a.b-1.code"), (OTHER, "thesis.txt")])
def test_what_is_not_compiled_code_is_left_alone(home, name, file):
    folder = unused_for(10 * FORGOTTEN_AFTER, home / name, file)
    code_folder(STAMP)
    assert (folder / file).exists()
    assert others_beside(home / STAMP) == []


def test_code_that_may_only_be_read_is_used(home, monkeypatch):
    filled = unused_for(60.0, home / STAMP)
    monkeypatch.setattr(compiled_code, "is_writable", lambda folder: folder.parent != home)
    assert code_folder(STAMP) == filled


def test_where_nothing_may_be_written_and_nothing_is_there_the_temporary_files_serve(home, monkeypatch):
    monkeypatch.setattr(compiled_code, "is_writable", lambda folder: folder.parent != home)
    folder = code_folder(STAMP)
    assert folder is not None
    assert folder.parent.parent == Path(tempfile.gettempdir())
    assert folder.parent.stat().st_mode & 0o077 == 0


@pytest.mark.skipif(not hasattr(os, "getuid"), reason="users are told apart otherwise")
def test_code_that_another_user_put_among_the_temporary_files_is_not_run(home, monkeypatch):
    monkeypatch.setattr(compiled_code, "is_writable", lambda folder: folder.parent != home)
    monkeypatch.setattr(os, "getuid", lambda: Path(tempfile.gettempdir()).stat().st_uid + 1)
    assert code_folder(STAMP) is None


@needs_numba
def test_two_kinds_of_arguments_have_two_files_and_neither_needs_the_other(tmp_path):
    fresh = kernel(doubled_and_one.py_func)
    fresh._cache = KernelCache(tmp_path, "doubled_and_one")
    assert (fresh(2), fresh(0.25)) == (5, 1.5)
    first, second = sorted(tmp_path.iterdir())
    first.unlink()
    again = kernel(doubled_and_one.py_func)
    again._cache = KernelCache(tmp_path, "doubled_and_one")
    assert (again(2), again(0.25)) == (5, 1.5)
    assert sorted(tmp_path.iterdir()) == [first, second]


@needs_numba
@pytest.mark.parametrize("content", [b"", b"no pickle"])
def test_a_damaged_file_is_compiled_anew(tmp_path, content):
    fresh = kernel(doubled_and_one.py_func)
    fresh._cache = KernelCache(tmp_path, "doubled_and_one")
    fresh(2)
    (file,) = tmp_path.iterdir()
    file.write_bytes(content)
    again = kernel(doubled_and_one.py_func)
    again._cache = KernelCache(tmp_path, "doubled_and_one")
    assert again(2) == 5
    assert len(file.read_bytes()) > 1000


@needs_numba
def test_a_kernel_works_where_its_code_cannot_be_kept(tmp_path):
    fresh = kernel(doubled_and_one.py_func)
    fresh._cache = KernelCache(tmp_path / "not there", "doubled_and_one")
    assert fresh(2) == 5


@needs_numba
@pytest.mark.skipif(FOLDER is None, reason="nothing can be kept here")
def test_the_next_process_compiles_nothing(tmp_path):
    program = (
        "from toeline.hydraulics.uniform_flow import conveyance\n"
        "from toeline.hydraulics.cross_section import rectangle\n"
        "conveyance(rectangle(4.0), 0.014, 1.5)\n"
        "print(len(list(conveyance.stats.cache_misses)), len(list(conveyance.stats.cache_hits)))\n"
    )
    told = [
        subprocess.run(
            [sys.executable, "-c", program], capture_output=True, text=True, check=True,
            env=os.environ | {"TOELINE_CACHE_DIR": str(tmp_path)},
        ).stdout
        for _ in range(2)
    ]  # fmt: skip
    assert told == ["1 0\n", "0 1\n"]

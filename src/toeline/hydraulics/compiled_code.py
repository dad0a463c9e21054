"""The folders in which compiled code is kept between runs, one for every version of the sources, and for how long.

Every use of a folder is stamped on it. When a new version makes its folder, those that nobody has used for a month go;
a version that is still in use, be it older or newer, keeps its own. Nothing is removed but folders named by a digest
that hold compiled code alone. A process that loses its folder all the same goes on, and compiles again.
"""

import os
import re
import shutil
import sys
import tempfile
import time
from collections.abc import Iterator
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

CODE_SUFFIX = ".code"
_STAMP = re.compile(r"[0-9a-f]{20}")
_DAY = 86_400.0

FORGOTTEN_AFTER = 30 * _DAY
"""Time [s] without use after which a folder is removed once a new version needs one (choice)."""
AT_WORK_WITHIN = _DAY
"""Time [s] since its last use within which a folder is kept even if all others are to go (choice)."""


@dataclass(frozen=True)
class CodeFolder:
    """A folder of compiled code: its size [bytes] and when it was last used [s of the epoch]."""

    path: Path
    size: int
    last_used: float

    def is_unused_for(self, seconds: float) -> bool:
        return time.time() - self.last_used > seconds


def code_folder(stamp: str) -> Path | None:
    """The folder of the sources with this stamp: one that can be written, made if need be, or one that is there to be
    read, as an administrator may have filled it for all; None where there is neither.
    """
    for home in _homes():
        folder = home / stamp
        if _is_made(folder) or _is_filled(folder):
            return folder
    return None


def is_writable(folder: Path) -> bool:
    return os.access(folder, os.W_OK | os.X_OK)


def others_beside(folder: Path) -> list[CodeFolder]:
    """The folders of other versions in the same place, the last used first."""
    beside = [path for path in folder.parent.iterdir() if path.name != folder.name and _holds_code_alone(path)]
    return sorted(map(described, beside), key=lambda other: -other.last_used)


def described(folder: Path) -> CodeFolder:
    return CodeFolder(folder, sum(_size(file) for file in folder.iterdir()), folder.stat().st_mtime)


def remove(folders: list[CodeFolder]) -> None:
    """Remove folders; one that cannot be removed stays."""
    for folder in folders:
        shutil.rmtree(folder.path, ignore_errors=True)


def _homes() -> Iterator[Path]:
    """Where folders may be, the first choice first."""
    yield _chosen_home()
    user = os.environ.get("USER") or os.environ.get("USERNAME") or "user"
    spare = Path(tempfile.gettempdir()) / f"toeline-{user}"
    with suppress(OSError):
        spare.mkdir(mode=0o700, exist_ok=True)
        if not hasattr(os, "getuid") or spare.stat().st_uid == os.getuid():  # another user could have put code there
            yield spare


def _chosen_home() -> Path:
    if "TOELINE_CACHE_DIR" in os.environ:
        return Path(os.environ["TOELINE_CACHE_DIR"])
    if sys.platform == "win32" and "LOCALAPPDATA" in os.environ:
        return Path(os.environ["LOCALAPPDATA"]) / "toeline" / "cache"
    return Path(os.environ.get("XDG_CACHE_HOME") or Path("~").expanduser() / ".cache") / "toeline"


def _is_made(folder: Path) -> bool:
    """Whether the folder is there for us to write, made or stamped as used just now."""
    try:
        is_new = not folder.exists()
        folder.mkdir(parents=True, exist_ok=True)
        if is_new:
            remove([other for other in others_beside(folder) if other.is_unused_for(FORGOTTEN_AFTER)])
    except (OSError, RuntimeError):
        return False
    with suppress(OSError):  # of another user, who lets us write
        os.utime(folder)
    return is_writable(folder)


def _is_filled(folder: Path) -> bool:
    with suppress(OSError):
        return any(folder.glob("*" + CODE_SUFFIX))
    return False


def _holds_code_alone(folder: Path) -> bool:
    if not _STAMP.fullmatch(folder.name) or folder.is_symlink() or not folder.is_dir():
        return False
    return all(CODE_SUFFIX in file.name and file.is_file() for file in folder.iterdir())


def _size(file: Path) -> int:
    with suppress(OSError):
        return file.stat().st_size
    return 0

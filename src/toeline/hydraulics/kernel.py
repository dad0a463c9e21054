"""The one compile decorator, and where compiled code is kept.

numba's own disk cache notices an edit only in the file of the function itself, not in the files it calls. The cache
folder here is named by a digest of every kernel source, the compile flags and numba's version, so that an edit
anywhere compiles afresh and a stale result cannot come back.
"""

import hashlib
import os
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any, ParamSpec, TypeVar

import numba

config: Any = numba.config
P = ParamSpec("P")
R = TypeVar("R")

_FLAGS: dict[str, Any] = {"error_model": "numpy", "nogil": True, "fastmath": False, "_nrt": False}
"""`_nrt`: kernels allocate nothing, so that numba need not count references (measured: a run takes half the time)."""

_INNER = {"no_cpython_wrapper": True, "no_cfunc_wrapper": True}
_KERNEL_ROOMS = ("hydraulics", "engine")


def _source_digest() -> str:
    package = Path(__file__).resolve().parent.parent
    digest = hashlib.sha256(f"{numba.__version__} {sys.version} {sorted(_FLAGS.items())}".encode())
    digest.update(str(config.BOUNDSCHECK).encode())
    for room in _KERNEL_ROOMS:
        for source in sorted((package / room).glob("*.py")):
            digest.update(source.read_bytes())
    return digest.hexdigest()[:20]


def _cache_home() -> Path:
    if "TOELINE_CACHE_DIR" in os.environ:
        return Path(os.environ["TOELINE_CACHE_DIR"])
    if sys.platform == "win32" and "LOCALAPPDATA" in os.environ:
        return Path(os.environ["LOCALAPPDATA"]) / "toeline" / "cache"
    return Path(os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache") / "toeline"


def _writable_folder() -> Path | None:
    """The stamped cache folder, made if need be; None where nothing can be written."""
    stamp = _source_digest()
    user = os.environ.get("USER") or os.environ.get("USERNAME") or "user"
    for home in (_cache_home(), Path(tempfile.gettempdir()) / f"toeline-{user}"):
        folder = home / stamp
        try:
            folder.mkdir(parents=True, exist_ok=True)
        except (OSError, RuntimeError):
            continue
        if os.access(folder, os.W_OK):
            return folder
    return None


_FOLDER = _writable_folder()


def kernel(function: Callable[P, R]) -> Callable[P, R]:
    """Compile a function of scalars, arrays and named tuples; the plain function where NUMBA_DISABLE_JIT is set."""
    return _compiled(function, cache=_FOLDER is not None, no_cfunc_wrapper=True)


def inner_kernel(function: Callable[P, R]) -> Callable[P, R]:
    """A `kernel` that only kernels call: nothing is made for calls from Python (measured: a third of the compile
    time).
    """
    return _compiled(function, **_INNER)


def _compiled(function: Callable[P, R], **flags: Any) -> Callable[P, R]:
    before = config.CACHE_DIR
    config.CACHE_DIR = str(_FOLDER or "")
    try:
        return numba.njit(**_FLAGS, **flags)(function)
    finally:
        config.CACHE_DIR = before


def cache_is_warm() -> bool:
    """Whether an earlier run has left the compiled time loop on disk (or nothing is to be compiled)."""
    if config.DISABLE_JIT:
        return True
    return _FOLDER is not None and any(_FOLDER.rglob("advance.advance-*.nbc"))

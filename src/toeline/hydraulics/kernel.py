"""The one compile decorator.

numba's own disk cache notices an edit only in the file of the function itself, not in the files it calls. The folder of
compiled code here is named by a digest of every kernel source, the compile flags and numba's version, so that an edit
anywhere compiles afresh and a stale result cannot come back.
"""

import gc
import hashlib
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any, ParamSpec, TypeVar

import numba
from numba.core.registry import CPUDispatcher

from toeline.hydraulics.compiled_code import CODE_SUFFIX, code_folder
from toeline.hydraulics.inner_code import InnerCompiler
from toeline.hydraulics.kernel_cache import KernelCache

config: Any = numba.config
P = ParamSpec("P")
R = TypeVar("R")

_OPTIONS: dict[str, Any] = {
    "nopython": True,
    "error_model": "numpy",
    "nogil": True,
    "fastmath": False,
    "boundscheck": None,
    "no_cfunc_wrapper": True,
    "_nrt": False,
}
"""`_nrt`: kernels allocate nothing, so that numba need not count references (measured: a run takes half the time)."""

_SOURCES = ("hydraulics/*.py", "engine/*.py", "network/tables.py", "constants.py")
"""The files that kernels, and the constants compiled into them, are written in."""


def _source_digest() -> str:
    package = Path(__file__).resolve().parent.parent
    digest = hashlib.sha256(f"{numba.__version__} {sys.version} {sorted(_OPTIONS.items())}".encode())
    digest.update(str(config.BOUNDSCHECK).encode())
    for pattern in _SOURCES:
        for source in sorted(package.glob(pattern)):
            digest.update(source.read_bytes())
    return digest.hexdigest()[:20]


FOLDER = code_folder(_source_digest())
"""Where compiled code is kept; None where there is no such place."""


class _Kernel(CPUDispatcher):
    """What Python calls; its machine code is made at the first call from there. Kernels link in `inner` instead, for
    which nothing is made but inside them (measured: half of the compile time).
    """

    inner: Any
    _cache: Any

    @property
    def _numba_type_(self) -> Any:
        return self.inner._numba_type_

    def compile(self, sig: Any) -> Any:
        """Compile, without looking for garbage meanwhile: there is little (measured: a fifteenth of the time)."""
        collects = gc.isenabled()
        gc.disable()
        try:
            return super().compile(sig)
        finally:
            if collects:
                gc.enable()


def kernel(function: Callable[P, R]) -> Callable[P, R]:
    """Compile a function of scalars, arrays and named tuples; the plain function where NUMBA_DISABLE_JIT is set."""
    if config.DISABLE_JIT:
        return function
    compiled = _Kernel(py_func=function, targetoptions=_OPTIONS)
    inner = _OPTIONS | {"no_cpython_wrapper": True}
    compiled.inner = CPUDispatcher(py_func=function, targetoptions=inner, pipeline_class=InnerCompiler)
    if FOLDER is not None:
        compiled._cache = KernelCache(FOLDER, f"{function.__module__.removeprefix('toeline.')}.{function.__name__}")
    return compiled


def is_compiled(kernel_name: str) -> bool:
    """Whether an earlier run has left the code of a kernel such as "engine.advance.advance" on disk (or nothing is to
    be compiled).
    """
    if config.DISABLE_JIT:
        return True
    return FOLDER is not None and any(FOLDER.glob(f"{kernel_name}-*{CODE_SUFFIX}"))

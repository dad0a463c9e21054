"""Compiled kernels on disk: one file for every kernel and kinds of arguments.

numba's own cache keeps an index beside numbered files: two processes that compile one kernel for different arguments at
once can leave an index that names the code of the other. It also wants to write where it only reads. Here the name of a
file says all that its code depends on, and a file appears whole or not at all.
"""

import os
import pickle
from contextlib import suppress
from hashlib import sha256
from pathlib import Path
from typing import Any

from numba.core.caching import NullCache
from numba.core.compiler import CompileResult
from numba.core.serialize import dumps

from toeline.hydraulics.compiled_code import CODE_SUFFIX


class KernelCache(NullCache):
    """The code of one kernel in a folder that belongs to one version of all kernels."""

    def __init__(self, folder: Path, kernel_name: str):
        self._folder, self._kernel_name = folder, kernel_name

    @property
    def cache_path(self) -> str:
        return str(self._folder)

    def load_overload(self, sig: Any, target_context: Any) -> Any:
        """The code for a signature, None where there is none that can be used.

        What numba knows of compiling is not looked up for it (measured: a fifth of the demo day).
        """
        try:
            parts = pickle.loads(self._file(sig, target_context.codegen()).read_bytes())
        except (OSError, EOFError, pickle.UnpicklingError):
            return None
        return CompileResult._rebuild(target_context, *parts)

    def save_overload(self, sig: Any, cres: Any) -> None:
        """Keep code for the next process; where it cannot be written this one goes on without."""
        file = self._file(sig, cres.codegen)
        draft = file.with_name(f"{file.name}.{os.getpid()}")
        with suppress(OSError):
            try:
                draft.write_bytes(dumps(cres._reduce()))
                draft.replace(file)
            finally:
                draft.unlink(missing_ok=True)

    def _file(self, sig: Any, codegen: Any) -> Path:
        """`codegen` knows the processor, which machines that share a folder may have different."""
        key = sha256(repr((sig, codegen.magic_tuple())).encode()).hexdigest()[:20]
        return self._folder / f"{self._kernel_name}-{key}{CODE_SUFFIX}"

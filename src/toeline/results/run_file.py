"""Where a run is written: four names, so that a run killed at any moment leaves a file that opens.

    PATH.writing    the file being written, locked by HDF5; worthless to others, and never left but by a kill
    PATH.partial    a whole copy of it, replaced in one step every second or so; what a run that stopped early leaves
    PATH.checkpoint what a run that did not end needs, beside PATH.partial, to go on; replaced just after it
    PATH            the complete run

HDF5 changes a file in many places when it writes a block: measured, one kill in a hundred at full writing speed left
rows that could not be read. A copy taken between two blocks is whole, and stays so when the disk runs full.
PATH.partial only ever gains rows, so that it holds all rows of its checkpoint, whichever of the two a kill left behind.
Nothing a user has finished is touched before the new run is complete.
"""

import errno
import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from toeline.errors import RunError, UsageError

try:
    import fcntl
except ImportError:  # Windows, which itself refuses to delete a file that is open
    fcntl = None  # type: ignore[assignment]

_HDF5_SIGNATURE = b"\x89HDF\r\n\x1a\n"


class RunFile:
    """The file of one run under its names."""

    def __init__(self, path: str | os.PathLike[str], overwrite: bool, *, goes_on: bool = False):
        """UsageError if `path` cannot be the name of a run file. Nothing is created yet.

        A run that `goes_on` takes the place of PATH.partial, which stays until it holds as much.
        """
        self.path = _resolved(path)
        self.partial_path = self.path.with_name(self.path.name + ".partial")
        self.working_path = self.path.with_name(self.path.name + ".writing")
        self.checkpoint_path = self.path.with_name(self.path.name + ".checkpoint")
        self._copying_path = self.path.with_name(self.path.name + ".copying")
        self._overwrite = overwrite
        self._goes_on = goes_on

    def check(self) -> None:
        """UsageError if one of the names is taken by what may not be overwritten, or another run is writing."""
        for other in (self.partial_path, self.working_path, self.checkpoint_path):
            if other.exists() and not other.is_file():
                raise UsageError(f"{other} is in the way and is no file")
        if self.working_path.exists() and _is_open_for_writing(self.working_path):
            raise UsageError(f"another run is writing {self.path}; wait for it, or choose another name")
        if self.path.exists():
            self._check_finished_run()
        if self.partial_path.exists() and not (self._overwrite or self._goes_on):
            raise UsageError(
                f"{self.partial_path} holds an unfinished run and is kept; go on with it, rename it, or allow it to be "
                "overwritten"
            )

    @contextmanager
    def claimed(self) -> Iterator[None]:
        """Create PATH.writing, empty, for this run alone; the caller opens it, and so locks it, inside the with block.

        UsageError if PATH or PATH.partial exists and may not be overwritten, if another run is writing, or if nothing
        can be written there. If the block fails, no file is left.
        """
        try:
            with _one_claim_at_a_time(self.path.parent):
                self.check()
                self._remove_left_overs()
                if not self._goes_on:
                    self.checkpoint_path.unlink(missing_ok=True)
                os.close(os.open(self.working_path, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o666))
                try:
                    yield
                except BaseException:
                    self.working_path.unlink(missing_ok=True)
                    raise
                self._identity = self.working_path.stat()
        except OSError as error:
            raise UsageError(f"{self.path} cannot be written: {self._reason(error)}") from error

    def save_copy(self, checkpoint: bytes | None = None) -> None:
        """Replace PATH.partial by what PATH.writing holds now, then the checkpoint. OSError if the disk is full."""
        shutil.copyfile(self.working_path, self._copying_path)
        if self._replace(self.partial_path) and checkpoint is not None:
            self._copying_path.write_bytes(checkpoint)
            self._replace(self.checkpoint_path)

    def finish(self) -> None:
        """Bring a complete, closed PATH.writing safely to the disk and to its own name, in one step.

        RunError if that name was taken meanwhile, in which case the run is kept as PATH.partial, or if it fails.
        """
        try:
            self._bring_to_disk()
            if self.path.exists() and not self._overwrite:
                self.working_path.replace(self.partial_path)
                raise RunError(f"{self.path} appeared during the run; the complete run is in {self.partial_path}")
            self.working_path.replace(self.path)
            self._remove_left_overs()
            self.partial_path.unlink(missing_ok=True)
            self.checkpoint_path.unlink(missing_ok=True)
        except OSError as error:
            raise RunError(f"the run is complete, but {self.path} cannot be written: {error}") from error

    def keep_unfinished(self) -> None:
        """Keep a closed PATH.writing as PATH.partial. RunError if that fails."""
        try:
            self._bring_to_disk()
            self.working_path.replace(self.partial_path)
            self._remove_left_overs()
        except OSError as error:
            raise RunError(f"{self.partial_path} cannot be written: {error}") from error

    def abandon(self) -> None:
        """Remove a PATH.writing that failed; the last copy stays."""
        with suppress(OSError):
            self._remove_left_overs()

    def free_space(self) -> int:
        """Bytes free on the disk of the run."""
        return shutil.disk_usage(self.path.parent).free

    def _check_finished_run(self) -> None:
        if not self._overwrite:
            raise UsageError(f"{self.path} exists and is kept; choose another name, or allow it to be overwritten")
        if not os.access(self.path, os.W_OK):
            raise UsageError(f"{self.path} is write-protected and is kept")
        with self.path.open("rb") as file:
            if file.read(len(_HDF5_SIGNATURE)) not in (_HDF5_SIGNATURE, b""):
                raise UsageError(f"{self.path} is no NetCDF-4 file and is kept; only an earlier run is overwritten")

    def _replace(self, path: Path) -> bool:
        """Bring what was copied to the disk and to its name in one step; returns whether that could be done now."""
        _to_disk(self._copying_path)
        try:
            self._copying_path.replace(path)
        except PermissionError:  # Windows, while somebody reads the last copy; the next one will do
            return False
        return True

    def _remove_left_overs(self) -> None:
        self.working_path.unlink(missing_ok=True)
        self._copying_path.unlink(missing_ok=True)

    def _bring_to_disk(self) -> None:
        descriptor = os.open(self.working_path, os.O_RDWR)
        try:
            if not os.path.samestat(os.fstat(descriptor), self._identity):  # only where files cannot be locked
                raise FileExistsError(errno.EEXIST, "another run took the place of this one")
            os.fsync(descriptor)
        finally:
            os.close(descriptor)

    def _reason(self, error: OSError) -> str:
        if error.errno == errno.ENOENT:
            return f"the directory {self.path.parent} does not exist"
        if error.errno in (errno.EACCES, errno.EPERM):
            return f"no permission in {self.path.parent}"
        return error.strerror or str(error)


def _to_disk(path: Path) -> None:
    descriptor = os.open(path, os.O_RDWR)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)


def _resolved(path: str | os.PathLike[str]) -> Path:
    """The file to write, links followed."""
    given = Path(path)
    try:
        str(given).encode("utf-8")
        resolved = given.resolve()
        is_taken, is_directory, is_file = given.exists(), given.is_dir(), given.is_file()
    except (ValueError, OSError, RuntimeError) as error:  # RuntimeError: links in a circle
        raise UsageError(f"{str(given)!r} cannot be a file name: {error}") from error
    if is_directory:
        raise UsageError(f"{given} is a directory; give the name of a file")
    if is_taken and not is_file:
        raise UsageError(f"{given} is a pipe or device; a run is written into a file")
    if resolved.suffix in (".partial", ".writing", ".copying", ".checkpoint"):
        raise UsageError(f"{given}: names ending in {resolved.suffix} are kept for unfinished runs; choose another")
    return resolved


@contextmanager
def _one_claim_at_a_time(directory: Path) -> Iterator[None]:
    if fcntl is None:
        yield
        return
    descriptor = os.open(directory, os.O_RDONLY)
    try:
        with suppress(OSError):  # a file system without locks on directories
            fcntl.flock(descriptor, fcntl.LOCK_EX)
        yield
    finally:
        os.close(descriptor)


def _is_open_for_writing(path: Path) -> bool:
    """Whether a living process writes the file: HDF5's lock ends with the process."""
    if fcntl is None:
        return False
    with path.open("rb") as file:
        try:
            fcntl.flock(file, fcntl.LOCK_SH | fcntl.LOCK_NB)
        except BlockingIOError:
            return True
        except OSError:  # a file system without locks
            return False
    return False

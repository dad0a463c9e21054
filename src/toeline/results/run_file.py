"""Where a run is written: into PATH.partial for one run alone, moved to PATH when complete.

Nothing a user has finished is touched before the new run is complete. While a run writes, HDF5 holds a lock on its
.partial; the lock ends with the process, so what a killed run left behind never blocks the next one.
"""

import errno
import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from toeline.errors import RunError, UsageError

try:
    import fcntl
except ImportError:  # Windows, which itself refuses to delete a file that is open
    fcntl = None  # type: ignore[assignment]

_HDF5_SIGNATURE = b"\x89HDF\r\n\x1a\n"


def resolved_target(path: str | os.PathLike[str]) -> Path:
    """The file to write, links followed. UsageError for what cannot be the name of a run file."""
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
    if resolved.suffix == ".partial":
        raise UsageError(f"{given}: names ending in .partial are kept for unfinished runs; choose another")
    return resolved


def partial_of(path: Path) -> Path:
    """The file into which the run for `path` is written until it is complete."""
    return path.with_name(path.name + ".partial")


@contextmanager
def claimed_partial(path: Path, overwrite: bool) -> Iterator[Path]:
    """Create PATH.partial, empty, for the caller alone, who opens it inside the with block.

    UsageError if PATH or PATH.partial exists and may not be overwritten, if another run is writing, or if nothing can
    be written there. If the block fails, no file is left.
    """
    partial = partial_of(path)
    try:
        with _one_claim_at_a_time(path.parent):
            _check_finished_run(path, overwrite)
            _make_way(partial, overwrite)
            os.close(os.open(partial, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o666))
            try:
                yield partial
            except BaseException:
                partial.unlink(missing_ok=True)
                raise
    except OSError as error:
        raise UsageError(f"{path} cannot be written: {_reason(error, path)}") from error


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


def _check_finished_run(path: Path, overwrite: bool) -> None:
    if not path.exists():
        return
    if not overwrite:
        raise UsageError(f"{path} exists and is kept; choose another name, or allow it to be overwritten")
    if not os.access(path, os.W_OK):
        raise UsageError(f"{path} is write-protected and is kept")
    with path.open("rb") as file:
        beginning = file.read(len(_HDF5_SIGNATURE))
    if beginning not in (_HDF5_SIGNATURE, b""):
        raise UsageError(f"{path} is no NetCDF-4 file and is kept; only an earlier run is overwritten")


def _make_way(partial: Path, overwrite: bool) -> None:
    if not partial.exists():
        return
    if not partial.is_file():
        raise UsageError(f"{partial} is in the way and is no file")
    if is_being_written(partial):
        raise UsageError(f"another run is writing {partial}; wait for it, or choose another name")
    if not overwrite:
        raise UsageError(f"{partial} holds an unfinished run and is kept; rename it, or allow it to be overwritten")
    partial.unlink()


def is_being_written(partial: Path) -> bool:
    """Whether a living process has the file open for writing."""
    if fcntl is None:
        return False
    with partial.open("rb") as file:
        try:
            fcntl.flock(file, fcntl.LOCK_SH | fcntl.LOCK_NB)
        except BlockingIOError:
            return True
        except OSError:  # a file system without locks
            return False
    return False


def publish(partial: Path, path: Path, overwrite: bool, identity: os.stat_result) -> None:
    """Bring a complete, closed .partial safely to the disk and under its own name, in one step.

    `identity` is the state of the file when it was made. RunError if another file took its place, which only a system
    without file locks allows; or, with the run kept in the .partial, if the name was taken meanwhile or the move fails.
    """
    try:
        if not os.path.samestat(partial.stat(), identity):
            raise FileNotFoundError(errno.ENOENT, "another run took its place")
        if path.exists() and not overwrite:
            raise FileExistsError(errno.EEXIST, "a file of this name appeared while the run went on")
        bring_to_disk(partial)
        partial.replace(path)
    except OSError as error:
        raise RunError(f"the run is complete, but {partial} cannot become {path}: {error.strerror}") from error
    with suppress(OSError):  # not every system can open a directory
        bring_to_disk(path.parent)


def bring_to_disk(path: Path) -> None:
    """Wait until the system has written what it holds of the file."""
    flags = os.O_RDONLY if path.is_dir() else os.O_RDWR
    descriptor = os.open(path, flags)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)


def _reason(error: OSError, path: Path) -> str:
    if error.errno == errno.ENOENT:
        return f"the directory {path.parent} does not exist"
    if error.errno in (errno.EACCES, errno.EPERM):
        return f"no permission in {path.parent}"
    return error.strerror or str(error)

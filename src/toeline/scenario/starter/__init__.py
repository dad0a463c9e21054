"""A small canal and a day on it to begin from, with comments."""

from collections.abc import Iterable
from importlib.resources import files
from pathlib import Path

from toeline.errors import UsageError

STARTER_FILES = ("canal.toml", "day.toml")


def write_starter(directory: Path | str) -> tuple[Path, ...]:
    """Write the starter files into a directory, made if missing, and give their paths.

    Raises UsageError, and writes nothing, if one of them exists or the directory cannot be written.
    """
    paths = tuple(Path(directory) / name for name in STARTER_FILES)
    try:
        Path(directory).mkdir(parents=True, exist_ok=True)
        _refuse_to_overwrite(paths)
        for path in paths:
            path.write_text(starter_text(path.name), encoding="utf-8")
    except OSError as error:
        raise UsageError(f"{directory}: cannot write there: {(error.strerror or str(error)).lower()}") from None
    return paths


def _refuse_to_overwrite(paths: Iterable[Path]) -> None:
    for path in paths:
        if path.exists():
            raise UsageError(f"{path}: this file exists already; nothing was written")


def starter_text(name: str) -> str:
    """Give the text of one of the starter files."""
    return (files(__name__) / name).read_text(encoding="utf-8")

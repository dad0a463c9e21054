"""Figures as files: PNG, SVG or PDF, each with its numbers as CSV beside it; all of them appear, or none."""

import gc
from collections.abc import Iterable, Sequence
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import matplotlib

from toeline.errors import UsageError
from toeline.report.figures.picture import Picture
from toeline.report.figures.sheet import in_house_style

FORMATS = ("png", "svg", "pdf")
DOTS_PER_INCH = 150
LARGE = 100_000
"""Numbers of a picture from which its memory is given back at once (choice): more than a day has."""
_REPEATABLE = matplotlib.rc_context({"svg.hashsalt": "toeline", "pdf.fonttype": 42})


def write_pictures(
    pictures: Iterable[tuple[str, Picture]], folder: Path, formats: Sequence[str], *, overwrite: bool = False
) -> list[Path]:
    """Write pictures, each under a name without ending, and their tables; return the paths in order.

    The same pictures give the same bytes. UsageError where a file exists and may not be overwritten, or two pictures
    would go to one file; then nothing is written. The folder must exist.
    """
    with TemporaryDirectory(dir=folder, prefix=".figures-") as working:
        ready: dict[str, Path] = {}
        for stem, picture in pictures:
            for name, path in _write_one(stem, picture, Path(working), formats):
                if name in ready:
                    raise UsageError(f"two figures would go to {folder / name}: rename a run")
                _refuse(folder / name, overwrite)
                ready[name] = path
            is_large = picture.size > LARGE
            del picture
            if is_large:
                gc.collect()  # a figure is a ring of objects, which would wait with all of its points
        return [path.replace(folder / name) for name, path in ready.items()]


def _refuse(path: Path, overwrite: bool) -> None:
    if path.is_dir():
        raise UsageError(f"{path} is a directory and in the way")
    if path.exists() and not overwrite:
        raise UsageError(f"{path} exists: choose another place, or replace it with --overwrite.")


def _write_one(name: str, picture: Picture, folder: Path, formats: Sequence[str]) -> Iterable[tuple[str, Path]]:
    for ending in formats:
        path = folder / f"{name}.{ending}"
        save(picture, path)
        yield path.name, path
    for part, table in picture.tables.items():
        path = folder / f"{name}{f'.{part}' if part else ''}.csv"
        path.write_text(table.csv_text(), encoding="utf-8", newline="")
        yield path.name, path


@_REPEATABLE
@in_house_style
def save(picture: Picture, path: Path, dots_per_inch: int = DOTS_PER_INCH) -> None:
    """Draw a picture into a file; its words go along where the format has a place for them."""
    metadata: dict[str, dict[str, Any]] = {
        ".png": {"Software": None, "Description": picture.words},
        ".svg": {"Date": None, "Creator": None, "Description": picture.words},
        ".pdf": {"CreationDate": None, "ModDate": None, "Creator": None, "Producer": None, "Subject": picture.words},
    }
    picture.figure.savefig(path, dpi=dots_per_inch, metadata=metadata[path.suffix.lower()])

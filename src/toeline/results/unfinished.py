"""What a run that was stopped or killed left behind, for the same run to go on."""

import hashlib
import io
import json
import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import netCDF4
import numpy as np

from toeline.errors import UsageError
from toeline.results.dataset import damage_told, open_run
from toeline.results.encoding import Rows
from toeline.results.run_file import RunFile
from toeline.results.sources import source_digest
from toeline.results.variables import GROWING_DIMENSIONS, growing

_ABOUT = "about"
_ROWS, _SOURCES = "rows", "sources"
"""What a checkpoint says beside the state of the run: how many rows were safe, and which sources it is the state of."""

_DIGEST_SIZE = hashlib.sha256().digest_size

SAME_RUN = {
    "source": "version of the program",
    "canal_file": "canal file",
    "day_file": "day file",
    "plan": "plan",
    "resolved_settings": "value of a setting",
    "input_hash": "digest of the inputs",
}
"""Global attributes that must be equal for a run to go on, and what they say, the plainest first."""


@dataclass(frozen=True)
class Unfinished:
    """The rows that were safe at the last checkpoint, in `path`, and the checkpoint itself.

    Where a run was stopped before its first there is no checkpoint, and there are no rows.
    """

    path: Path
    history: str
    checkpoint: dict[str, np.ndarray] | None
    row_counts: dict[str, int]

    def rows(self, dimension: str, length: int) -> Iterator[Rows]:
        """The rows along a growing dimension as they are stored, at most `length` at a time."""
        with damage_told(self.path), netCDF4.Dataset(self.path) as file:
            file.set_auto_maskandscale(False)
            for first in range(0, self.row_counts[dimension], length):
                part = slice(first, min(first + length, self.row_counts[dimension]))
                yield {variable.name: file.variables[variable.name][part] for variable in growing(dimension)}


def checkpoint_bytes(row_counts: Mapping[str, int], checkpoint: Mapping[str, np.ndarray]) -> bytes:
    """A checkpoint as it is kept beside the rows that were safe by then, led by a digest: it is whole, or of no use."""
    about = {_ROWS: dict(row_counts), _SOURCES: source_digest()}
    buffer = io.BytesIO()
    arrays: dict[str, Any] = {_ABOUT: np.array(json.dumps(about)), **checkpoint}
    np.savez(buffer, **arrays)
    return hashlib.sha256(buffer.getvalue()).digest() + buffer.getvalue()


def read_unfinished(path: str | os.PathLike[str], attributes: Mapping[str, str]) -> Unfinished | None:
    """What the unfinished run of `path` left; None where there is none.

    `attributes` are the global attributes of the run that is to go on. UsageError where the two are not the same run,
    or were not made by the same sources, or where a file is damaged.
    """
    file = RunFile(path, overwrite=False, goes_on=True)
    file.check()
    if not file.partial_path.exists():
        return None
    with open_run(file.partial_path) as run:
        check_same_run(run.attrs, file.partial_path, attributes)
        history, safe = run.attrs["history"], dict(run.sizes)
    if not file.checkpoint_path.exists():
        return Unfinished(file.partial_path, history, None, dict.fromkeys(GROWING_DIMENSIONS, 0))
    checkpoint, about = _read_checkpoint(file.checkpoint_path)
    if about[_SOURCES] != source_digest():
        raise _not_the_same(file.checkpoint_path, "source code of the program")
    for dimension, count in about[_ROWS].items():
        if safe[dimension] < count:
            raise UsageError(
                f"{file.partial_path} has {safe[dimension]} rows along {dimension}, expected: {count} or more, as safe "
                f"when {file.checkpoint_path.name} was written; begin anew and overwrite it"
            )
    return Unfinished(file.partial_path, history, checkpoint, about[_ROWS])


def _read_checkpoint(path: Path) -> tuple[dict[str, np.ndarray], dict[str, Any]]:
    """The arrays of a checkpoint, and what it says of them. UsageError where it is not as it was written."""
    content = path.read_bytes()
    digest, arrays = content[:_DIGEST_SIZE], content[_DIGEST_SIZE:]
    if hashlib.sha256(arrays).digest() != digest:
        raise UsageError(f"{path} cannot be read, as it was damaged or changed; begin anew and overwrite it")
    with np.load(io.BytesIO(arrays), allow_pickle=False) as loaded:
        checkpoint = dict(loaded)
    return checkpoint, json.loads(str(checkpoint.pop(_ABOUT)))


def check_same_run(found: Mapping[str, Any], path: Path, attributes: Mapping[str, str]) -> None:
    """UsageError if the global attributes found in a file are not of the run that has these."""
    different = next((said for name, said in SAME_RUN.items() if found.get(name) != attributes[name]), None)
    if different is not None:
        raise _not_the_same(path, different)


def _not_the_same(path: Path, what: str) -> UsageError:
    return UsageError(
        f"{path} was made from other inputs, and no run can go on from it with these: the {what} is not the same; "
        "bring back what was changed, or begin anew and overwrite it"
    )

"""What a run that was stopped or killed left behind, for the same run to go on."""

import io
import json
import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any
from zipfile import BadZipFile

import netCDF4
import numpy as np

from toeline.errors import UsageError
from toeline.results.dataset import open_run
from toeline.results.encoding import Rows
from toeline.results.run_file import RunFile
from toeline.results.variables import GROWING_DIMENSIONS, growing

_ROWS = "rows"

SAME_RUN = {
    "source": "version of the program",
    "canal_file": "canal file",
    "day_file": "day file",
    "plan": "plan",
    "resolved_settings": "settings",
    "input_hash": "inputs",
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
        with netCDF4.Dataset(self.path) as file:
            file.set_auto_maskandscale(False)
            for first in range(0, self.row_counts[dimension], length):
                part = slice(first, min(first + length, self.row_counts[dimension]))
                yield {variable.name: file.variables[variable.name][part] for variable in growing(dimension)}


def checkpoint_bytes(row_counts: Mapping[str, int], checkpoint: Mapping[str, np.ndarray]) -> bytes:
    """A checkpoint as it is kept beside the rows that were safe by then."""
    buffer = io.BytesIO()
    arrays: dict[str, Any] = {_ROWS: np.array(json.dumps(dict(row_counts))), **checkpoint}
    np.savez(buffer, **arrays)
    return buffer.getvalue()


def read_unfinished(path: str | os.PathLike[str], attributes: Mapping[str, str]) -> Unfinished | None:
    """What the unfinished run of `path` left; None where there is none.

    `attributes` are the global attributes of the run that is to go on. UsageError where the two are not the same run.
    """
    file = RunFile(path, overwrite=False, goes_on=True)
    file.check()
    if not file.partial_path.exists():
        return None
    with open_run(file.partial_path) as run:
        check_same_run(run.attrs, file.partial_path, attributes)
        history = run.attrs["history"]
    if not file.checkpoint_path.exists():
        return Unfinished(file.partial_path, history, None, dict.fromkeys(GROWING_DIMENSIONS, 0))
    try:
        with np.load(file.checkpoint_path, allow_pickle=False) as arrays:
            checkpoint = dict(arrays)
        row_counts = json.loads(str(checkpoint.pop(_ROWS)))
    except (OSError, ValueError, KeyError, EOFError, BadZipFile) as error:
        raise UsageError(f"{file.checkpoint_path} cannot be read; begin anew and overwrite it") from error
    return Unfinished(file.partial_path, history, checkpoint, row_counts)


def check_same_run(found: Mapping[str, Any], path: Path, attributes: Mapping[str, str]) -> None:
    """UsageError if the global attributes found in a file are not of the run that has these."""
    different = next((said for name, said in SAME_RUN.items() if found.get(name) != attributes[name]), None)
    if different is not None:
        raise UsageError(
            f"{path} was made from other inputs, and no run can go on from it with these: the {different} is not the "
            "same; bring back what was changed, or begin anew and overwrite it"
        )

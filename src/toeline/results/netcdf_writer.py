"""The run as one flat NetCDF-4 file, written while the run goes on."""

import os
import time
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from datetime import datetime
from pathlib import Path

import netCDF4
import numpy as np

from toeline.errors import RunError, UsageError
from toeline.results.encoding import (
    Rows,
    cf_attributes,
    end_state_values,
    fill_value,
    rows_by_dimension,
    sizes_of,
    static_values,
    surface_names_of,
)
from toeline.results.provenance import COMPLETE, UNFINISHED
from toeline.results.run_file import RunFile
from toeline.results.unfinished import Unfinished, checkpoint_bytes
from toeline.results.variables import GROWING_DIMENSIONS, VARIABLES, Variable, growing

TIME_CHUNK = 720
ORDER_CHUNK = 64
PROFILE_CHUNK_VALUES = 65_536
CHUNK_CACHE = 2**18
"""Bytes for each variable: a chunk or two; the default of 64 MiB would fill the memory."""

COPY_EVERY = 1.0
COPY_SHARE = 0.2
"""A copy safe from a kill is taken every second of wall time, or less often: copying takes a fifth of it at most."""


class NetcdfSink:
    """Writes a run; see `run_file` for the names of the file on the way.

    A run that stops early is kept as PATH.partial, with its outcome; so is what a killed run had done until a second
    before. Of a complete run only PATH remains.
    """

    def __init__(
        self,
        path: str | os.PathLike[str],
        static: Mapping[str, np.ndarray],
        attributes: Mapping[str, str],
        start: datetime,
        overwrite: bool = False,
        unfinished: Unfinished | None = None,
    ):
        """Create the file. UsageError, before anything is touched, if it may not or cannot be written.

        `static` holds the fixed variables by their registry names, `attributes` the global attributes; at `start`, an
        aware time, the clocks of the blocks read 0. Of an `unfinished` run the rows up to its checkpoint are taken
        over, as if they had been written.
        """
        self._run_file = RunFile(path, overwrite, goes_on=unfinished is not None)
        self._start = start
        self._surface_names = surface_names_of(attributes)
        self._sizes = sizes_of(static)
        self._chunks = _chunk_lengths(self._sizes["node"])
        with self._run_file.claimed():
            self._file = netCDF4.Dataset(self._run_file.working_path, "w")
            try:
                self._define(static_values(static), attributes)
            except BaseException as error:
                with suppress(RuntimeError):
                    self._file.close()
                if isinstance(error, RuntimeError):  # netCDF4 raises it for what HDF5 reports, such as a full disk
                    raise UsageError(f"{self._run_file.path} cannot be written: {self._failure(error)}") from error
                raise
        self._waiting = {dimension: self._buffer(dimension) for dimension in GROWING_DIMENSIONS}
        self._written = dict.fromkeys(GROWING_DIMENSIONS, 0)
        self._is_closed = False
        self.written_path: Path = self._run_file.partial_path
        """Where the run can be read: PATH once it is complete and closed, PATH.partial until then."""
        self._next_copy = 0.0
        with self._giving_up_on_failure():
            if unfinished is None:
                self._copy(None)
            else:
                self._take_over(unfinished)

    @property
    def is_copy_due(self) -> bool:
        """Whether the last copy is old enough for the next."""
        return time.monotonic() >= self._next_copy

    def save_copy(self, checkpoint: Mapping[str, np.ndarray]) -> None:
        """Make all rows written so far safe from a kill, and the checkpoint from which the run goes on after them.

        RunError if they cannot be written; the last copy is then kept as PATH.partial, and no more is taken.
        """
        rows = {dimension: self._written[dimension] + self._waiting[dimension].count for dimension in self._written}
        with self._giving_up_on_failure():
            self._copy(checkpoint_bytes(rows, checkpoint))

    def write(self, block: Mapping[str, np.ndarray]) -> None:
        """Take the rows of a block, in any number.

        RunError if they cannot be written; the last copy is then kept as PATH.partial, and no more is taken.
        """
        if self._is_closed:
            return
        with self._giving_up_on_failure():
            for dimension, rows in rows_by_dimension(block).items():
                self._gather(dimension, rows)

    def close(self, outcome: str, end_state: Mapping[str, np.ndarray] | None = None) -> None:
        """Write the rest and close. Closing again, or after a failed write, does nothing."""
        if self._is_closed:
            return
        with self._giving_up_on_failure():
            self._flush_all()
            self._write_end_state(end_state_values(end_state or {}))
            self._file.outcome = outcome
            self._file.close()
        self._is_closed = True
        if outcome == COMPLETE:
            self._run_file.finish()
            self.written_path = self._run_file.path
        else:
            self._run_file.keep_unfinished()

    def _define(self, static: Rows, attributes: Mapping[str, str]) -> None:
        self._file.setncatts({**attributes, "outcome": UNFINISHED})
        for dimension in GROWING_DIMENSIONS:
            self._file.createDimension(dimension, None)
        for dimension, size in self._sizes.items():
            self._file.createDimension(dimension, size)
        for variable in VARIABLES.values():
            if not variable.is_state:
                self._create(variable)
        for name, values in static.items():
            self._file.variables[name][:] = values

    def _create(self, variable: Variable) -> None:
        is_compressed = variable.grows and variable.dtype != "text"
        created = self._file.createVariable(
            variable.name,
            str if variable.dtype == "text" else variable.dtype,
            variable.dimensions,
            fill_value=fill_value(variable),
            compression="zlib" if is_compressed else None,
            complevel=1,
            shuffle=True,
            chunksizes=self._chunk_shape(variable) if variable.grows else None,
            chunk_cache=CHUNK_CACHE,
        )
        created.setncatts(cf_attributes(variable, self._start, self._surface_names))
        created.set_auto_maskandscale(False)

    def _chunk_shape(self, variable: Variable) -> tuple[int, ...]:
        length, *others = variable.dimensions
        return (self._chunks[length], *(max(1, self._sizes[other]) for other in others))

    def _buffer(self, dimension: str) -> "RowBuffer":
        length = self._chunks[dimension]
        shapes = {v.name: (length, *(self._sizes[d] for d in v.dimensions[1:])) for v in growing(dimension)}
        dtypes = {v.name: object if v.dtype == "text" else v.dtype for v in growing(dimension)}
        return RowBuffer({name: np.empty(shape, dtypes[name]) for name, shape in shapes.items()}, length)

    def _gather(self, dimension: str, rows: Rows) -> None:
        """Let rows wait until they fill a chunk; write every whole chunk."""
        buffer = self._waiting[dimension]
        total = len(next(iter(rows.values())))
        taken = 0
        while taken < total:
            taken += buffer.take(rows, taken)
            if buffer.is_full:
                self._flush(dimension)
                self._written[dimension] += buffer.count
                buffer.count = 0

    def _flush(self, dimension: str) -> None:
        """Write the waiting rows to their place. They go on waiting, to be written again when their chunk is whole."""
        buffer = self._waiting[dimension]
        first, last = self._written[dimension], self._written[dimension] + buffer.count
        if last > first:
            for name, column in buffer.columns.items():
                self._file.variables[name][first:last] = column[: buffer.count]

    def _flush_all(self) -> None:
        for dimension in GROWING_DIMENSIONS:
            self._flush(dimension)

    def _take_over(self, unfinished: Unfinished) -> None:
        """Write the rows of an unfinished run once more: a file that a kill may have left is not written into."""
        for dimension, length in self._chunks.items():
            for rows in unfinished.rows(dimension, length):
                self._gather(dimension, rows)

    def _copy(self, checkpoint: bytes | None) -> None:
        begin = time.monotonic()
        self._flush_all()
        self._file.sync()
        self._run_file.save_copy(checkpoint)
        end = time.monotonic()
        self._next_copy = end + max(COPY_EVERY, (end - begin) / COPY_SHARE)

    def _write_end_state(self, end_state: Rows) -> None:
        for name, values in end_state.items():
            for dimension, size in zip(VARIABLES[name].dimensions, values.shape, strict=True):
                if dimension not in self._file.dimensions:
                    self._file.createDimension(dimension, size)
            self._create(VARIABLES[name])
        for name, values in end_state.items():
            self._file.variables[name][...] = values

    @contextmanager
    def _giving_up_on_failure(self) -> Iterator[None]:
        """Turn a failed write into RunError; the last copy stays, also where what is to be written cannot be read."""
        try:
            yield
        except UsageError:
            self._file.close()
            self._run_file.abandon()
            raise
        except (OSError, RuntimeError) as error:  # netCDF4 raises RuntimeError for what HDF5 reports
            self._is_closed = True
            with suppress(OSError, RuntimeError):
                self._file.close()
            failure = self._failure(error)
            self._run_file.abandon()
            raise RunError(
                f"writing {self._run_file.path} failed ({failure}); "
                f"what was safe before is in {self._run_file.partial_path}"
            ) from error

    def _failure(self, error: OSError | RuntimeError) -> str:
        return f"{error}; {self._run_file.free_space() / 1e6:.1f} MB of disk are free"


class RowBuffer:
    """Rows waiting to fill one chunk: `columns` by variable name, of which the first `count` rows are set."""

    def __init__(self, columns: Rows, length: int):
        self.columns = columns
        self.length = length
        self.count = 0

    @property
    def is_full(self) -> bool:
        return self.count == self.length

    def take(self, rows: Rows, begin: int) -> int:
        """Copy rows from `begin` on, as many as there is room for; return how many."""
        total = len(next(iter(rows.values())))
        number = min(self.length - self.count, total - begin)
        for name, column in self.columns.items():
            column[self.count : self.count + number] = rows[name][begin : begin + number]
        self.count += number
        return number


def _chunk_lengths(nodes: int) -> dict[str, int]:
    """Rows of a chunk along each growing dimension."""
    profile_rows = max(1, min(TIME_CHUNK, PROFILE_CHUNK_VALUES // max(nodes, 1)))
    return {"time": TIME_CHUNK, "profile_time": profile_rows, "order": ORDER_CHUNK}

"""The run file, written while the run goes on: one flat NetCDF-4 file that survives a kill at any moment.

Rows are gathered into whole chunks; each whole chunk is written and brought to the disk. A part-filled compressed chunk
is written once only, when the file is closed: rewriting one in place is what damages a file if the process dies.
"""

import os
import shutil
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from datetime import datetime
from pathlib import Path

import netCDF4
import numpy as np

from toeline.errors import RunError
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
from toeline.results.run_file import bring_to_disk, claimed_partial, partial_of, publish, resolved_target
from toeline.results.variables import GROWING_DIMENSIONS, VARIABLES, Variable, growing

TIME_CHUNK = 720
PROFILE_CHUNK = 72
PROFILE_CHUNK_VALUES = 16_384
ORDERS_HELD = 64
CHUNK_CACHE = 2**20
SPACE_KEPT_FREE = 4 * 2**20
"""Bytes of free disk below which the run stops while its file can still be closed."""


class NetcdfSink:
    """Writes a run into PATH.partial and moves it to PATH when the run is complete.

    A run that stops early is closed as PATH.partial and stays there; so does what a killed run had brought to the disk.
    `time_chunk` is the number of output steps after which rows reach the disk: fewer for long runs with sparse output.
    """

    def __init__(
        self,
        path: str | os.PathLike[str],
        static: Mapping[str, np.ndarray],
        attributes: Mapping[str, str],
        start: datetime,
        overwrite: bool = False,
        *,
        time_chunk: int = TIME_CHUNK,
    ):
        """Create the file. UsageError, before anything is touched, if it may not or cannot be written."""
        self.path = resolved_target(path)
        self.partial_path = partial_of(self.path)
        self._overwrite = overwrite
        self._start = start
        self._surface_names = surface_names_of(attributes)
        self._sizes = sizes_of(static)
        self._chunks = _chunk_lengths(time_chunk, self._sizes["node"])
        with claimed_partial(self.path, overwrite):
            self._file = netCDF4.Dataset(self.partial_path, "w")
            try:
                self._define(static_values(static), attributes)
            except BaseException:
                self._file.close()
                raise
            self._identity = self.partial_path.stat()
        self._waiting = {dimension: self._buffer(dimension) for dimension in GROWING_DIMENSIONS}
        self._written = dict.fromkeys(GROWING_DIMENSIONS, 0)
        self._is_closed = False

    @property
    def written_path(self) -> Path:
        """Where the rows written so far are: PATH after a complete run is closed, else PATH.partial."""
        return self.partial_path if self.partial_path.exists() else self.path

    def write(self, block: Mapping[str, np.ndarray]) -> None:
        """Take the rows of a block, in any number; whole chunks go to the disk.

        RunError if they cannot be written; the file is then closed and no more is taken.
        """
        before = dict(self._written)
        with self._giving_up_on_failure():
            for dimension, rows in rows_by_dimension(block).items():
                self._gather(dimension, rows)
            if self._written != before:
                self._flush("order")
                self._file.sync()

    def close(self, outcome: str, end_state: Mapping[str, np.ndarray] | None = None) -> None:
        """Write the rest and close; of a complete run move PATH.partial to PATH. Closing twice does nothing."""
        if self._is_closed:
            return
        with self._giving_up_on_failure():
            for dimension in GROWING_DIMENSIONS:
                self._flush(dimension)
            self._write_end_state(end_state_values(end_state or {}))
            self._file.outcome = outcome
            self._file.close()
        self._is_closed = True
        if outcome == COMPLETE:
            publish(self.partial_path, self.path, self._overwrite, self._identity)
        else:
            bring_to_disk(self.partial_path)

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
        self._file.sync()

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
        length = ORDERS_HELD if dimension == "order" else self._chunks[dimension]
        shapes = {v.name: (length, *(self._sizes[d] for d in v.dimensions[1:])) for v in growing(dimension)}
        dtypes = {v.name: object if v.dtype == "text" else v.dtype for v in growing(dimension)}
        return RowBuffer({name: np.empty(shape, dtypes[name]) for name, shape in shapes.items()}, length)

    def _gather(self, dimension: str, rows: Rows) -> None:
        buffer = self._waiting[dimension]
        total = len(next(iter(rows.values())))
        taken = 0
        while taken < total:
            taken += buffer.take(rows, taken)
            if buffer.is_full:
                self._flush(dimension)

    def _flush(self, dimension: str) -> None:
        """Write the waiting rows. They count as written only when all variables are, so an interrupt loses none."""
        buffer = self._waiting[dimension]
        first, last = self._written[dimension], self._written[dimension] + buffer.count
        if last == first:
            return
        self._check_free_space(buffer)
        for name in reversed(buffer.columns):  # the clock last: a row with a time is whole
            self._file.variables[name][first:last] = buffer.columns[name][: buffer.count]
        self._written[dimension] = last
        buffer.count = 0

    def _check_free_space(self, buffer: "RowBuffer") -> None:
        needed = SPACE_KEPT_FREE + sum(column.nbytes for column in buffer.columns.values())
        free = shutil.disk_usage(self.partial_path.parent).free
        if free < needed:
            raise OSError(f"the disk is full: {free / 1e6:.1f} MB are free")

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
        """Turn a failed write into RunError, with the file closed as well as it can be."""
        try:
            yield
        except (OSError, RuntimeError) as error:  # netCDF4 raises RuntimeError for what HDF5 reports
            reason = f"writing {self.partial_path} failed ({error}); what was written before stays in it"
            self._is_closed = True
            with suppress(OSError, RuntimeError):
                self._file.outcome = f"stopped: {error}"
                self._file.close()
            raise RunError(reason) from error


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


def _chunk_lengths(time_chunk: int, nodes: int) -> dict[str, int]:
    """Rows of a chunk. Profiles in chunks of about 64 KiB, so that they too reach the disk steadily."""
    profile_rows = max(1, min(PROFILE_CHUNK, time_chunk, PROFILE_CHUNK_VALUES // max(nodes, 1)))
    return {"time": time_chunk, "profile_time": profile_rows, "order": 1}

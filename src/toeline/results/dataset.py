"""The run as a labelled dataset: collected in memory, or opened from a file, with the same metadata."""

import os
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from datetime import UTC, datetime, timedelta, timezone, tzinfo
from pathlib import Path
from zoneinfo import ZoneInfo

import netCDF4
import numpy as np
import xarray as xr

from toeline.errors import UsageError
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
from toeline.results.provenance import SOURCE_PREFIX
from toeline.results.soundness import flag_misfit_of, misfit_of
from toeline.results.variables import GROWING_DIMENSIONS, VARIABLES, growing

CHUNK_CACHE = 2**18
"""Bytes for each variable: a chunk or two; the default would keep what is read twice."""

LONG_RUN = 100e6
"""Bytes of a run from which it is not read as a whole."""

PART = 16e6
"""Bytes of values that a finding reads of a long run at once (choice); half a year of minutes is 2e6 at one place."""

KEPT = 2e6
"""Bytes of a variable up to which all of it is kept where one place of it is asked for (choice)."""


class DatasetSink:
    """Collects a run in memory; `dataset` is there once the run has closed the sink."""

    def __init__(self, static: Mapping[str, np.ndarray], attributes: Mapping[str, str], start: datetime):
        self._attributes = dict(attributes)
        self._start = start
        self._static = static_values(static)
        self._sizes = sizes_of(static)
        self._parts: dict[str, list[Rows]] = {dimension: [self._no_rows(dimension)] for dimension in GROWING_DIMENSIONS}
        self._dataset: xr.Dataset | None = None

    @property
    def dataset(self) -> xr.Dataset:
        """The run, decoded, as `open_run` gives it."""
        if self._dataset is None:
            raise RuntimeError("the run has not closed this sink yet")
        return self._dataset

    def write(self, block: Mapping[str, np.ndarray]) -> None:
        """Keep a copy of the rows of a block, in any number."""
        for dimension, rows in rows_by_dimension(block).items():
            self._parts[dimension].append(rows)

    def close(self, outcome: str, end_state: Mapping[str, np.ndarray] | None = None) -> None:
        """Join the rows into the dataset."""
        values = self._static | end_state_values(end_state or {})
        for parts in self._parts.values():
            values |= {name: np.concatenate([rows[name] for rows in parts]) for name in parts[0]}
        self._dataset = self._decoded(values, self._attributes | {"outcome": outcome})

    def _no_rows(self, dimension: str) -> Rows:
        shapes = {v: (0, *(self._sizes[d] for d in v.dimensions[1:])) for v in growing(dimension)}
        return {v.name: np.empty(shape, object if v.dtype == "text" else v.dtype) for v, shape in shapes.items()}

    def _decoded(self, values: Rows, attributes: dict[str, str]) -> xr.Dataset:
        surface_names = surface_names_of(attributes)
        variables = {}
        for name in (name for name in VARIABLES if name in values):
            variable = VARIABLES[name]
            cf = cf_attributes(variable, self._start, surface_names)
            if (fill := fill_value(variable)) is not None:
                cf["_FillValue"] = fill
            array = values[name].astype(str) if variable.dtype == "text" else values[name]
            variables[name] = xr.Variable(variable.dimensions, array, cf)
        return xr.decode_cf(xr.Dataset(variables, attrs=attributes)).load()


def open_run(path: str | os.PathLike[str]) -> xr.Dataset:
    """Open a run file, finished or .partial, values loaded when needed; close it after use, or open it in a `with`.

    Attribute `outcome` says how the run ended. UsageError for a file that is missing, no run of Toeline, or not as this
    version writes it. Values that turn out to be damaged when loaded raise RuntimeError; see `damage_told`.
    """
    file = Path(path)
    if not file.is_file():
        raise UsageError(f"{file} is no file{_hint(file)}")
    netCDF4.set_chunk_cache(CHUNK_CACHE)
    try:
        with damage_told(file):
            run = xr.open_dataset(file, engine="netcdf4")
    except OSError as error:
        raise UsageError(f"{file} is no readable NetCDF file") from error
    except ValueError as error:
        raise UsageError(f"{file} is no readable NetCDF file: {str(error).partition('. ')[0]}") from error
    if not str(run.attrs.get("source", "")).startswith(SOURCE_PREFIX):
        run.close()
        raise UsageError(f"{file} is not the file of a Toeline run")
    with damage_told(file):
        misfit = misfit_of(run)
    if misfit is not None:
        run.close()
        raise _spoilt(file, run, misfit)
    return run


@contextmanager
def read_run(path: str | os.PathLike[str]) -> Iterator[xr.Dataset]:
    """A run file while the with block lasts, with all its values in memory; those of a long run are loaded when needed.

    UsageError as for `open_run`, and where values that are loaded at once are damaged.
    """
    with open_run(path) as run:
        if not is_long(run):
            with damage_told(path):
                run.load()
            if (misfit := flag_misfit_of(run)) is not None:
                raise _spoilt(Path(path), run, misfit)
        yield run


def _spoilt(file: Path, run: xr.Dataset, misfit: str) -> UsageError:
    source = run.attrs["source"]
    return UsageError(f"{file} is spoilt or of another version, {source}: {misfit}; run its day again to read it")


def is_long(run: xr.Dataset) -> bool:
    """Whether a run is so long that nobody should hold all of it."""
    return bool(run.nbytes >= LONG_RUN)


def read_apart(run: xr.Dataset) -> xr.Dataset:
    """The run for one finding of many: what is read of a long one is let go with what is returned, not kept."""
    return run.isel({dimension: slice(None) for dimension in GROWING_DIMENSIONS}) if is_long(run) else run


def in_parts(run: xr.Dataset, place: str, *variables: str) -> Iterator[xr.Dataset]:
    """The run as a few neighbouring places at a time (gate, pool, offtake ...), in their order; a short run as a whole.

    So few that what is in `variables` of them fits into `PART`; it is read anew for each part, and let go with it.
    """
    if not is_long(run):
        yield run
        return
    count = run.sizes[place]
    taken = sum(run[name].nbytes for name in variables)
    step = max(1, int(PART * count / max(taken, 1)))
    for first in range(0, max(count, 1), step):
        yield run.isel({place: slice(first, first + step)})


def values_at(run: xr.Dataset, name: str, places: int | slice) -> np.ndarray:
    """A variable at some of the places along its last dimension; of a series so long that it is not kept, these alone
    are read.
    """
    variable = run[name]
    values: np.ndarray = variable[..., places].values if variable.nbytes > KEPT else variable.values[..., places]
    return values


def rows_at(run: xr.Dataset, name: str, rows: np.ndarray) -> np.ndarray:
    """Rows of a variable along its first dimension, in rising order; of a long run read a block of rows at a time."""
    dimension = str(run[name].dims[0])
    picked, first = [], 0
    for part in in_parts(run, dimension, name):
        inside = rows[(rows >= first) & (rows < first + part.sizes[dimension])]
        picked.append(part[name].values[inside - first])
        first += part.sizes[dimension]
    return np.concatenate(picked)


def values_at_nodes(run: xr.Dataset, name: str, nodes: np.ndarray) -> np.ndarray:
    """A variable along time at some nodes, in rising order; of a long series these and what lies between are read."""
    if not nodes.size:
        return np.empty((run.sizes[run[name].dims[0]], 0))
    return values_at(run, name, slice(int(nodes[0]), int(nodes[-1]) + 1))[:, nodes - nodes[0]]


@contextmanager
def damage_told(path: str | os.PathLike[str]) -> Iterator[None]:
    """UsageError that names the file where what is read of it inside the with block is damaged."""
    try:
        yield
    except (RuntimeError, AttributeError) as error:
        if not str(error).startswith("NetCDF: "):  # netCDF4 raises it for what HDF5 reports, and so may others
            raise
        raise UsageError(f"{path} is damaged and cannot be read: {error}") from error


def _hint(file: Path) -> str:
    partial = file.with_name(file.name + ".partial")
    return f"; an unfinished run is in {partial}" if partial.is_file() else ""


def timezone_of(run: xr.Dataset) -> tzinfo:
    """Time zone in which people read the run: its zone, else the offset of its start."""
    if run.attrs["zone"]:
        return ZoneInfo(run.attrs["zone"])
    offset = datetime.strptime(run.attrs["utc_offset"], "%z").utcoffset()
    return timezone(offset or timedelta(0))


def utc(instant: np.datetime64 | np.ndarray) -> datetime:
    """An instant of the run (one datetime64 value) as an aware time, to the microsecond."""
    naive: datetime = instant.astype("datetime64[us]").item()
    return naive.replace(tzinfo=UTC)


def local_time(run: xr.Dataset, instant: np.datetime64) -> datetime:
    """An instant of the run as people there read it."""
    return utc(instant).astimezone(timezone_of(run))

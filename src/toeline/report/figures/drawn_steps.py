"""Which output steps of a long run a figure draws: a panel has so many points across, and no extreme may be lost."""

from collections.abc import Callable, Iterator, Mapping

import numpy as np
import xarray as xr

MOST_STEPS = 20_000
"""Output steps up to which all are drawn (choice): two weeks of minutes."""

COLUMNS = 1_250
"""Into so many spells of equal length a long run is cut (choice): the points across a panel of a PNG."""

Derived = Callable[[xr.Dataset], Mapping[str, np.ndarray]]

_LEFT_OUT_OF = "output_steps_of_the_run"


def drawn_steps(run: xr.Dataset, *variables: str, derived: Derived | None = None) -> xr.Dataset:
    """The run as a figure draws it from `variables` along time; a run of few steps as it is.

    Of a long one these alone, at the first and the last step of every column, where a series is least and greatest in
    it, and where a flag comes to a value for the first time in it. `derived` gives further series, by name, whose
    extremes are kept too. `run` should hold no more places than are drawn: all of their series are read.
    """
    if run.sizes["time"] <= MOST_STEPS:
        return run
    series, times = run[list(variables)].load(), run["time"].values
    values = [*(series[name].values for name in variables), *(derived(series) if derived else {}).values()]
    rows = np.unique(np.concatenate([shown_rows(each, times) for each in values]))
    drawn = run.drop_dims("time").assign({name: series[name].isel(time=rows) for name in variables})
    return drawn.assign_attrs({_LEFT_OUT_OF: run.sizes["time"]})


def shown_rows(values: np.ndarray, times: np.ndarray) -> np.ndarray:
    """The rows of one series, or of several beside one another, that are to be drawn."""
    columns = values.reshape(len(times), -1).T
    pick = _changed if values.dtype.kind in "ib" else _extreme
    found = [rows for span in _spans(times) for column in columns for rows in pick(column[span], span.start)]
    ends = [row for span in _spans(times) for row in (span.start, span.stop - 1)]
    return np.unique(np.array([*found, *ends], np.intp))


def _spans(times: np.ndarray) -> Iterator[slice]:
    """The rows of every column of time that has any."""
    ends = np.linspace(times[0].astype(np.int64), times[-1].astype(np.int64), COLUMNS + 1)
    borders = np.unique(np.searchsorted(times.astype(np.int64), ends[1:-1]))
    for first, after in zip([0, *borders.tolist()], [*borders.tolist(), len(times)], strict=True):
        if after > first:
            yield slice(first, after)


def _extreme(values: np.ndarray, first: int) -> tuple[int, int]:
    """Where a series is least and greatest; what is missing is neither."""
    missing = np.isnan(values)
    least, greatest = (np.where(missing, end, values) for end in (np.inf, -np.inf))
    return first + int(least.argmin()), first + int(greatest.argmax())


def _changed(flags: np.ndarray, first: int) -> Iterator[int]:
    """Where each value is met first, and the row before."""
    for row in np.unique(flags, return_index=True)[1].tolist():
        yield first + row
        yield first + max(row - 1, 0)


def steps_note(run: xr.Dataset) -> str:
    """What a figure leaves out of the steps, for its small line; nothing where all are drawn."""
    if _LEFT_OUT_OF not in run.attrs:
        return ""
    return f"; drawn: {run.sizes['time']:,} of {run.attrs[_LEFT_OUT_OF]:,} output steps, with all extremes"


def steps_words(run: xr.Dataset) -> str:
    """The same as a sentence for the words of a picture, with a space before it."""
    if _LEFT_OUT_OF not in run.attrs:
        return ""
    return (
        f" Drawn and listed are {run.sizes['time']:,} of {run.attrs[_LEFT_OUT_OF]:,} output steps: the ends of "
        f"{COLUMNS:,} spells of equal length, and the least and the greatest of every series in each. All are in the "
        "file of the run."
    )

"""Reading one series of a run: what its flags mean, for how long each held, and its extremes."""

from dataclasses import dataclass

import numpy as np
import xarray as xr


@dataclass(frozen=True)
class Extreme:
    """The least or greatest value of a series and when it came first; NaN and NaT if the series has no value."""

    value: float
    time: np.datetime64


NO_EXTREME = Extreme(np.nan, np.datetime64("NaT", "ns"))


def least(values: np.ndarray, times: np.ndarray) -> Extreme:
    """The least value; missing values are left out."""
    if not np.isfinite(values).any():
        return NO_EXTREME
    row = int(np.nanargmin(values))
    return Extreme(float(values[row]), times[row])


def greatest(values: np.ndarray, times: np.ndarray) -> Extreme:
    """The greatest value; missing values are left out."""
    worst = least(-values, times)
    return Extreme(-worst.value, worst.time)


def names(labels: xr.DataArray) -> list[str]:
    """Names of gates, pools or offtakes."""
    listed: list[str] = labels.values.tolist()
    return listed


def meanings(flags: xr.DataArray) -> list[str]:
    """What the values 0, 1, 2, ... of a flag variable mean."""
    words: list[str] = flags.attrs["flag_meanings"].split()
    return words


def meanings_seen(flags: xr.DataArray) -> list[str]:
    """The meanings that occur in a flag variable, in the order of its values."""
    return [word for value, word in enumerate(meanings(flags)) if (flags.values == value).any()]


def is_any(flags: xr.DataArray, *wanted: str) -> np.ndarray:
    """Where a flag has one of the wanted meanings."""
    known, values = meanings(flags), flags.values
    holds: np.ndarray = np.logical_or.reduce([values == known.index(meaning) for meaning in wanted])
    return holds


def hours_in_each(flags: xr.DataArray, hours: np.ndarray) -> dict[str, float]:
    """For how many hours a flag series (along time) had each of its meanings; `hours` as from `hours_of_rows`."""
    return {meaning: float(hours[flags.values == value].sum()) for value, meaning in enumerate(meanings(flags))}


def hours_of_rows(times: np.ndarray) -> np.ndarray:
    """The hours for which each row stands: half of the steps beside it. They add up to the length of the run."""
    borders = np.concatenate((times[:1], times[:-1] + np.diff(times) / 2, times[-1:]))
    hours: np.ndarray = np.diff(borders) / np.timedelta64(1, "h")
    return hours

"""The numbers behind a figure as a table: named columns with units, written as CSV."""

import csv
import io
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import meanings
from toeline.results.dataset import local_time
from toeline.units import FILE_UNITS, Dimension, Display, file_factor

DECIMALS = 4


@dataclass(frozen=True)
class Column:
    """One column: its name, its unit ("" where it has none), and its cells as written; "" where there is no value."""

    name: str
    unit: str
    cells: tuple[str, ...]

    @property
    def header(self) -> str:
        return f"{self.name} [{self.unit}]" if self.unit else self.name


@dataclass(frozen=True)
class NumberTable:
    """Columns of one length."""

    columns: tuple[Column, ...]

    def csv_text(self) -> str:
        """A line of headers with units, then a line a row."""
        sheet = io.StringIO(newline="")
        writer = csv.writer(sheet, lineterminator="\n")
        writer.writerow(column.header for column in self.columns)
        writer.writerows(zip(*(column.cells for column in self.columns), strict=True))
        return sheet.getvalue()


def quantity_column(name: str, values: np.ndarray, dimension: Dimension, display: Display) -> Column:
    """SI values in the units of the display, to 4 decimals."""
    unit = FILE_UNITS[dimension][display.system]
    return number_column(name, unit, np.asarray(values, float) / file_factor(dimension, display.system))


def number_column(name: str, unit: str, values: np.ndarray) -> Column:
    """Numbers as they are, to 4 decimals."""
    cells = ("" if np.isnan(value) else f"{round(float(value), DECIMALS) + 0.0:.{DECIMALS}f}" for value in values)
    return Column(name, unit, tuple(cells))


def flag_column(name: str, flags: xr.DataArray) -> Column:
    """What the values of a flag series mean, in words."""
    words = meanings(flags)
    return text_column(name, [words[int(value)].replace("_", " ") for value in flags.values])


def text_column(name: str, words: Sequence[str]) -> Column:
    return Column(name, "", tuple(words))


def time_column(run: xr.Dataset, times: np.ndarray, name: str = "time") -> Column:
    """Local times of the run with their offset from UTC, as in ISO 8601; "" for no time."""
    cells = ("" if np.isnat(time) else local_time(run, time).isoformat(timespec="seconds") for time in times)
    return text_column(name, list(cells))

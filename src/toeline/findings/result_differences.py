"""Where and when the results of two runs are furthest apart, and from when on they differ at all."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import names
from toeline.results.dataset import in_parts


@dataclass(frozen=True)
class Watched:
    """A series that is compared place by place; `least` is the difference from which on runs count as different."""

    variable: str
    words: str
    place: str
    least: float


WATCHED = (
    Watched("gate_opening", "opening", "gate", 0.0005),
    Watched("gate_discharge", "discharge", "gate", 0.005),
    Watched("pool_tail_level", "level at the lower end", "pool", 0.005),
    Watched("pool_head_level", "level at the upper end", "pool", 0.005),
    Watched("jump_end_distance", "distance of the jump's end", "gate", 0.05),
    Watched("delivery", "delivery", "offtake", 0.001),
)
"""Causes before effects. Least differences (choice): half a millimetre of a leaf, half of the centimetre to which
levels are shown, the litre per second of a delivery; 5 L/s and 5 cm of jump, for the time step alone can make less."""


@dataclass(frozen=True)
class ResultDifference:
    """The largest difference, other less first, of one series at one place, and when; values are in `unit`.

    `begins` is the first common time at which the runs differ there.
    """

    quantity: str
    where: str
    unit: str
    difference: float
    time: np.datetime64
    first: float
    other: float
    begins: np.datetime64


def result_differences(first: xr.Dataset, other: xr.Dataset) -> list[ResultDifference]:
    """All series that differ at the times that both runs have; by quantity, then from the head down.

    Where only one of the runs has a value, as of a jump that the other has not, nothing is compared.
    """
    _, rows, other_rows = np.intersect1d(first["time"].values, other["time"].values, return_indices=True)
    return [difference for watched in WATCHED for difference in _of_series(watched, first, other, rows, other_rows)]


def _of_series(
    watched: Watched, first: xr.Dataset, other: xr.Dataset, rows: np.ndarray, other_rows: np.ndarray
) -> Iterator[ResultDifference]:
    """`rows` and `other_rows` are those of the common times."""
    times, unit = first["time"].values[rows], str(first[watched.variable].attrs["units"])
    other_places = set(names(other[watched.place]))
    for part in in_parts(first, watched.place, watched.variable):
        places = [place for place in names(part[watched.place]) if place in other_places]
        before, after = (of[watched.variable].sel({watched.place: places}).values for of in (part, other))
        for column, place in enumerate(places):
            yield from _of_place(watched, place, unit, before[rows, column], after[other_rows, column], times)


def _of_place(
    watched: Watched, place: str, unit: str, first: np.ndarray, other: np.ndarray, times: np.ndarray
) -> Iterator[ResultDifference]:
    difference = other.astype(float) - first
    apart = np.nan_to_num(abs(difference))
    if not (apart > watched.least).any():
        return
    row = int(np.argmax(apart))
    yield ResultDifference(
        watched.words, place, unit, float(difference[row]), times[row], float(first[row]), float(other[row]),
        begins=times[np.argmax(apart > watched.least)],
    )  # fmt: skip

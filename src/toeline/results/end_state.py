"""The state in which a finished run ended, for the next run to start from."""

import os
from collections.abc import Mapping, Sequence
from datetime import datetime

import numpy as np
import xarray as xr

from toeline.errors import UsageError
from toeline.results.dataset import damage_told, open_run, utc
from toeline.results.provenance import COMPLETE
from toeline.results.variables import CLOCK, end_state

STATION_TOLERANCE = 0.001
"""Stations and bed levels of one canal agree to a millimetre (choice)."""


def read_end_state(
    path: str | os.PathLike[str],
    *,
    start: datetime,
    chainage: np.ndarray,
    bed_level: np.ndarray,
    labels: Mapping[str, Sequence[str]],
) -> dict[str, np.ndarray]:
    """The end state of the run in `path`, as it was given to the sink, but for `end_time`.

    `start` is the aware time at which the next run begins, `chainage` and `bed_level` [m] those of its nodes, `labels`
    its gates, bays that move apart and offtakes, each from the head down. UsageError if the run is unfinished, ended at
    another time, or was of another canal.
    """
    with open_run(path) as run, damage_told(path):
        _check_finished(run, path)
        _check_time(run, path, start)
        _check_canal(run, path, chainage, bed_level, labels)
        kept = [variable for variable in end_state() if variable.unit != CLOCK]
        return {v.name: run[v.name].values.astype(str if v.dtype == "text" else v.dtype) for v in kept}


def _check_finished(run: xr.Dataset, path: str | os.PathLike[str]) -> None:
    outcome = run.attrs["outcome"]
    if outcome != COMPLETE:
        raise UsageError(f"{path} is no finished run to start from; its outcome is {outcome!r}")
    missing = [variable.name for variable in end_state() if variable.name not in run]
    if missing:
        raise UsageError(f"{path} holds no end state to start from, or one of another version: {missing[0]} is missing")


def _check_time(run: xr.Dataset, path: str | os.PathLike[str], start: datetime) -> None:
    end = utc(run["end_time"].values)
    if end != start:
        there = end.astimezone(start.tzinfo).isoformat()
        raise UsageError(f"{path} ends at {there}, but the period starts at {start.isoformat()}; they must be equal")


def _check_canal(
    run: xr.Dataset,
    path: str | os.PathLike[str],
    chainage: np.ndarray,
    bed_level: np.ndarray,
    labels: Mapping[str, Sequence[str]],
) -> None:
    for dimension, expected_names in labels.items():
        names = run[dimension].values.tolist()
        if names != list(expected_names):
            raise UsageError(
                f"{path} is a run of another canal: its {dimension}s are {names}, not {list(expected_names)}"
            )
    if run.sizes["node"] != len(chainage):
        raise UsageError(
            f"{path} has {run.sizes['node']} nodes, this canal {len(chainage)}: another canal, or another spacing"
        )
    for name, expected in (("chainage", chainage), ("bed_level", bed_level)):
        difference = np.abs(run[name].values - expected)
        worst = int(np.argmax(difference))
        if difference[worst] > STATION_TOLERANCE:
            raise UsageError(
                f"{path} is a run of another canal: {name} of node {worst} is {run[name].values[worst]:.3f} m there, "
                f"{expected[worst]:.3f} m here"
            )

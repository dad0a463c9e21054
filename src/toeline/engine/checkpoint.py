"""A run between two of its stops as plain arrays, from which it goes on to the last bit as if it had never stopped.

The end state lets another day go on; this lets the same day go on. All that the time loop changes is kept as it is,
so that what it learns to remember is kept too.
"""

import json
from collections.abc import Iterator
from typing import Any

import numpy as np

from toeline.engine.run import Run

Checkpoint = dict[str, np.ndarray]
"""Arrays by name, fit for a file: numbers, records of numbers and text."""

_PEOPLE = "people"


def checkpoint_of(run: Run) -> Checkpoint:
    """The run at a stop, before anything is done there; its rows must have been handed on."""
    arrays = {name: np.array(array) for name, array in _arrays(run)}
    people = {"time": run.time, "roughness_left": len(run.roughness), **run.operations.checkpoint()}
    return arrays | {_PEOPLE: np.array(json.dumps(people, default=float))}


def go_on_from(run: Run, checkpoint: Checkpoint) -> None:
    """Bring a new run of the same day to a checkpoint."""
    for name, array in _arrays(run):
        array[...] = checkpoint[name]
    people: dict[str, Any] = json.loads(str(checkpoint[_PEOPLE]))
    run.time = people["time"]
    run.roughness = run.roughness[len(run.roughness) - people["roughness_left"] :]
    run.network.set_roughness(run.watch.roughness_factor)
    run.operations.go_on_from(people)


def _arrays(run: Run) -> Iterator[tuple[str, np.ndarray]]:
    """Every array that the time loop changes, by a name."""
    for group in ("state", "middle", "after", "work", "totals", "watch"):
        for field, array in getattr(run, group)._asdict().items():
            yield f"{group}_{field}", array
    yield "forcing", run.forcing
    yield "pace", run.pace

"""How often each gate was moved, by whom, and how restlessly."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import is_any, names

SCHEDULE = "schedule"
"""Source of the orders of a plan; those of a rule carry its kind."""

HOUR = np.timedelta64(1, "h")
LEAST_MOVE = 1e-6
"""Change of opening [m] below which nothing moved; openings are stored in single precision."""


@dataclass(frozen=True)
class GateMoves:
    """The moves of one gate over the whole run.

    `by_source` counts them by who gave the order; `busiest` is the greatest number that began within an hour, from
    `busiest_from` on; `travel` [m] is the sum of all changes of opening; a reversal is a move against the one before of
    the same leaf.
    """

    gate: str
    by_source: dict[str, int]
    busiest: int
    busiest_from: np.datetime64
    travel: float
    reversals: int

    @property
    def moves(self) -> int:
        return sum(self.by_source.values())


def gate_moves(run: xr.Dataset) -> list[GateMoves]:
    """All gates from the head down; orders that were refused or changed nothing are no moves."""
    change = (run["order_opening_after"] - run["order_opening_before"]).values.astype(float)
    is_move = ~is_any(run["order_status"], "refused") & (np.abs(change) > LEAST_MOVE)
    gates = run["order_gate"].values
    return [_of_gate(name, run.isel(order=is_move & (gates == name))) for name in names(run["gate"])]


def _of_gate(gate: str, moves: xr.Dataset) -> GateMoves:
    began, bays = moves["order_time"].values, moves["order_bay"].values
    change = (moves["order_opening_after"] - moves["order_opening_before"]).values.astype(float)
    counted = np.unique(moves["order_source"].values.astype(str), return_counts=True)
    within = np.searchsorted(began, began + HOUR, side="left") - np.arange(began.size)
    first = int(np.argmax(within)) if began.size else 0
    return GateMoves(
        gate=gate,
        by_source=dict(zip(counted[0].tolist(), counted[1].tolist(), strict=True)),
        busiest=int(within[first]) if began.size else 0,
        busiest_from=began[first] if began.size else np.datetime64("NaT", "ns"),
        travel=float(np.abs(change).sum()),
        reversals=sum(_reversals(change[bays == bay]) for bay in np.unique(bays)),
    )


def _reversals(change: np.ndarray) -> int:
    return int(np.count_nonzero(change[1:] * change[:-1] < 0.0))

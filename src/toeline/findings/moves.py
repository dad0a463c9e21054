"""How often each gate was moved, by whom, and how restlessly."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import is_any, names

SCHEDULE = "schedule"
"""Source of the orders of a plan; those of a rule carry its kind."""

_OF_ORDERS = ("order_time", "order_bay", "order_source", "order_opening_before", "order_opening_after")

HOUR = np.timedelta64(1, "h")
LEAST_MOVE = 1e-6
"""Change of opening [m] below which nothing moved; openings are stored in single precision."""


@dataclass(frozen=True)
class GateMoves:
    """The moves of one gate over the whole run; one order or decision is one move, however many bays it moves.

    `by_source` counts them by who gave the order; `busiest` is the greatest number that began within an hour, from
    `busiest_from` on; `travel` [m] is the sum of all changes of opening, the mean over bays that move apart; a reversal
    is a move against the one before of the same leaf.
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
    return [_of_gate(gate, run) for gate in names(run["gate"])]


def moves_begun(run: xr.Dataset, gate: str) -> np.ndarray:
    """When moves of a gate began (datetime64); what several bays begin together is one move."""
    begun: np.ndarray = np.unique(_leaf_moves(run, gate)["order_time"].values)
    return begun


def leaf_count(run: xr.Dataset, gate: str) -> int:
    """How many leaves of a gate move apart; 1 where its bays move together."""
    return max(names(run["bay_gate"]).count(gate), 1)


def _leaf_moves(run: xr.Dataset, gate: str) -> xr.Dataset:
    """The orders of a run that moved a leaf of a gate."""
    is_move = ~is_any(run["order_status"], "refused") & (np.abs(_changes(run)) > LEAST_MOVE)
    return run[list(_OF_ORDERS)].isel(order=is_move & (run["order_gate"].values == gate))


def _changes(run: xr.Dataset) -> np.ndarray:
    """Change of opening [m] by every order."""
    change: np.ndarray = (run["order_opening_after"] - run["order_opening_before"]).values.astype(float)
    return change


def _of_gate(gate: str, run: xr.Dataset) -> GateMoves:
    moves, began = _leaf_moves(run, gate), moves_begun(run, gate)
    bays, sources, change = moves["order_bay"].values, moves["order_source"].values.astype(str), _changes(moves)
    within = np.searchsorted(began, began + HOUR, side="left") - np.arange(began.size)
    first = int(np.argmax(within)) if began.size else 0
    return GateMoves(
        gate=gate,
        by_source={
            str(source): np.unique(moves["order_time"].values[sources == source]).size for source in np.unique(sources)
        },
        busiest=int(within[first]) if began.size else 0,
        busiest_from=began[first] if began.size else np.datetime64("NaT", "ns"),
        travel=float(np.abs(change).sum()) / leaf_count(run, gate),
        reversals=sum(_reversals(change[bays == bay]) for bay in np.unique(bays)),
    )


def _reversals(change: np.ndarray) -> int:
    return int(np.count_nonzero(change[1:] * change[:-1] < 0.0))

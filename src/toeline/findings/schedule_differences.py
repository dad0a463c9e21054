"""How the gate schedules of two runs differ: orders moved in time, changed in size, added and dropped, gate by gate.

Moves that an operating rule made are no orders of a schedule; they are counted.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.input_differences import InputDifference, plan_differences
from toeline.findings.moves import SCHEDULE, gate_moves
from toeline.findings.series import meanings, names

_UNPAIRED_HOURS = 1.5
_OTHER_VALUE_HOURS = 0.5
_OTHER_SENSE_HOURS = 2.0
"""What pairing two orders costs, in hours between them (choice): orders of one kind are told as one that was changed
where less than three hours, twice the cost of an order alone, lie between them; a pair of other kind or sense must lie
nearer."""


@dataclass(frozen=True)
class GateOrder:
    """One order as it was asked: `value` is in m, or m³/s where `kind` is discharge; `opening_before` [m] is that when
    it came; `bay` is 0 where all bays of the gate move. `status` says what became of it, `opening_after` [m] where it
    left the leaf.
    """

    time: np.datetime64
    gate: str
    kind: str
    value: float
    opening_before: float
    bay: int = 0
    status: str = "accepted"
    opening_after: float = float("nan")

    @property
    def leaf(self) -> str:
        """What is moved, in words."""
        return f"{self.gate}, bay {self.bay}" if self.bay else self.gate

    @property
    def change(self) -> float:
        """By how much the opening was to change [m]: positive opens; NaN where a discharge is ordered."""
        if self.kind == "by":
            return self.value
        return self.value - self.opening_before if self.kind == "opening" else float("nan")

    @property
    def is_refused(self) -> bool:
        return self.status == "refused"

    def asks_as(self, other: "GateOrder") -> bool:
        """Whether another order asks for the same, at whatever time."""
        return (self.kind, self.value) == (other.kind, other.value)


@dataclass(frozen=True)
class OrderDifference:
    """An order to a gate, or to one bay of it, of the first run and what stands in its place in the other; None where
    there is none.
    """

    gate: str
    first: GateOrder | None
    other: GateOrder | None


@dataclass(frozen=True)
class RuleMoves:
    """How often a rule moved a gate in the first run and in the other."""

    rule: str
    gate: str
    first: int
    other: int


@dataclass(frozen=True)
class ScheduleDifference:
    """How two plans differ: in orders, by gate from the head down, with how many are alike; in what else they say, as
    rules and stuck leaves; and in the moves that rules made.
    """

    orders: tuple[OrderDifference, ...]
    alike: int
    rule_moves: tuple[RuleMoves, ...]
    beside_orders: tuple[InputDifference, ...] = ()


def schedule_difference(first: xr.Dataset, other: xr.Dataset) -> ScheduleDifference:
    """Lay the orders of two runs side by side. Both must be of one canal, and by one clock."""
    before, after = _orders(first), _orders(other)
    differences: list[OrderDifference] = []
    alike = 0
    for leaf in _leaves([*before, *after], _gates(first, other)):
        paired = paired_orders(*([order for order in orders if order.leaf == leaf] for orders in (before, after)))
        changed = [pair for pair in paired if not _is_alike(*pair)]
        alike += len(paired) - len(changed)
        differences += [OrderDifference(leaf, *pair) for pair in changed]
    moves, beside_orders = _rule_moves(first, other), plan_differences(first, other)
    return ScheduleDifference(tuple(differences), alike, tuple(moves), tuple(beside_orders))


Pair = tuple[GateOrder | None, GateOrder | None]


def paired_orders(first: Sequence[GateOrder], other: Sequence[GateOrder]) -> list[Pair]:
    """Pair the orders of one leaf, both in time order, so that together the pairs lie nearest.

    An order without a partner stands beside None. Pairs do not cross, and come in time order.
    """
    cost = np.zeros((len(first) + 1, len(other) + 1))
    cost[:, 0], cost[0, :] = _UNPAIRED_HOURS * np.arange(len(first) + 1), _UNPAIRED_HOURS * np.arange(len(other) + 1)
    for row, before in enumerate(first):
        for column, after in enumerate(other):
            alone = _UNPAIRED_HOURS + min(cost[row, column + 1], cost[row + 1, column])
            cost[row + 1, column + 1] = min(alone, cost[row, column] + _hours_between(before, after))
    return _pairs_of_least_cost(first, other, cost)


def _pairs_of_least_cost(first: Sequence[GateOrder], other: Sequence[GateOrder], cost: np.ndarray) -> list[Pair]:
    """Go back from the end along the pairs that made up the least cost."""
    pairs: list[Pair] = []
    row, column = len(first), len(other)
    while row or column:
        if (
            row
            and column
            and cost[row, column] == cost[row - 1, column - 1] + _hours_between(first[row - 1], other[column - 1])
        ):
            row, column = row - 1, column - 1
            pairs.append((first[row], other[column]))
        elif row and cost[row, column] == _UNPAIRED_HOURS + cost[row - 1, column]:
            row -= 1
            pairs.append((first[row], None))
        else:
            column -= 1
            pairs.append((None, other[column]))
    pairs.reverse()
    return sorted(pairs, key=_time_of)


def _time_of(pair: Pair) -> np.datetime64:
    return min(order.time for order in pair if order is not None)


def _hours_between(first: GateOrder, other: GateOrder) -> float:
    """How far two orders are apart, in hours, with what they ask for counted in."""
    hours = abs(float((other.time - first.time) / np.timedelta64(1, "h")))
    if first.asks_as(other):
        return hours
    is_of_other_sense = first.kind != other.kind or (first.kind == "by" and first.value * other.value < 0.0)
    return hours + (_OTHER_SENSE_HOURS if is_of_other_sense else _OTHER_VALUE_HOURS)


def _is_alike(first: GateOrder | None, other: GateOrder | None) -> bool:
    if first is None or other is None or first.is_refused != other.is_refused:
        return False
    return first.time == other.time and first.asks_as(other)


def _orders(run: xr.Dataset) -> list[GateOrder]:
    """Orders of the schedule, without the moves that rules made."""
    kinds, statuses = meanings(run["order_kind"]), meanings(run["order_status"])
    columns = ("value", "opening_before", "bay", "status", "opening_after")
    return [
        GateOrder(time, gate, kinds[int(kind)], float(value), float(before), int(bay), statuses[int(status)],
                  float(after))
        for time, gate, kind, source, value, before, bay, status, after in zip(
            run["order_time"].values, names(run["order_gate"]), run["order_kind"].values, names(run["order_source"]),
            *(run[f"order_{column}"].values for column in columns), strict=True,
        )
        if source == SCHEDULE
    ]  # fmt: skip


def _leaves(orders: Sequence[GateOrder], gates: Sequence[str]) -> list[str]:
    """What the orders move: gates from the head down, bays of a gate from the left."""
    placed = sorted(orders, key=lambda order: (gates.index(order.gate), order.bay))
    return list(dict.fromkeys(order.leaf for order in placed))


def _rule_moves(first: xr.Dataset, other: xr.Dataset) -> list[RuleMoves]:
    before, after = _moves_by_rules(first), _moves_by_rules(other)
    places = {gate: place for place, gate in enumerate(_gates(first, other))}
    moved = sorted(before.keys() | after.keys(), key=lambda move: (move[0], places[move[1]]))
    return [RuleMoves(*move, before.get(move, 0), after.get(move, 0)) for move in moved]


def _moves_by_rules(run: xr.Dataset) -> dict[tuple[str, str], int]:
    """How often each rule moved each gate."""
    return {
        (source, gate.gate): count
        for gate in gate_moves(run)
        for source, count in gate.by_source.items()
        if source != SCHEDULE
    }


def _gates(first: xr.Dataset, other: xr.Dataset) -> list[str]:
    """Gates of either run, from the head down."""
    return list(dict.fromkeys([*names(first["gate"]), *names(other["gate"])]))

"""From orders to openings: travel, hoist speed, smallest move and avoided bands, in one place, and a list of what was
done.
"""

import math
from dataclasses import dataclass

from toeline.scenario import Order
from toeline.scenario.schema.gates import Gate

ACCEPTED, TRIMMED, REFUSED, REPLACED = range(4)
KINDS = ("opening", "by", "discharge")

SAME_OPENING = 1e-9


@dataclass
class OrderRecord:
    """What became of one order; times in ms from the start of the period."""

    time: int
    gate: str
    kind: str
    value: float
    before: float
    after: float
    completed: float
    status: int
    reason: str
    bay: int = 0
    is_final: bool = False


class GateMotion:
    """One leaf: where it is, where it goes, and the orders it was given; `bay` from 1, 0 for all bays of the gate."""

    def __init__(self, gate: Gate, opening: float, bay: int = 0):
        self.gate, self.bay = gate, bay
        self.opening = opening
        self.target = opening
        self.ordered = opening
        self.since = 0
        self.until = 0
        self.current: OrderRecord | None = None

    @property
    def is_moving(self) -> bool:
        return self.opening != self.target

    def opening_at(self, time: int) -> float:
        """Opening [m] at a time [ms] not before the last stop."""
        if not self.is_moving or time >= self.until:
            return self.target
        share = (time - self.since) / (self.until - self.since)
        return self.opening + share * (self.target - self.opening)

    def rate(self) -> float:
        """Rate of opening [m/s] while it moves."""
        return (self.target - self.opening) * 1000.0 / (self.until - self.since) if self.is_moving else 0.0

    def arrive(self, time: int) -> None:
        """Bring the leaf to where it is at a stop."""
        self.opening = self.opening_at(time)
        self.since = max(self.since, time)
        if not self.is_moving:
            self._finish(time)

    def remaining(self, time: int) -> int:
        """Time [ms] for which the leaf still moves."""
        return max(self.until - time, 0) if self.is_moving else 0

    def resume(self, target: float, ordered: float, remaining: int) -> None:
        """Go on with a move that was under way when the day before ended."""
        self.ordered = ordered
        if remaining > 0:
            self.target, self.since, self.until = target, 0, remaining

    def order(self, time: int, kind: str, value: float, wanted: float, note: str = "") -> OrderRecord:
        """Take an order whose wanted opening [m] is known; `note` says how it fell short already."""
        target, status, reason = allowed_opening(self.gate, wanted, self.ordered)
        if note and status != REFUSED:
            status, reason = TRIMMED, "; ".join(part for part in (note, reason) if part)
        record = OrderRecord(
            time, self.gate.name, kind, value, self.opening, target, math.nan, status, reason, self.bay
        )  # fmt: skip
        if status == REFUSED:
            record.after, record.is_final = self.ordered, True
            return record
        self._replace(time)
        self.ordered = self.target = target
        self.since, self.until = time, time + self._travel_time(abs(target - self.opening))
        self.current = record
        if self.until == time:
            self.opening = target
            self._finish(time)
        return record

    def not_reached(self, order: Order) -> OrderRecord:
        """The record of an order that comes after the end of the period."""
        reason = "comes after the end of the period"
        return OrderRecord(
            order.at,
            order.gate,
            order.kind,
            order.value,
            self.opening,
            self.ordered,
            math.nan,
            REFUSED,
            reason,
            self.bay,
            True,
        )

    def end_of_day(self) -> None:
        """Close the record of a move that the day's end interrupts."""
        if self.current is not None:
            note = "still moving at the end of the period"
            self.current.reason = "; ".join(part for part in (self.current.reason, note) if part)
            self.current.is_final = True

    def _travel_time(self, distance: float) -> int:
        speed = self.gate.hoist_speed
        return 0 if speed is None or distance <= SAME_OPENING else math.ceil(distance / speed * 1000.0 - 1e-6)

    def _finish(self, time: int) -> None:
        if self.current is not None:
            self.current.completed, self.current.is_final = time, True
            self.current = None

    def _replace(self, time: int) -> None:
        if self.current is not None:
            self.current.status = REPLACED
            self.current.reason = f"the next order came at an opening of {self.opening:.3f} m"
            self.current.completed, self.current.after, self.current.is_final = time, self.opening, True
            self.current = None


def allowed_opening(gate: Gate, wanted: float, ordered: float) -> tuple[float, int, str]:
    """The opening [m] that a gate may be held at nearest to the wanted one, the status and the reason of any
    difference.
    """
    target, reasons = wanted, []
    if not 0.0 <= target <= gate.max_opening:
        target = min(max(target, 0.0), gate.max_opening)
        reasons.append(f"travel is 0 to {gate.max_opening:.3f} m")
    for low, high in gate.avoid_openings:
        if low < target < high and target > 0.0:
            edge = low if target - low < high - target or high > gate.max_opening else high
            reasons.append(f"openings between {low:.3f} and {high:.3f} m are not held")
            target = edge
    move = abs(target - ordered)
    is_wanted = move > 0.0 or target != wanted
    if is_wanted and move < gate.smallest_move - SAME_OPENING:
        reasons.append(f"a move of {move:.3f} m is smaller than the smallest, {gate.smallest_move:.3f} m")
        return ordered, REFUSED, "; ".join(reasons)
    return target, TRIMMED if reasons else ACCEPTED, "; ".join(reasons)

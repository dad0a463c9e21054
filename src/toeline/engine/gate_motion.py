"""From orders and proposals to openings: the one place that knows travel, hoist, smallest and largest moves, moves an
hour, avoided bands, marks and stuck leaves; and the record of what was done.
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any, NamedTuple

from toeline.network.timetable import HOUR_MS, Marks
from toeline.scenario import Order, Stuck
from toeline.scenario.schema.gates import Gate

ACCEPTED, TRIMMED, REFUSED, REPLACED = range(4)
KINDS = ("opening", "by", "discharge")
SCHEDULE = "schedule"
"""Source of the orders of a plan; those of a rule carry its kind."""

SAME_OPENING = 1e-9

_OF_A_LEAF = ("opening", "target", "ordered", "since", "until", "moves")
"""What changes of a leaf during a day, beside its order."""


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
    source: str = SCHEDULE
    is_final: bool = False
    bay: int = 0


class Allowed(NamedTuple):
    """The opening [m] nearest to a wanted one at which the leaf may be held, and why it is another.

    `is_limited` says that travel or the largest move stood in the way; `rounding` names the marks it was rounded to.
    """

    opening: float
    status: int
    reason: str
    is_limited: bool
    rounding: str


class GateMotion:
    """One leaf: where it is, where it goes, and the orders it was given; `bay` from 1, 0 where it stands for all."""

    def __init__(
        self, gate: Gate, opening: float, marks: Marks | None = None, stuck: Sequence[Stuck] = (), bay: int = 0
    ):
        self.gate, self.marks, self.stuck, self.bay = gate, marks, stuck, bay
        self.opening = opening
        self.target = opening
        self.ordered = opening
        self.since = 0
        self.until = 0
        self.moves: list[int] = []
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
        if self.current is None and self.opening == self.target:
            return
        self.opening = self.opening_at(time)
        self.since = max(self.since, time)
        if not self.is_moving:
            self._finish(time)

    def halt_if_stuck(self, time: int) -> None:
        """End a move that a stuck leaf does not let go on."""
        if not self.is_moving or not self.is_stuck(time):
            return
        self.target = self.ordered = self.opening
        if self.current is not None:
            self.current.status, self.current.after = TRIMMED, self.opening
            self.current.reason = _joined(self.current.reason, f"the leaf stuck at an opening of {self.opening:.3f} m")
        self._finish(time)

    def is_stuck(self, time: int) -> bool:
        """Whether the leaf cannot be moved at a time [ms]."""
        return self._stuck_until(time) is not None

    def remaining(self, time: int) -> int:
        """Time [ms] for which the leaf still moves."""
        return max(self.until - time, 0) if self.is_moving else 0

    def resume(self, target: float, ordered: float, remaining: int, moves: Sequence[int] = ()) -> None:
        """Go on with a move that was under way when the day before ended; `moves` began at these times [ms], none after
        the start.
        """
        self.ordered, self.moves = ordered, list(moves)
        if remaining > 0:
            self.target, self.since, self.until = target, 0, remaining

    def moves_within_an_hour(self, time: int) -> list[int]:
        """When the moves of the last hour began [ms]."""
        return [begun for begun in self.moves if begun > time - HOUR_MS]

    def checkpoint(self, records: Sequence[OrderRecord]) -> dict[str, Any]:
        """Where the leaf is and goes, and the place of its order among `records`; fit for JSON."""
        order = next((place for place, record in enumerate(records) if record is self.current), None)
        return {name: getattr(self, name) for name in _OF_A_LEAF} | {"order": order}

    def go_on_from(self, kept: dict[str, Any], records: Sequence[OrderRecord]) -> None:
        """Bring the leaf of a new run of the same day to a checkpoint."""
        for name in _OF_A_LEAF:
            setattr(self, name, kept[name])
        self.current = None if kept["order"] is None else records[kept["order"]]

    def order(self, time: int, kind: str, value: float, wanted: float, note: str = "") -> OrderRecord:
        """Take an order whose wanted opening [m] is known; `note` says how it fell short already."""
        allowed = allowed_opening(self.gate, wanted, self.ordered, self.marks)
        refusal = self._refusal(time)
        if refusal or allowed.status == REFUSED:
            return self._refuse(time, kind, value, refusal or allowed.reason, SCHEDULE)
        reason = _joined(note, allowed.reason, allowed.rounding)
        return self._begin(time, kind, value, allowed.opening, reason, SCHEDULE)

    def propose(self, time: int, source: str, wanted: float) -> tuple[OrderRecord | None, bool]:
        """Take the opening [m] that a rule wants; gives the record, and whether something stood in the way.

        A proposal that moves nothing, because the move would be too small or would end where the leaf is held already,
        leaves no record: the rule carries it over.
        """
        allowed = allowed_opening(self.gate, wanted, self.ordered, self.marks)
        if allowed.status == REFUSED or abs(allowed.opening - self.ordered) <= SAME_OPENING:
            return None, allowed.is_limited
        refusal = self._refusal(time)
        if refusal:
            return self._refuse(time, "opening", wanted, refusal, source), True
        record = self._begin(time, "opening", wanted, allowed.opening, allowed.reason, source)
        return record, allowed.is_limited

    def not_reached(self, order: Order) -> OrderRecord:
        """The record of an order that comes after the end of the period."""
        return self._refuse(order.at, order.kind, order.value, "comes after the end of the period", SCHEDULE)

    def end_of_day(self) -> None:
        """Close the record of a move that the day's end interrupts."""
        if self.current is not None:
            self.current.reason = _joined(self.current.reason, "still moving at the end of the period")
            self.current.is_final = True

    def _refusal(self, time: int) -> str:
        """Why the leaf cannot be moved at a time; empty where it can."""
        until = self._stuck_until(time)
        if until is not None:
            return f"the leaf is stuck for another {(until - time) / 60_000:.0f} min"
        most = self.gate.moves_per_hour
        if most is not None and len(self.moves_within_an_hour(time)) >= most:
            return f"{most} moves in an hour are the most"
        return ""

    def _stuck_until(self, time: int) -> int | None:
        for spell in self.stuck:
            if spell.begin <= time < spell.end:
                return spell.end
        return None

    def _refuse(self, time: int, kind: str, value: float, reason: str, source: str) -> OrderRecord:
        return OrderRecord(
            time, self.gate.name, kind, value, self.opening, self.ordered, math.nan, REFUSED, reason, source, True,
            self.bay,
        )  # fmt: skip

    def _begin(self, time: int, kind: str, value: float, target: float, reason: str, source: str) -> OrderRecord:
        status = TRIMMED if reason else ACCEPTED
        record = OrderRecord(
            time, self.gate.name, kind, value, self.opening, target, math.nan, status, reason, source, bay=self.bay
        )  # fmt: skip
        self._replace(time)
        self.ordered = self.target = target
        self.since = time
        distance = abs(target - self.opening)
        self.until = time + self._travel_time(distance)
        if self.until == time:
            self.opening = target
        self.current = record
        if distance > SAME_OPENING:
            self.moves = [*self.moves_within_an_hour(time), time]
        if not self.is_moving:
            self._finish(time)
        return record

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


def allowed_opening(gate: Gate, wanted: float, ordered: float, marks: Marks | None = None) -> Allowed:
    """The opening [m] at which a gate may be held nearest to the wanted one, `ordered` [m] being the one held now."""
    target, reasons = _within_reach(gate, wanted, ordered)
    is_limited, held, rounding = bool(reasons), target, ""
    if gate.avoid_openings or marks is not None:
        reasons += [
            f"openings between {low:.3f} and {high:.3f} m are not held" for low, high in _bands_around(gate, target)
        ]
        reach = _reach(gate) + SAME_OPENING
        in_reach = [place for place in _places(gate, target, marks) if abs(place - ordered) <= reach]
        held = min(in_reach, key=lambda place: abs(place - target), default=ordered)
    if marks is not None and abs(held - target) > SAME_OPENING:
        rounding = f"rounded to {marks.name} of {marks.spacing:.3f} m"
    move = abs(held - ordered)
    is_wanted = move > 0.0 or held != wanted
    if is_wanted and move < gate.smallest_move - SAME_OPENING:
        reasons.append(f"a move of {move:.3f} m is smaller than the smallest, {gate.smallest_move:.3f} m")
        return Allowed(ordered, REFUSED, "; ".join(reasons), is_limited, rounding)
    return Allowed(held, TRIMMED if reasons or rounding else ACCEPTED, "; ".join(reasons), is_limited, rounding)


def _reach(gate: Gate) -> float:
    """The largest move [m]."""
    return math.inf if gate.largest_move is None else gate.largest_move


def _within_reach(gate: Gate, wanted: float, ordered: float) -> tuple[float, list[str]]:
    """The wanted opening [m] cut to travel and to the largest move, and what cut it."""
    target, reasons = wanted, []
    if not 0.0 <= target <= gate.max_opening:
        target = min(max(target, 0.0), gate.max_opening)
        reasons.append(f"travel is 0 to {gate.max_opening:.3f} m")
    reach = _reach(gate)
    if abs(target - ordered) > reach + SAME_OPENING:
        target = ordered + math.copysign(reach, target - ordered)
        reasons.append(f"one move is at most {reach:.3f} m")
    return target, reasons


def _bands_around(gate: Gate, opening: float) -> list[tuple[float, float]]:
    """Avoided bands inside which an opening [m] lies; closed lies in none."""
    return [(low, high) for low, high in gate.avoid_openings if low < opening < high and opening > 0.0]


def _places(gate: Gate, target: float, marks: Marks | None) -> Iterator[float]:
    """Openings around a target within travel that may be held: itself or the edges of its band, or the marks there."""
    near = [target, *(edge for low, high in _bands_around(gate, target) for edge in (high, low))]
    if marks is not None:
        step = marks.spacing
        near = [number * step for edge in near for number in _numbers_beside(edge / step)]
        near += [gate.max_opening] if abs(gate.max_opening - target) < step else []
    for place in near:
        if 0.0 <= place <= gate.max_opening and not _bands_around(gate, place):
            yield place


def _numbers_beside(number: float) -> tuple[int, int]:
    """The whole numbers above and below, the same twice for one that is whole but for rounding."""
    return math.ceil(number - 1e-9), math.floor(number + 1e-9)


def _joined(*reasons: str) -> str:
    return "; ".join(reason for reason in reasons if reason)

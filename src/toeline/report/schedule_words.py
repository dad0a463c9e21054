"""How gate schedules differ, in words: "B raises Mill check by 6 cm at 07:20 instead of 10 cm at 07:00"."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import groupby

import numpy as np

from toeline.findings.schedule_differences import GateOrder, OrderDifference, RuleMoves, ScheduleDifference
from toeline.report.clock import duration_text
from toeline.report.layout import counted
from toeline.report.plan_words import plan_words
from toeline.report.run_clock import RunClock
from toeline.results.provenance import RULES
from toeline.units import Display

MOST_TOLD = 12
"""With more differences than this every gate is summed up in one line."""

_SIDES = ("first", "other")

HELD = 0.0005
"""Change of opening [m] below which an order holds a gate as it stands."""


def schedule_words(letter: str, difference: ScheduleDifference, clock: RunClock, display: Display) -> Iterator[str]:
    """One sentence a difference; of many, one a gate."""
    if len(difference.orders) > MOST_TOLD:
        yield from _summaries(difference.orders)
    else:
        yield from (order_difference_words(letter, order, clock, display) for order in difference.orders)
    yield from plan_words(letter, difference.beside_orders, clock, display)
    dropped = {one.path[1] for one in difference.beside_orders if one.path[0] == RULES and one.other is None}
    moved = [moves for moves in difference.rule_moves if moves.first != moves.other and moves.rule not in dropped]
    for rule, group in groupby(moved, key=lambda moves: moves.rule):
        yield f"{letter}: under the rule {rule} {', '.join(_move_words(moves) for moves in group)}"


def order_difference_words(letter: str, difference: OrderDifference, clock: RunClock, display: Display) -> str:
    """What the run of this letter does instead of the first, as it was ordered, and where it was not done so; `letter`
    begins the sentence.
    """
    first, other = difference.first, difference.other
    outcomes = [f"refused in {letter}" if other is not None and other.is_refused else ""]
    outcomes += ["refused in the first" if first is not None and first.is_refused else ""]
    outcomes += [f"trimmed to {display.opening(other.opening_after)}" if other and other.status == "trimmed" else ""]
    told = "; ".join(filter(None, outcomes))
    return _asked_words(letter, difference, clock, display) + (f" ({told})" if told else "")


def _asked_words(letter: str, difference: OrderDifference, clock: RunClock, display: Display) -> str:
    first, other, gate = difference.first, difference.other, difference.gate
    if other is None and first is not None:
        return f"{letter} does not {_Asked.by(first, display).infinitive(gate)} at {clock.at(first.time)}"
    if first is None and other is not None:
        return f"{letter} also {_Asked.by(other, display).statement(gate)} at {clock.at(other.time)}"
    if first is None or other is None:
        raise ValueError("a difference needs an order on one side at least")
    return f"{letter} {_changed_words(gate, first, other, clock, display)}"


def _changed_words(gate: str, first: GateOrder, other: GateOrder, clock: RunClock, display: Display) -> str:
    before, after = _Asked.by(first, display), _Asked.by(other, display)
    times = clock.at(first.time), clock.at(other.time)
    told = f"{after.statement(gate)} at {times[1]} instead of"
    if before.verb != after.verb:
        when = f" at {times[0]}" if first.time != other.time else ""
        return f"{told} {before.instead}{when}"
    if first.asks_as(other):
        is_moved = first.time != other.time
        return f"{told} {times[0]}" if is_moved else f"is to {after.infinitive(gate)} at {times[1]} as well"
    same_kind = before.preposition == after.preposition
    target = before.amount if same_kind else f"{before.preposition} {before.amount}"
    return f"{told} {target}" if first.time == other.time else f"{told} {target} at {times[0]}"


@dataclass(frozen=True)
class _Asked:
    """What an order asks for: a verb, and how far."""

    verb: str
    preposition: str
    amount: str

    @classmethod
    def by(cls, order: GateOrder, display: Display) -> "_Asked":
        if order.kind == "discharge":
            return cls("set", "to pass", display.discharge(order.value))
        if order.kind == "opening" and order.value == 0.0:
            return cls("close", "", "")
        if abs(order.change) < HELD:
            return cls("hold", "at", display.opening(order.value))
        verb = "raise" if order.change > 0.0 else "lower"
        if order.kind == "by":
            return cls(verb, "by", display.move(order.value))
        return cls(verb, "to", display.opening(order.value))

    def infinitive(self, gate: str) -> str:
        return " ".join(part for part in (self.verb, gate, self.preposition, self.amount) if part)

    def statement(self, gate: str) -> str:
        return " ".join(part for part in (f"{self.verb}s", gate, self.preposition, self.amount) if part)

    @property
    def instead(self) -> str:
        doing = {"raise": "raising", "lower": "lowering", "set": "setting", "close": "closing", "hold": "holding"}
        return " ".join(part for part in (doing[self.verb], "it", self.preposition, self.amount) if part)


def _summaries(differences: Sequence[OrderDifference]) -> Iterator[str]:
    for gate, group in groupby(differences, key=lambda difference: difference.gate):
        yield f"{gate}: {'; '.join(_counts(list(group)))}"


def _counts(differences: Sequence[OrderDifference]) -> Iterator[str]:
    pairs = [(one.first, one.other) for one in differences if one.first is not None and one.other is not None]
    later = [float((other.time - first.time) / np.timedelta64(1, "s")) for first, other in pairs]
    if moved := [seconds for seconds in later if seconds]:
        yield f"{counted(len(moved), 'order')} {_shift_words(moved)}"
    if changed := sum(1 for first, other in pairs if not first.asks_as(other)):
        yield f"{counted(changed, 'order')} changed in what is asked"
    refused = [sum(1 for one in differences if (order := getattr(one, side)) and order.is_refused) for side in _SIDES]
    for number, run in zip(refused, ("in the first run", "in this run"), strict=True):
        if number:
            yield f"{number} refused {run}"
    added, dropped = (sum(1 for one in differences if getattr(one, side) is None) for side in _SIDES)
    if added:
        yield f"{added} added"
    if dropped:
        yield f"{dropped} dropped"


def _shift_words(seconds: Sequence[float]) -> str:
    """By how much orders come later (positive) or earlier."""
    least, most = min(map(abs, seconds)), max(map(abs, seconds))
    sense = "later" if min(seconds) > 0.0 else "earlier" if max(seconds) < 0.0 else "earlier or later"
    return f"{sense}, by {'' if least == most else 'up to '}{duration_text(most)}"


def _move_words(moves: RuleMoves) -> str:
    """How often a rule moved a gate, beside how often it did in the first run where that has the rule."""
    instead = f" instead of {_times(moves.first)}" if moves.first else ""
    return f"the {moves.gate} moves {_times(moves.other)}{instead}"


def _times(count: int) -> str:
    return {0: "at no time", 1: "once"}.get(count, f"{count} times")

"""The rules of a day: asked at their decision times, their answers carried out by the gates, their memory kept."""

from array import array
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from toeline.engine.gate_motion import OrderRecord
from toeline.engine.present import PresentCanal, facts_at_start
from toeline.network.tables import Network
from toeline.network.timetable import Timetable
from toeline.rules.base import Answer, Rule
from toeline.rules.registry import FoundRule

Move = Callable[[str, str, float], tuple[OrderRecord | None, bool]]
"""Has a gate carry out the opening [m] that a rule of a kind wants: the record, and whether it was limited."""


@dataclass
class RuleOfDay:
    """A rule, the gate that it moves, its decisions [ms] that are still to come, the last first, and a label that tells
    it from the other rules of the day and finds it again on the next.
    """

    found: FoundRule
    rule: Rule
    gate: str
    times: "array[int]"
    label: str


class Decisions:
    """The rules of a day in the order of the plan."""

    def __init__(self, network: Network, timetable: Timetable, present: PresentCanal):
        """Made when the state that `present` shows is that of the start."""
        self.present = present
        self.rules: list[RuleOfDay] = []
        if not timetable.rules:
            return
        facts = facts_at_start(network, timetable.canal, present.state)
        for choice, times in zip(timetable.rules, timetable.decisions, strict=True):
            rule = choice.found.make(choice.given, facts)
            label = self._label(f"{choice.kind}, {rule.gate}")
            to_come = array("q", times[::-1].astype(np.int64).tobytes())
            self.rules.append(RuleOfDay(choice.found, rule, rule.gate, to_come, label))

    def act(self, time: int, move: Move) -> None:
        """Ask the rules whose decision is due at a stop [ms of the period]."""
        self.present.time_ms = time
        for one in self.rules:
            if one.times and one.times[-1] <= time:
                one.times.pop()
                self._ask(one, move)

    def end_state(self) -> dict[str, np.ndarray]:
        """What the rules keep, by variable name."""
        rows = [(one.label, name, value) for one in self.rules for name, value in one.rule.memory.items()]
        return {
            "end_rule": np.array([label for label, _, _ in rows], object),
            "end_rule_memory": np.array([name for _, name, _ in rows], object),
            "end_rule_value": np.array([value for _, _, value in rows], float),
        }

    def take_over(self, end: dict[str, np.ndarray]) -> None:
        """Go on from the end state of the run before; a rule that is new today starts afresh."""
        by_label = {one.label: one.rule for one in self.rules}
        for label, name, value in zip(end["end_rule"], end["end_rule_memory"], end["end_rule_value"], strict=True):
            if label in by_label:
                by_label[label].memory[str(name)] = float(value)

    def checkpoint(self) -> list[dict[str, Any]]:
        """How many decisions are still to come and what is kept, by rule; fit for JSON."""
        return [{"decisions_left": len(one.times), "memory": one.rule.memory} for one in self.rules]

    def go_on_from(self, kept: list[dict[str, Any]]) -> None:
        """Bring the rules of a new run of the same day to a checkpoint."""
        for one, rule in zip(self.rules, kept, strict=True):
            del one.times[rule["decisions_left"] :]
            one.rule.memory.clear()  # parts of a rule share it
            one.rule.memory.update(rule["memory"])

    def _label(self, name: str) -> str:
        """The name, numbered where a rule of the same kind moves the same gate at other hours."""
        earlier = sum(one.label.partition(" (")[0] == name for one in self.rules)
        return f"{name} ({earlier + 1})" if earlier else name

    def _ask(self, one: RuleOfDay, move: Move) -> None:
        wanted = one.found.decide(one.rule, self.present)
        if wanted is None:
            return
        record, is_limited = move(one.gate, one.found.kind, wanted)
        answer = Answer.limited if is_limited else Answer.carried_over if record is None else Answer.moved
        one.found.learn(one.rule, answer, self.present.ordered_opening(one.gate))

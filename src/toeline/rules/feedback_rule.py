"""What the rules that hold a level or a volume by feedback have in common."""

from abc import abstractmethod
from types import SimpleNamespace

from toeline.rules.base import Answer, CanalFacts, Present, Rule
from toeline.rules.feedback import Feedback, Gains
from toeline.rules.feedforward import Feedforward

LEAST_LACKING = 1e-3
"""Discharge [m³/s] from which a gate is said not to pass what is wanted."""


class FeedbackRule(Rule):
    """Sets an opening, or the discharge that the gate should pass, by proportional-integral feedback, and adds known
    changes of deliveries ahead of time: they stay in `memory` as "ahead", in the quantity that is set, until a move has
    made them.
    """

    def __init__(self, given: SimpleNamespace, canal: CanalFacts):
        super().__init__(given, canal)
        self.feedback = Feedback(self.memory, given.band or 0.0, given.every)
        self.ahead = given.feedforward and Feedforward(self.memory, self.gate, given.feedforward, canal)
        self.wanted_opening: float | None = None
        self.lacking = 0.0

    @abstractmethod
    def error(self, now: Present) -> float:
        """What is held, against its target, signed so that a positive error calls for more discharge."""

    @abstractmethod
    def gains(self, now: Present) -> Gains:
        """Gains per error of the quantity that is set."""

    @property
    @abstractmethod
    def sets_opening(self) -> bool:
        """Whether the quantity set is the opening, not the discharge."""

    def decide(self, now: Present) -> float | None:
        self.wanted_opening = None
        if self.sets_opening and self.is_head_reversed(now):
            return self.against_back_flow(now)
        gains, error, ordered = self.gains(now), self.error(now), self.standing_opening(now)
        if self.feedback.is_new(ordered):
            self.feedback.start(self._quantity(now, ordered), error, gains)
            self.memory["ordered"] = ordered
        change = self.ahead.change(now) if self.ahead else 0.0
        if change != 0.0:
            self.memory["ahead"] = self.memory.get("ahead", 0.0) + self._in_quantity(now, ordered, change)
        ahead = self.memory.get("ahead", 0.0)
        is_pressed = ahead != 0.0 or "shut_from" in self.memory
        wanted = self.feedback.wanted(error, gains, is_pressed=is_pressed)
        if wanted is None:
            return None
        self.wanted_opening = self._opening(now, wanted + ahead)
        return self.wanted_opening

    def learn(self, answer: Answer, ordered: float) -> None:
        if self.wanted_opening is None:
            self.memory["ordered"] = ordered
            return
        held_back = self.wanted_opening - ordered if answer is Answer.limited else 0.0
        self.feedback.learn(ordered, self.lacking or held_back)
        if answer is Answer.moved:
            self.feedback.shift(self.memory.pop("ahead", 0.0))

    def _quantity(self, now: Present, ordered: float) -> float:
        return ordered if self.sets_opening else now.discharge_at(self.gate, ordered)

    def _in_quantity(self, now: Present, ordered: float, change: float) -> float:
        """A change of discharge [m³/s] in the quantity that is set."""
        if not self.sets_opening:
            return change
        return now.opening_for(self.gate, now.discharge_at(self.gate, ordered) + change) - ordered

    def _opening(self, now: Present, quantity: float) -> float:
        """The opening [m] of a quantity, and what is lacking where no opening passes so much or so little."""
        if self.sets_opening:
            return quantity
        opening = now.opening_for(self.gate, quantity)
        gap = quantity - now.discharge_at(self.gate, opening)
        self.lacking = gap if abs(gap) > LEAST_LACKING else 0.0
        return opening

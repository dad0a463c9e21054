"""Hold the discharge of a gate, whatever the levels beside it do."""

from collections.abc import Mapping
from types import SimpleNamespace
from typing import ClassVar

from toeline.rules.base import CanalFacts, Present, Rule
from toeline.rules.feedforward import Feedforward
from toeline.rules.setting import FEEDFORWARD, GATE, HOURS, Setting, duration, number, series

USUAL_BAND = 0.01
"""Dead band in shares of the target where none is given (choice)."""


class HoldDischarge(Rule):
    """Sets the opening that passes the wanted discharge at the present levels, by the gate law."""

    kind = "hold discharge"
    settings: ClassVar[Mapping[str, Setting]] = {
        "gate": GATE,
        "target": series("discharge", "Discharge to pass, one all day or changing.", least=0.0, most=10_000.0),
        "band": number(
            "discharge", "Dead band: the gate is left alone while it passes the target within this. Left out: 1 % of "
            "the target, which is less than any gate is known to.", least=0.0, most=1000.0, default=None,
        ),
        "every": duration(
            "Time between decisions; they fall on whole multiples of it from midnight.", least=10.0, most=86_400.0,
            default=900.0,
        ),
        "hours": HOURS,
        "feedforward": FEEDFORWARD,
    }  # fmt: skip

    def __init__(self, given: SimpleNamespace, canal: CanalFacts):
        super().__init__(given, canal)
        self.ahead = given.feedforward and Feedforward(self.memory, self.gate, given.feedforward, canal)

    def decide(self, now: Present) -> float | None:
        if self.ahead:
            self.memory["ahead"] = self.memory.get("ahead", 0.0) + self.ahead.change(now)
        wanted = self.given.target.at(now.time_ms) + self.memory.get("ahead", 0.0)
        passed = now.discharge_at(self.gate, now.ordered_opening(self.gate))
        band = USUAL_BAND * wanted if self.given.band is None else self.given.band
        return None if abs(passed - wanted) <= band else now.opening_for(self.gate, wanted)

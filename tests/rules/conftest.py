"""A rule alone with one gate: a canal whose levels a test sets, and a gate law that fits on one line.

The gate passes 10 m²/s times its opening whatever the levels, so that every sequence can be followed on paper.
"""

from types import SimpleNamespace

import numpy as np
import pytest

from toeline.engine.gate_motion import GateMotion, OrderRecord
from toeline.rules.base import Answer, CanalFacts, GateFacts, OfftakeFacts, PoolFacts, Rule
from toeline.scenario.series import Series, constant

DISCHARGE_PER_OPENING = 10.0
MINUTE = 60_000

CANAL = CanalFacts(
    gates={
        "Head gate": GateFacts("head", "Upper pool", 2.0),
        "Mill check": GateFacts("Upper pool", "Lower pool", 1.5),
        "Tail gate": GateFacts("Lower pool", "tail", 1.5),
    },
    pools={
        "Upper pool": PoolFacts(4000.0, 103.60, {"wave": 1500.0, "volume": 1800.0}, 36_000.0, 36.0),
        "Lower pool": PoolFacts(2000.0, 100.90, {"wave": 1000.0, "volume": 2400.0}, 36_000.0, 36.0),
    },
    offtakes={"North lateral": OfftakeFacts("Upper pool", 0.9), "Far lateral": OfftakeFacts("Lower pool", 0.5)},
)


class Bench:
    """One rule with its gate, of which a decision at a time is asked."""

    def __init__(self, rule: type[Rule], opening: float = 0.50, limits: dict | None = None, **given):
        settings = {key: setting.default for key, setting in rule.settings.items()} | given
        series = {
            key: constant(value)
            for key, value in settings.items()
            if rule.settings[key].takes == "series" and isinstance(value, float)
        }
        self.rule = rule(SimpleNamespace(**settings | series), CANAL)
        plain = {
            "name": self.rule.gate, "max_opening": CANAL.gates[self.rule.gate].max_opening, "smallest_move": 0.01,
            "largest_move": None, "moves_per_hour": None, "hoist_speed": None, "avoid_openings": [],
        }  # fmt: skip
        self.motion = GateMotion(SimpleNamespace(**plain | (limits or {})), opening)
        self.time_ms = 0
        self.levels: dict[str, float] = {"headwater": 103.60, "tailwater": 101.20}
        self.demands = dict.fromkeys(CANAL.offtakes, constant(0.0))
        self.record: OrderRecord | None = None

    def decide(self, minute: float, **levels: float) -> float:
        """The opening ordered after a decision; `levels` are those that change, by the method that reads them."""
        self.time_ms = round(minute * MINUTE)
        self.levels |= levels
        self.motion.arrive(self.time_ms)
        wanted = self.rule.decide(self)
        self.record = None
        if wanted is not None:
            self.record, is_limited = self.motion.propose(self.time_ms, self.rule.kind, wanted)
            moved = Answer.carried_over if self.record is None else Answer.moved
            self.rule.learn(Answer.limited if is_limited else moved, self.motion.ordered)
        return self.motion.ordered

    def ask(self, offtake: str, minutes: list[float], values: list[float]) -> None:
        """What an offtake asks, in steps."""
        self.demands[offtake] = Series(np.array(minutes) * MINUTE, np.array(values), "steps")

    def headwater_level(self, gate: str) -> float:
        return self.levels["headwater"]

    def tailwater_level(self, gate: str) -> float:
        return self.levels["tailwater"]

    def opening(self, gate: str) -> float:
        return self.motion.opening

    def ordered_opening(self, gate: str) -> float:
        return self.motion.ordered

    def discharge(self, gate: str) -> float:
        return self.discharge_at(gate, self.motion.opening)

    def discharge_at(self, gate: str, opening: float) -> float:
        return DISCHARGE_PER_OPENING * opening

    def opening_for(self, gate: str, discharge: float) -> float:
        return min(max(discharge / DISCHARGE_PER_OPENING, 0.0), self.motion.gate.max_opening)

    def head_level(self, pool: str) -> float:
        return self.levels["head"]

    def tail_level(self, pool: str) -> float:
        return self.levels["lower_end"]

    def volume(self, pool: str) -> float:
        return self.levels["volume"]

    def demand(self, offtake: str, time_ms: int) -> float:
        return self.demands[offtake].at(time_ms)


@pytest.fixture
def bench() -> type[Bench]:
    return Bench

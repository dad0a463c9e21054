"""What the two rules that hold a level have in common: their settings, their target, and the gains found for a pool."""

import math
from abc import abstractmethod
from collections.abc import Iterator, Mapping
from types import SimpleNamespace
from typing import ClassVar

from toeline.errors import RunError
from toeline.rules.base import CanalFacts, Present
from toeline.rules.feedback import Gains
from toeline.rules.feedback_rule import FeedbackRule
from toeline.rules.setting import EVERY, FEEDFORWARD, GATE, HOURS, Setting, duration, number, series

LEVEL_SETTINGS: dict[str, Setting] = {
    "gate": GATE,
    "target": series(
        "length", "Level to hold, one all day or changing. Left out: the target_level of the pool.",
        least=-10_000.0, most=10_000.0, default=None,
    ),
    "band": number(
        "length", "Dead band: the gate is left alone while the level is no further from the target.", least=0.0,
        most=10.0, default=0.02,
    ),
    "every": EVERY,
    "hours": HOURS,
    "gain": number(
        None, "Opening per level error (m of opening for 1 m of level). Left out: found from the pool at the start.",
        above=0.0, most=100.0, default=None,
    ),
    "discharge_gain": number(
        "discharge per length", "In place of gain: discharge per level error; the opening follows from the gate law.",
        above=0.0, most=10_000.0, default=None,
    ),
    "reset": duration(
        "Reset time, in which a lasting error is made good once more. Left out: no such part with a gain of your own, "
        "else found from the pool at the start.",
        least=60.0, most=864_000.0, default=None,
    ),
    "feedforward": FEEDFORWARD,
}  # fmt: skip

SLOPE_STEP = 0.01
"""Change of opening [m] over which the slope of a gate's discharge is taken."""


class LevelRule(FeedbackRule):
    """Holds a level by the gains given, or by those found for its pool at the first decision."""

    settings: ClassVar[Mapping[str, Setting]] = LEVEL_SETTINGS
    finds_opening_gain: ClassVar[bool] = False
    """Whether gains that were found are turned into those of an opening."""

    @property
    @abstractmethod
    def pool(self) -> str:
        """The pool whose target and gains are used."""

    @abstractmethod
    def found_gains(self) -> Gains:
        """Gains in discharge per level error [m²/s] for the pool."""

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        if given.gain is not None and given.discharge_gain is not None:
            yield "discharge_gain", 'found beside "gain"; allowed: one of the two'
        if given.gain is None and given.discharge_gain is None and given.reset is not None:
            yield "reset", 'not used without "gain" or "discharge_gain": both are found from the pool'

    @classmethod
    def makes_good(cls, given: SimpleNamespace) -> bool:
        """Whether a lasting error is made good, by a reset time that is given or found."""
        return given.reset is not None or (given.gain is None and given.discharge_gain is None)

    @property
    def sets_opening(self) -> bool:
        return self.finds_opening_gain if self._is_found else self.given.gain is not None

    def gains(self, now: Present) -> Gains:
        if not self._is_found:
            gain = self.given.gain if self.given.gain is not None else self.given.discharge_gain
            return Gains(gain, math.inf if self.given.reset is None else self.given.reset)
        if "gain" not in self.memory:
            self.memory["gain"], self.memory["reset"] = self._checked(self._in_set_quantity(now, self.found_gains()))
        return Gains(self.memory["gain"], self.memory["reset"])

    def target(self, now: Present) -> float:
        """The level to hold at the time [m]."""
        if self.given.target is not None:
            return float(self.given.target.at(now.time_ms))
        level = self.canal.pools[self.pool].target_level
        assert level is not None  # checked before the run
        return level

    @property
    def _is_found(self) -> bool:
        return self.given.gain is None and self.given.discharge_gain is None

    def _in_set_quantity(self, now: Present, gains: Gains) -> Gains:
        if not self.finds_opening_gain:
            return gains
        slope = opening_slope(now, self.gate)
        return Gains(gains.proportional / slope if slope > 0.0 else math.nan, gains.reset)

    def _checked(self, gains: Gains) -> Gains:
        if math.isfinite(gains.proportional) and math.isfinite(gains.reset):
            return gains
        raise RunError(
            f'rule "{self.kind}" of {self.gate}: no gain can be found from the state at the start, as where a pool is '
            "dry, its water stands or the gate hangs clear of it; give gain and reset in the day file"
        )


def opening_slope(now: Present, gate: str) -> float:
    """Change of a gate's discharge per opening [m²/s] at the present levels and the opening ordered."""
    low = max(now.ordered_opening(gate) - SLOPE_STEP, 0.0)
    high = low + 2.0 * SLOPE_STEP
    return (now.discharge_at(gate, high) - now.discharge_at(gate, low)) / (high - low)

"""Hold the volume of water in a pool by one of its gates."""

from collections.abc import Iterator, Mapping
from types import SimpleNamespace
from typing import ClassVar

from toeline.rules.base import CanalFacts, Present
from toeline.rules.feedback import DETUNING, Gains
from toeline.rules.feedback_rule import FeedbackRule
from toeline.rules.setting import EVERY, FEEDFORWARD, HOURS, Setting, duration, number, place, series, word

UPPER, LOWER = "upper gate", "lower gate"

USUAL_BAND = 0.01
"""Dead band in shares of the target where none is given (choice)."""


class HoldVolume(FeedbackRule):
    """Moves the upper or the lower gate of a pool so that the pool keeps its volume; its surface then turns about a
    point in the middle.
    """

    kind = "hold volume"
    settings: ClassVar[Mapping[str, Setting]] = {
        "pool": place("pool", "Name of the pool."),
        "by": word((UPPER, LOWER), "The gate that is moved.", default=UPPER),
        "target": series(
            "volume", "Volume to hold. Left out: that of the first decision.", least=0.0, most=1e9, default=None
        ),
        "band": number(
            "volume", "Dead band: the gate is left alone while the volume is no further from the target. Left out: 1 % "
            "of the target.", least=0.0, most=1e8, default=None,
        ),
        "every": EVERY,
        "hours": HOURS,
        "within": duration(
            "Time in which the discharge set would make a volume error good; not less than every.",
            least=600.0, most=864_000.0, default=7200.0,
        ),
        "reset": duration(
            "Reset time: a lasting error is made good once more in it. Left out: four times within.", least=600.0,
            most=8_640_000.0, default=None,
        ),
        "feedforward": FEEDFORWARD,
    }  # fmt: skip

    @classmethod
    def gate_of(cls, given: SimpleNamespace, canal: CanalFacts) -> str | None:
        return canal.gate_above(given.pool) if given.by == UPPER else canal.gate_below(given.pool)

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        if cls.gate_of(given, canal) is None:
            yield "by", f'"{given.pool}" has no {given.by}'
        if given.within < given.every:
            yield "within", 'shorter than "every": an error would be made good more than once between two decisions'

    def error(self, now: Present) -> float:
        volume = now.volume(self.given.pool)
        target = self.memory.setdefault("target", volume) if self.given.target is None else self._target(now)
        if self.given.band is None:
            self.feedback.band = USUAL_BAND * target
        return target - volume if self.given.by == UPPER else volume - target

    @property
    def sets_opening(self) -> bool:
        return False

    def gains(self, now: Present) -> Gains:
        reset = DETUNING * self.given.within if self.given.reset is None else self.given.reset
        return Gains(1.0 / self.given.within, reset)

    def _target(self, now: Present) -> float:
        return float(self.given.target.at(now.time_ms))

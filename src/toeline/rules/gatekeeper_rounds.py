"""A gatekeeper who comes round, looks at the staff, and moves the gate by a fixed step where the level is off."""

from collections.abc import Iterator, Mapping
from types import SimpleNamespace
from typing import ClassVar

from toeline.rules.base import CanalFacts, Present, Rule
from toeline.rules.setting import GATE, HOURS, VISITS, Setting, duration, number, series, word

ABOVE_GATE, BELOW_GATE = "above the gate", "below the gate"


class GatekeeperRounds(Rule):
    """At every visit, moves the gate by one step if the level is outside its band, and leaves it alone if not. While
    the water below it stands higher the gate is kept shut; then it is opened again to where it stood.
    """

    kind = "gatekeeper rounds"
    settings: ClassVar[Mapping[str, Setting]] = {
        "gate": GATE,
        "target": series(
            "length", "Level to hold. Left out: the target_level of the pool above the gate.", least=-10_000.0,
            most=10_000.0, default=None,
        ),
        "band": number(
            "length", "The gate is left alone while the level is no further from the target.", least=0.0, most=10.0,
            default=0.05,
        ),
        "step": number("length", "Change of opening made at one visit.", above=0.0, most=100.0, default=0.05),
        "where": word((ABOVE_GATE, BELOW_GATE), "Where the level is read.", default=ABOVE_GATE),
        "visits": VISITS,
        "every": duration(
            "In place of visits: the time between them, from midnight.", least=60.0, most=86_400.0, default=None
        ),
        "hours": HOURS,
    }  # fmt: skip

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        pool = canal.pools.get(canal.gates[given.gate].upstream_pool)
        if (given.visits is None) == (given.every is None):
            yield "visits", 'exactly one of "visits" and "every" is required'
        if given.target is None and given.where == BELOW_GATE:
            yield "target", f'required with where = "{BELOW_GATE}"'
        elif given.target is None and (pool is None or pool.target_level is None):
            yield "target", "required, as no pool above the gate has a target_level"

    def decide(self, now: Present) -> float | None:
        is_above = self.given.where == ABOVE_GATE
        level = now.headwater_level(self.gate) if is_above else now.tailwater_level(self.gate)
        error = level - self._target(now) if is_above else self._target(now) - level
        if self.is_head_reversed(now):
            return self.against_back_flow(now)
        standing = self.standing_opening(now)
        if standing != now.ordered_opening(self.gate):
            return standing
        if abs(error) <= self.given.band:
            return None
        step = self.given.step if error > 0.0 else -self.given.step
        return standing + step

    def _target(self, now: Present) -> float:
        if self.given.target is not None:
            return float(self.given.target.at(now.time_ms))
        level = self.canal.pools[self.canal.gates[self.gate].upstream_pool].target_level
        assert level is not None  # checked before the run
        return level

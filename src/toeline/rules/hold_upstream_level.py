"""Hold the level just above a gate: upstream control. What is too much or too little passes on down the canal."""

from collections.abc import Iterator
from types import SimpleNamespace

from toeline.rules.base import CanalFacts, Present
from toeline.rules.feedback import Gains, gains_of_pool
from toeline.rules.level_rule import LevelRule


class HoldUpstreamLevel(LevelRule):
    """Moves a gate so that the level just above it stays at its target: a level too high opens it."""

    kind = "hold upstream level"
    finds_opening_gain = True

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        yield from super().misfits(given, canal)
        pool = canal.pools.get(canal.gates[given.gate].upstream_pool)
        if pool is None:
            yield "gate", f'found "{given.gate}", which has no pool above it; allowed: a gate below a pool'
        elif given.target is None and pool.target_level is None:
            yield "target", "required, as the pool above the gate has no target_level"

    @property
    def pool(self) -> str:
        return self.canal.gates[self.gate].upstream_pool

    def error(self, now: Present) -> float:
        return now.headwater_level(self.gate) - self.target(now)

    def found_gains(self) -> Gains:
        pool = self.canal.pools[self.pool]
        return gains_of_pool(pool.backed_up_area, 0.0, pool.wave_admittance, self.given.every)

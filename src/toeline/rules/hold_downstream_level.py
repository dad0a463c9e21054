"""Hold a level in the pool below a gate: downstream control. The canal gives what is taken from it."""

from collections.abc import Iterator, Mapping
from types import SimpleNamespace
from typing import ClassVar

from toeline.rules.base import CanalFacts, Present
from toeline.rules.feedback import Gains, gains_of_pool
from toeline.rules.level_rule import LEVEL_SETTINGS, LevelRule
from toeline.rules.setting import Setting, word

LOWER_END, BELOW_GATE = "lower end of the pool", "below the gate"


class HoldDownstreamLevel(LevelRule):
    """Moves a gate so that the level at the lower end of the pool below it, or just below the gate itself, stays at its
    target: a level too low opens it.
    """

    kind = "hold downstream level"
    settings: ClassVar[Mapping[str, Setting]] = LEVEL_SETTINGS | {
        "where": word((LOWER_END, BELOW_GATE), "Where the level is held.", default=LOWER_END),
    }

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        yield from super().misfits(given, canal)
        pool = canal.pools.get(canal.gates[given.gate].downstream_pool)
        if pool is None:
            yield "gate", f'found "{given.gate}", which has no pool below it; allowed: a gate above a pool'
        elif given.target is None and given.where == BELOW_GATE:
            yield "target", f'required with where = "{BELOW_GATE}": the target_level of a pool is at its lower end'
        elif given.target is None and pool.target_level is None:
            yield "target", "required, as the pool below the gate has no target_level"

    @property
    def pool(self) -> str:
        return self.canal.gates[self.gate].downstream_pool

    def error(self, now: Present) -> float:
        level = now.tail_level(self.pool) if self._is_distant else now.tailwater_level(self.gate)
        return self.target(now) - level

    def found_gains(self) -> Gains:
        pool = self.canal.pools[self.pool]
        delay = pool.lead_times["wave"] if self._is_distant else 0.0
        return gains_of_pool(pool.backed_up_area, delay, pool.wave_admittance, self.given.every)

    @property
    def _is_distant(self) -> bool:
        return bool(self.given.where == LOWER_END)

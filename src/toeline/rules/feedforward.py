"""Known changes of deliveries, passed on to a gate ahead of time."""

from collections.abc import Mapping

from toeline.rules.base import CanalFacts, Present

LeadTimes = str | Mapping[str, float | str]
"""A kind for all pools, or a duration [s] or a kind by pool."""


def lead_time_of(pool: str, chosen: LeadTimes, canal: CanalFacts) -> float:
    """Lead time [s] of a pool; zero where the start gives none, as in a dry pool."""
    given = chosen if isinstance(chosen, str) else chosen.get(pool, "volume")
    seconds = canal.pools[pool].lead_times[given] if isinstance(given, str) else given
    return seconds if seconds == seconds else 0.0


def leads_to_offtakes(gate: str, chosen: LeadTimes, canal: CanalFacts) -> dict[str, float]:
    """How long before each offtake below a gate its change has to pass the gate [s]: the lead times of all pools
    between (Bautista & Clemmens 2005, from memory), that of its own pool by its share of the length (choice).
    """
    leads: dict[str, float] = {}
    above = 0.0
    for pool in canal.pools_from(gate):
        own = lead_time_of(pool, chosen, canal)
        leads |= {name: above + take.share * own for name, take in canal.offtakes.items() if take.pool == pool}
        above += own
    return leads


class Feedforward:
    """The sum of known demands below a gate, each looked up its lead time ahead."""

    def __init__(self, memory: dict[str, float], gate: str, chosen: LeadTimes, canal: CanalFacts):
        self.memory = memory
        self.leads = leads_to_offtakes(gate, chosen, canal)

    def change(self, now: Present) -> float:
        """Change of the sum [m³/s] since the decision before; at the first from the demands of that time, so that what
        should be on its way already goes out at once.
        """
        for offtake, seconds in self.leads.items():
            self.memory.setdefault(_lead(offtake), seconds)
        known = sum(now.demand(name, now.time_ms + round(self.memory[_lead(name)] * 1000.0)) for name in self.leads)
        before = self.memory.get("known demand", sum(now.demand(name, now.time_ms) for name in self.leads))
        self.memory["known demand"] = known
        return known - before


def _lead(offtake: str) -> str:
    return f"lead to {offtake}"

"""What rules may know of a canal from its file alone."""

from toeline.rules.base import CanalFacts, GateFacts, OfftakeFacts, PoolFacts
from toeline.scenario.schema.canal import Canal


def canal_facts(canal: Canal) -> CanalFacts:
    """Give gates, pools and offtakes by name, without what only a state of the water tells."""
    lengths = {pool.name: pool.length for pool in canal.pools}
    return CanalFacts(
        gates={gate.name: GateFacts(gate.upstream, gate.downstream, gate.max_opening) for gate in canal.gates},
        pools={pool.name: PoolFacts(pool.length, pool.target_level) for pool in canal.pools},
        offtakes={take.name: OfftakeFacts(take.pool, take.chainage / lengths[take.pool]) for take in canal.offtakes},
    )

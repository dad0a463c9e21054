"""Whether escapes, gauges and roughness entries stand where the canal has a place for them."""

from collections.abc import Iterator

from toeline.scenario.checks.gate_levels import ROUNDING
from toeline.scenario.misfits import Misfit, length_outside, nearest, shown
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.roughness import CalendarDay


def misfits_of_places(canal: Canal) -> Iterator[Misfit]:
    """Find escapes, gauges and roughness entries in unknown pools, at unknown gates or beyond a pool's end."""
    for index, escape in enumerate(canal.escapes):
        yield from _misfits_in_pool(canal, ("escapes", index), escape.pool, escape.chainage)
    for index, gauge in enumerate(canal.gauges):
        if gauge.pool is not None and gauge.chainage is not None:
            yield from _misfits_in_pool(canal, ("gauges", index), gauge.pool, gauge.chainage)
    yield from _misfits_of_crests(canal)
    yield from _unknown_gates(canal)
    yield from _misfits_of_roughness(canal)


def _misfits_in_pool(canal: Canal, path: tuple[str | int, ...], name: str, chainage: float) -> Iterator[Misfit]:
    pools = {pool.name: pool for pool in canal.pools}
    if name not in pools:
        yield Misfit((*path, "pool"), f"found {shown(name)}, which is not described; {nearest(name, pools)}")
    elif chainage > pools[name].length:
        allowed = "up to the pool's end"
        yield length_outside((*path, "chainage"), chainage, allowed, pools[name].length, canal.units)


def _misfits_of_crests(canal: Canal) -> Iterator[Misfit]:
    """Find crests below the bed, and longer than their pool."""
    pools = {pool.name: pool for pool in canal.pools}
    for index, escape in enumerate(canal.escapes):
        if escape.pool not in pools:
            continue
        pool = pools[escape.pool]
        bed = pool.bed_at(escape.chainage)
        if escape.crest_level < bed - ROUNDING:
            path = ("escapes", index, "crest_level")
            yield length_outside(path, escape.crest_level, "not below the bed there", bed, canal.units)
        if escape.length > pool.length:
            path = ("escapes", index, "length")
            yield length_outside(path, escape.length, "up to the length of the pool", pool.length, canal.units)


def _unknown_gates(canal: Canal) -> Iterator[Misfit]:
    gates = [gate.name for gate in canal.gates]
    for index, gauge in enumerate(canal.gauges):
        if gauge.gate is not None and gauge.gate not in gates:
            message = f"found {shown(gauge.gate)}, which is no gate of the canal; {nearest(gauge.gate, gates)}"
            yield Misfit(("gauges", index, "gate"), message)


def _misfits_of_roughness(canal: Canal) -> Iterator[Misfit]:
    """Find unknown pools, and two entries for one pool from one day on."""
    pools = [pool.name for pool in canal.pools]
    seen: dict[tuple[str, CalendarDay], int] = {}
    for index, entry in enumerate(canal.roughness_calendar):
        for place, name in enumerate(entry.pools or ()):
            if name not in pools:
                message = f"found {shown(name)}, which is not described; {nearest(name, pools)}"
                yield Misfit(("roughness_calendar", index, "pools", place), message)
        earlier = {seen[name, entry.day] for name in entry.pools or pools if (name, entry.day) in seen}
        if earlier:
            message = f"found {entry.day}, from which entry {min(earlier) + 1} already gives a factor for such a pool"
            yield Misfit(("roughness_calendar", index, "from"), message)
        for name in entry.pools or pools:
            seen.setdefault((name, entry.day), index)

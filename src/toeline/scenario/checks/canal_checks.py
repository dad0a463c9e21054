"""What must hold between the tables of a canal file."""

from collections.abc import Iterable, Iterator

from toeline.scenario.checks.gate_chain import misfits_of_gate_chain
from toeline.scenario.checks.gate_levels import ROUNDING, misfits_of_gate_levels
from toeline.scenario.checks.limit_checks import misfits_of_limits
from toeline.scenario.checks.places import misfits_of_places
from toeline.scenario.misfits import Misfit, length_outside, nearest, shown
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.offtakes import Offtake
from toeline.scenario.schema.pools import Pool, Stretch
from toeline.scenario.schema.table import TAIL


def misfits_of_canal(canal: Canal) -> Iterator[Misfit]:
    """Find what is wrong between the tables of a canal whose tables are right each by itself."""
    repeated = list(_repeated_names(canal))
    yield from repeated
    yield from _unknown_sections_and_surfaces(canal)
    yield from _unreachable_targets(canal)
    yield from _misfits_of_offtakes(canal)
    yield from misfits_of_limits(canal)
    if repeated:
        return  # a pool cannot be told from its namesake
    yield from misfits_of_places(canal)
    broken_chain = list(misfits_of_gate_chain(canal))
    yield from broken_chain
    if not broken_chain:
        yield from misfits_of_gate_levels(canal)
        yield from _misfits_of_floor_beyond(canal)


def _repeated_names(canal: Canal) -> Iterator[Misfit]:
    for table in ("pools", "gates", "offtakes", "escapes", "gauges"):
        names = [item.name for item in getattr(canal, table)]
        for index, name in enumerate(names):
            if name in names[:index]:
                message = f"found {shown(name)}, which is taken by an earlier one in {table}"
                yield Misfit((table, index, "name"), message)


def _unknown_sections_and_surfaces(canal: Canal) -> Iterator[Misfit]:
    for index, pool in enumerate(canal.pools):
        yield from _unknown_in_stretches(canal, ("pools", index, "stretches"), pool.stretches)
    yield from _unknown_in_stretches(canal, ("tail", "stretches"), canal.tail.stretches)
    yield from _unknown(("tail", "section"), canal.tail.section, canal.sections)
    yield from _unknown(("tail", "surface"), canal.tail.surface, canal.surfaces)


def _unknown_in_stretches(canal: Canal, path: tuple[str | int, ...], stretches: list[Stretch]) -> Iterator[Misfit]:
    for index, stretch in enumerate(stretches):
        yield from _unknown((*path, index, "section"), stretch.section, canal.sections)
        yield from _unknown((*path, index, "surface"), stretch.surface, canal.surfaces)


def _unknown(path: tuple[str | int, ...], name: str | None, known: Iterable[str]) -> Iterator[Misfit]:
    if name is not None and name not in known:
        yield Misfit(path, f"found {shown(name)}, which is not described; {nearest(name, known)}")


def _unreachable_targets(canal: Canal) -> Iterator[Misfit]:
    """Find targets above the bank at the lower end of the pool."""
    for index, pool in enumerate(canal.pools):
        section = canal.sections.get(pool.stretches[-1].section)
        if pool.target_level is None or section is None or section.bank_height is None:
            continue
        bank = pool.end_bed_level + section.bank_height
        if pool.target_level > bank:
            path, allowed = ("pools", index, "target_level"), "up to the bank at the pool's lower end"
            yield length_outside(path, pool.target_level, allowed, bank, canal.units)


def _misfits_of_offtakes(canal: Canal) -> Iterator[Misfit]:
    pools = {pool.name: pool for pool in canal.pools}
    for index, offtake in enumerate(canal.offtakes):
        yield from _unknown(("offtakes", index, "pool"), offtake.pool, pools)
        if offtake.pool in pools:
            yield from _misfits_of_place(canal, index, offtake, pools[offtake.pool])


def _misfits_of_place(canal: Canal, index: int, offtake: Offtake, pool: Pool) -> Iterator[Misfit]:
    if offtake.chainage > pool.length:
        path = ("offtakes", index, "chainage")
        yield length_outside(path, offtake.chainage, "up to the pool's end", pool.length, canal.units)
    bed = pool.bed_at(offtake.chainage)
    if offtake.sill_level is not None and offtake.sill_level < bed - ROUNDING:
        path = ("offtakes", index, "sill_level")
        yield length_outside(path, offtake.sill_level, "not below the bed there", bed, canal.units)


def _misfits_of_floor_beyond(canal: Canal) -> Iterator[Misfit]:
    """Find a floor described beyond a last gate that does not exist."""
    if any(gate.downstream == TAIL for gate in canal.gates):
        return
    for key in ("floor_level", "section", "surface", "stretches"):
        if key in canal.tail.model_fields_set:
            yield Misfit(("tail", key), 'not used where no gate has downstream = "tail"; the last pool goes on')

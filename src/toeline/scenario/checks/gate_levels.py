"""Sills and widths of gates against the bed and the floor beside them."""

from collections.abc import Iterator

from toeline.scenario.misfits import Misfit, length_outside
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.gates import Gate
from toeline.scenario.schema.pools import Pool
from toeline.scenario.schema.table import TAIL

ROUNDING = 1e-6
"""Difference of level [m] that rounding alone can make."""


def misfits_of_gate_levels(canal: Canal) -> Iterator[Misfit]:
    """Find sills below the bed above them or the floor below them, and gates wider than the floor below them."""
    pools = {pool.name: pool for pool in canal.pools}
    for index, gate in enumerate(canal.gates):
        above, below = pools.get(gate.upstream), pools.get(gate.downstream)
        if above is not None:
            yield from _sill_below(canal, index, "the bed at the end of the pool above", above.end_bed_level)
        if below is not None:
            yield from _sill_below(canal, index, "the bed at the head of the pool below", below.bed_level)
            yield from _wider_than_floor(canal, index, gate, below)
        if gate.downstream == TAIL and canal.tail.floor_level is not None:
            yield from _sill_below(canal, index, "the floor beyond it", canal.tail.floor_level)


def _sill_below(canal: Canal, index: int, what: str, level: float) -> Iterator[Misfit]:
    sill = canal.gates[index].sill_level
    if sill < level - ROUNDING:
        yield length_outside(("gates", index, "sill_level"), sill, f"not below {what}", level, canal.units)


def _wider_than_floor(canal: Canal, index: int, gate: Gate, below: Pool) -> Iterator[Misfit]:
    """A jet cannot be wider than the rectangle into which it shoots."""
    section = canal.sections.get(below.stretches[0].section)
    if section is None or section.shape != "rectangle" or section.bottom_width is None:
        return
    if gate.width > section.bottom_width + ROUNDING:
        allowed = "all bays together up to the bottom_width of the floor below"
        yield length_outside(("gates", index, "bay_width"), gate.width, allowed, section.bottom_width, canal.units)

"""Staff gauges of a canal file."""

from collections.abc import Iterator
from typing import Literal

from pydantic import Field

from toeline.scenario.misfits import Misfit
from toeline.scenario.schema.table import LengthOrZero, Level, Name, Table
from toeline.units import UnitSystem

_AT_GATE, _IN_POOL = ("gate", "side"), ("pool", "chainage")


class Gauge(Table):
    """A staff gauge beside a gate (gate, side) or along a pool (pool, chainage); results also give its readings."""

    name: Name = Field(description="Name of the gauge.")
    gate: Name | None = Field(None, description="Name of the gate beside which it stands, with side.")
    side: Literal["upstream", "downstream"] | None = Field(None, description="Side of the gate.")
    pool: Name | None = Field(None, description="Name of the pool along which it stands, with chainage.")
    chainage: LengthOrZero | None = Field(None, description="Distance below the head of the pool.")
    zero_level: Level = Field(description="Level of the zero of the staff.")

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        at_gate, in_pool = ([key for key in keys if getattr(self, key) is not None] for keys in (_AT_GATE, _IN_POOL))
        if at_gate and in_pool:
            yield Misfit((in_pool[0],), "not used with gate and side; a gauge stands beside a gate or along a pool")
        elif not at_gate and not in_pool:
            yield Misfit((), "says nowhere where it stands; required: gate and side, or pool and chainage")
        else:
            keys, given = (_AT_GATE, at_gate) if at_gate else (_IN_POOL, in_pool)
            yield from (Misfit((key,), f"required with {given[0]}, but not given") for key in keys if key not in given)

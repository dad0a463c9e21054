"""What the roughness calendar made of Manning's n in each pool."""

from dataclasses import dataclass

import xarray as xr

from toeline.findings.series import names
from toeline.results.dataset import in_parts

_FACTOR = "pool_roughness_factor"


@dataclass(frozen=True)
class PoolRoughness:
    """The factor on Manning's n in one pool: at the start, at the end, the least and the greatest."""

    pool: str
    first: float
    last: float
    least: float
    greatest: float

    @property
    def is_plain(self) -> bool:
        """Whether n was as the canal file gives it all the time."""
        return self.least == self.greatest == 1.0

    @property
    def changes(self) -> bool:
        return self.least != self.greatest


def pool_roughness(run: xr.Dataset) -> list[PoolRoughness]:
    """All pools of a run with at least one output step; empty where n was as the canal file gives it in all of them."""
    found = [
        PoolRoughness(pool, *map(float, (factors[0], factors[-1], factors.min(), factors.max())))
        for part in in_parts(run, "pool", _FACTOR)
        for pool, factors in zip(names(part["pool"]), part[_FACTOR].values.T, strict=True)
    ]
    return [] if all(pool.is_plain for pool in found) else found

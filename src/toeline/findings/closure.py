"""Whether water is lost in the computing: the ledger of the canal at every step, and every pool from its discharges."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, names

LEDGER_TOLERANCE = 1e-6
"""Share of the water handled that the ledger may leave unexplained (choice; the time loop closes it to rounding)."""

POOL_TOLERANCE = 5e-3
"""Share of the water handled by a pool that its discharges, added up over the output steps, may leave unexplained
(choice: a discharge that is shown follows the levels interpolated inside a time step, and adding up misses a little of
every sudden change)."""


@dataclass(frozen=True)
class Gap:
    """The greatest volume left unexplained at one place [m³], without its sign, and the water handled there [m³].

    Water handled is what passed through or stood there, whichever is more.
    """

    where: str
    volume: Extreme
    handled: float

    @property
    def share(self) -> float:
        """The gap as a share of the water handled; 0 where there was no water."""
        return self.volume.value / self.handled if self.handled > 0.0 else 0.0


@dataclass(frozen=True)
class Closure:
    """The mass test of a run: its ledger at every output step, and each pool by its own discharges."""

    canal: Gap
    pools: tuple[Gap, ...]

    @property
    def worst_pool(self) -> Gap:
        """The pool with the largest share unexplained."""
        return max(self.pools, key=lambda gap: gap.share)

    @property
    def is_closed(self) -> bool:
        """Whether every gap is within its stated tolerance."""
        return self.canal.share <= LEDGER_TOLERANCE and self.worst_pool.share <= POOL_TOLERANCE


def closure(run: xr.Dataset) -> Closure:
    """The mass test of a run with at least one output step."""
    times, storage = run["time"].values, run["canal_storage"].values
    passed = max(float(run[f"canal_{way}_volume"].values[-1]) for way in ("inflow", "outflow"))
    canal = Gap(
        run.attrs["canal"], greatest(np.abs(run["balance_residual"].values), times), max(passed, float(storage.max()))
    )
    return Closure(canal, tuple(_gap_of_pool(run, pool) for pool in names(run["pool"])))


def _gap_of_pool(run: xr.Dataset, pool: str) -> Gap:
    at_pool, times = run.sel(pool=pool), run["time"].values
    inflow, volume = at_pool["pool_inflow"].values, at_pool["pool_volume"].values
    leaving = at_pool["pool_outflow"].values + at_pool["pool_losses"].values
    for place, discharge in TAKEN_FROM_POOLS.items():
        if discharge in run:
            leaving = leaving + run[discharge].values[:, run[f"{place}_pool"].values == pool].sum(axis=1)
    unexplained = volume_passed(inflow - leaving, times) - (volume - volume[0])
    handled = max(float(volume_passed(np.abs(inflow), times)[-1]), float(volume.max()))
    return Gap(pool, greatest(np.abs(unexplained), times), handled)


TAKEN_FROM_POOLS = {"offtake": "delivery", "escape": "escape_discharge"}
"""What takes water from the side of a pool, and the variable that says how much."""


def volume_passed(discharge: np.ndarray, times: np.ndarray) -> np.ndarray:
    """Volume [m³] passed since the first time, discharge [m³/s] taken as straight between two times."""
    seconds = np.diff(times) / np.timedelta64(1, "s")
    steps = 0.5 * (discharge[1:] + discharge[:-1]) * seconds
    return np.concatenate(([0.0], np.cumsum(steps)))

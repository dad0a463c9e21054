"""The water ledger: what came in, where it went, what was stored, and what is left unexplained."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import names
from toeline.units import SPELLINGS

_NEEDED = (
    "canal_inflow_volume",
    "canal_outflow_volume",
    "pool_inflow_volume",
    "pool_outflow_volume",
    "pool_loss_volume",
    "pool_volume",
    "delivery_volume",
    "escape_volume",
    "offtake_pool",
    "escape_pool",
)


@dataclass(frozen=True)
class Account:
    """Volumes of a pool or of the canal over the run [m³].

    inflow = deliveries + escapes + losses + outflow + change of storage + residual; losses are seepage and evaporation
    less rain.
    """

    inflow: float
    outflow: float
    deliveries: dict[str, float]
    escapes: dict[str, float]
    losses: float
    storage_change: float

    @property
    def delivered(self) -> float:
        """Volume delivered at all offtakes."""
        return sum(self.deliveries.values())

    @property
    def spilled(self) -> float:
        """Volume let out over all escapes."""
        return sum(self.escapes.values())

    @property
    def residual(self) -> float:
        """What the other entries leave unexplained."""
        return self.inflow - self.delivered - self.spilled - self.losses - self.outflow - self.storage_change


@dataclass(frozen=True)
class Ledger:
    """The account of the canal, and that of every pool by its name, from the head down."""

    canal: Account
    pools: dict[str, Account]


def ledger(run: xr.Dataset) -> Ledger:
    """The ledger of a run, from its first output step to its last; all zero where it has no step."""
    run = run[list(_NEEDED)].isel(time=[0, -1] if run.sizes["time"] else []).load()
    pools = {pool: _account_of_pool(run, pool) for pool in names(run["pool"])}
    canal = Account(
        inflow=float(_growth(run["canal_inflow_volume"])),
        outflow=float(_growth(run["canal_outflow_volume"])),
        deliveries=_by_name(run["delivery_volume"], "offtake"),
        escapes=_by_name(run["escape_volume"], "escape"),
        losses=sum(account.losses for account in pools.values()),
        storage_change=sum(account.storage_change for account in pools.values()),
    )
    return Ledger(canal, pools)


def acre_feet(volume: float) -> float:
    """A volume in m³ as acre-feet."""
    return volume / SPELLINGS["volume"]["acre-ft"]


def _account_of_pool(run: xr.Dataset, pool: str) -> Account:
    here = run.sel(pool=pool)
    return Account(
        inflow=float(_growth(here["pool_inflow_volume"])),
        outflow=float(_growth(here["pool_outflow_volume"])),
        deliveries=_by_name(run["delivery_volume"][:, run["offtake_pool"].values == pool], "offtake"),
        escapes=_by_name(run["escape_volume"][:, run["escape_pool"].values == pool], "escape"),
        losses=float(_growth(here["pool_loss_volume"])),
        storage_change=float(_growth(here["pool_volume"])),
    )


def _growth(volumes: xr.DataArray) -> np.ndarray:
    """Last less first value along time."""
    if not volumes.sizes["time"]:
        return np.zeros(volumes.shape[1:])
    growth: np.ndarray = volumes.values[-1] - volumes.values[0]
    return growth


def _by_name(volumes: xr.DataArray, place: str) -> dict[str, float]:
    return dict(zip(names(volumes[place]), _growth(volumes).tolist(), strict=True))

"""The water ledger: what came in, where it went, what was stored, and what is left unexplained."""

from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import names
from toeline.units import SPELLINGS


@dataclass(frozen=True)
class Ledger:
    """Volumes over the run [m³]: inflow = deliveries + outflow + change of storage + residual."""

    inflow: float
    outflow: float
    deliveries: dict[str, float]
    storage_changes: dict[str, float]

    @property
    def delivered(self) -> float:
        """Volume delivered at all offtakes."""
        return sum(self.deliveries.values())

    @property
    def storage_change(self) -> float:
        """Growth of the volume stored in all pools."""
        return sum(self.storage_changes.values())

    @property
    def residual(self) -> float:
        """What the other entries leave unexplained."""
        return self.inflow - self.delivered - self.outflow - self.storage_change


def ledger(run: xr.Dataset) -> Ledger:
    """The ledger of a run, from its first output step to its last; all zero where it has no step."""
    return Ledger(
        inflow=float(_growth(run["canal_inflow_volume"])),
        outflow=float(_growth(run["canal_outflow_volume"])),
        deliveries=_by_name(run["delivery_volume"], "offtake"),
        storage_changes=_by_name(run["pool_volume"], "pool"),
    )


def acre_feet(volume: float) -> float:
    """A volume in m³ as acre-feet."""
    return volume / SPELLINGS["volume"]["acre-ft"]


def _growth(volumes: xr.DataArray) -> np.ndarray:
    """Last less first value along time."""
    if not volumes.sizes["time"]:
        return np.zeros(volumes.shape[1:])
    growth: np.ndarray = volumes.values[-1] - volumes.values[0]
    return growth


def _by_name(volumes: xr.DataArray, place: str) -> dict[str, float]:
    return dict(zip(names(volumes[place]), _growth(volumes).tolist(), strict=True))

"""Water taken in and given away over a run, as indicators."""

from collections.abc import Iterator

import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.ledger import ledger

_OF_PARTS = {"escape_volume": "volume spilled", "pool_loss_volume": "volume lost"}
"""Running volumes of the escapes and of the pools, where the canal has them."""


def volume_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """Volumes of the whole canal [m³]."""
    whole = ledger(run)
    yield Indicator("volume taken in", "", whole.inflow, "m3", "none")
    yield Indicator("volume let out at the tail", "", whole.outflow, "m3", "none")
    for variable, name in _OF_PARTS.items():
        if variable in run:
            volumes = run[variable].values
            yield Indicator(name, "", float((volumes[-1] - volumes[0]).sum()), "m3", "lower")

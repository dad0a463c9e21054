"""Water taken in and given away over a run, as indicators."""

from collections.abc import Iterator

import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.ledger import ledger


def volume_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """Volumes of the whole canal [m³]; spilled and lost ones where the canal has escapes or losses."""
    canal = ledger(run).canal
    yield Indicator("volume taken in", "", canal.inflow, "m3", "none")
    yield Indicator("volume let out at the tail", "", canal.outflow, "m3", "none")
    if canal.escapes:
        yield Indicator("volume spilled", "", canal.spilled, "m3", "lower")
    if canal.losses:
        yield Indicator("volume lost", "", canal.losses, "m3", "lower")

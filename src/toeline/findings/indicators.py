"""The figures of a run by which ways of operating are compared, from the dataset alone."""

import xarray as xr

from toeline.findings.deliveries import delivery_indicators
from toeline.findings.gate_use import gate_indicators
from toeline.findings.indicator import Indicator
from toeline.findings.level_errors import level_indicators
from toeline.findings.limit_indicators import limit_indicators
from toeline.findings.volumes import volume_indicators

__all__ = ["Indicator", "indicators", "place_indicators"]


def indicators(run: xr.Dataset) -> list[Indicator]:
    """All indicators of a run; those for which it has nothing to count are left out, none is missing or infinite."""
    families = (limit_indicators, volume_indicators)
    more = [indicator for family in families for indicator in family(run)] if run.sizes["time"] else []
    return place_indicators(run) + more


def place_indicators(run: xr.Dataset) -> list[Indicator]:
    """Those of deliveries, levels and gates: what limits and ledger, which tell the rest, do not tell."""
    families = (delivery_indicators, level_indicators, gate_indicators)
    return [indicator for family in families for indicator in family(run)] if run.sizes["time"] else []

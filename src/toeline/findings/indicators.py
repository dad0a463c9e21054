"""The figures of a run by which ways of operating are compared, from the dataset alone."""

import xarray as xr

from toeline.findings.deliveries import delivery_indicators
from toeline.findings.gate_use import gate_indicators
from toeline.findings.indicator import Indicator
from toeline.findings.level_errors import level_indicators
from toeline.findings.limit_indicators import limit_indicators
from toeline.findings.volumes import volume_indicators
from toeline.results.dataset import read_apart

__all__ = ["Indicator", "indicators"]


def indicators(run: xr.Dataset) -> list[Indicator]:
    """All indicators of a run; those for which it has nothing to count are left out, none is missing or infinite."""
    if not run.sizes["time"]:
        return []
    found: list[Indicator] = []
    for family in (delivery_indicators, level_indicators, gate_indicators, limit_indicators, volume_indicators):
        with read_apart(run) as apart:
            found += family(apart)
    return found

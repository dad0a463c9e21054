"""The figures of a run by which ways of operating are compared, from the dataset alone."""

from collections.abc import Callable, Iterator

import xarray as xr

from toeline.findings.deliveries import delivery_indicators
from toeline.findings.gate_use import gate_indicators
from toeline.findings.indicator import Indicator
from toeline.findings.level_errors import level_indicators
from toeline.findings.limit_indicators import limit_indicators
from toeline.findings.volumes import volume_indicators
from toeline.results.dataset import read_apart

__all__ = ["Indicator", "indicators", "place_indicators"]


def indicators(run: xr.Dataset) -> list[Indicator]:
    """All indicators of a run; those for which it has nothing to count are left out, none is missing or infinite."""
    return place_indicators(run) + _of_families(run, limit_indicators, volume_indicators)


def place_indicators(run: xr.Dataset) -> list[Indicator]:
    """Those of deliveries, levels and gates: what limits and ledger, which tell the rest, do not tell."""
    return _of_families(run, delivery_indicators, level_indicators, gate_indicators)


def _of_families(run: xr.Dataset, *families: Callable[[xr.Dataset], Iterator[Indicator]]) -> list[Indicator]:
    found: list[Indicator] = []
    for family in families if run.sizes["time"] else ():
        found += family(read_apart(run))
    return found

"""How much of every limit a run used."""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.indicator import Indicator
from toeline.findings.limit_incidents import limit_uses


def limit_indicators(run: xr.Dataset) -> Iterator[Indicator]:
    """The used part of every limit in percent, or the room left to it, at the worst place.

    Limits of one name are told apart by their number in the canal file.
    """
    uses = limit_uses(run)
    subjects = [use.limit.subject for use in uses]
    for number, use in enumerate(uses, start=1):
        if np.isnan(use.worst.value):
            continue
        name = use.limit.subject
        if subjects.count(name) > 1:
            name += f" (limit {number} of the canal file)"
        if use.share is None:
            yield Indicator(f"room to the limit: {name}", "", use.room, use.limit.unit, "higher", use.where)
        else:
            yield Indicator(f"part of the limit used: {name}", "", 100.0 * use.share, "%", "lower", use.where)

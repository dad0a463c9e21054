"""Deliveries that fall short of what was asked."""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.deliveries import SHORTFALL_FROM
from toeline.findings.incident import Incident, Measure, Settling
from toeline.findings.series import hours_of_rows, names
from toeline.findings.spells import spells
from toeline.results.dataset import in_parts

VOLUME_LACKING = "volume not delivered"
_NEEDED = ("demand", "delivery")


def delivery_shortfalls(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    """Nothing is interpolated over a change of the demand, which may come at once."""
    for part in in_parts(run, "offtake", *_NEEDED):
        yield from _shortfalls(part, settling)


def _shortfalls(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    times, demands, deliveries = (run[name].values for name in ("time", *_NEEDED))
    lacking = demands - deliveries
    seconds = hours_of_rows(times) * 3600.0
    for offtake, (name, pool) in enumerate(zip(names(run["offtake"]), names(run["offtake_pool"]), strict=True)):
        margin = SHORTFALL_FROM - lacking[:, offtake]
        changes = np.diff(demands[:, offtake], prepend=demands[:1, offtake]) != 0.0
        for spell in spells(margin < 0.0, times, np.where(changes, np.nan, margin)):
            row = spell.first + int(np.argmax(lacking[spell.rows, offtake]))
            volume = float(lacking[spell.rows, offtake] @ seconds[spell.rows])
            yield Incident(
                "delivery shortfall",
                name,
                spell.start,
                spell.end,
                float(deliveries[row, offtake]),
                times[row],
                limit=float(demands[row, offtake]),
                unit="m3 s-1",
                source="demand of the day file",
                settling=settling.during(spell, pool),
                runs_to_end=spell.runs_to_end,
                also=(Measure(VOLUME_LACKING, volume, "m3"),),
            )

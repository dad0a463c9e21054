"""Limits of the owner that were passed, and how near each came to it where none was."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.incident import Incident, Measure, Settling
from toeline.findings.limits import Limit, limits_of_run
from toeline.findings.series import NO_EXTREME, Extreme
from toeline.findings.spells import Spell
from toeline.findings.watches import Watch, watches


def limits_passed(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    """An incident for every unbroken time during which a limit was passed at a place."""
    if run.sizes["time"]:
        for watch in watches(run):
            for spell in watch.spells:
                yield _incident(watch, spell, settling)


def _incident(watch: Watch, spell: Spell, settling: Settling) -> Incident:
    limit, worst = watch.limit, watch.worst(spell.rows)
    row = int(np.searchsorted(watch.times, worst.time))
    return Incident(
        f"{limit.subject} {'below' if limit.is_least else 'over'} the limit",
        watch.where,
        spell.start,
        spell.end,
        worst.value,
        worst.time,
        limit=limit.limit,
        unit=limit.unit,
        source=limit.source,
        settling=settling.during(spell, *watch.pools),
        runs_to_end=spell.runs_to_end,
        chainage=None if watch.chainages is None else float(watch.chainages[row]),
        also=tuple(Measure(name, float(series[row]), "m") for name, series in watch.also),
        window=limit.window,
    )


@dataclass(frozen=True)
class LimitUse:
    """How near the run came to a limit, at the place `where` it came nearest; no extreme where nothing was watched.

    `room` is what was left, in the unit of the limit; negative: by how much it was passed.
    """

    limit: Limit
    where: str
    worst: Extreme

    @property
    def room(self) -> float:
        room = self.worst.value - self.limit.limit
        return room if self.limit.is_least else -room

    @property
    def share(self) -> float | None:
        """The part of the limit that was used, 1 where it was reached; None for a limit that has no parts."""
        return self.worst.value / self.limit.limit if self.limit.is_share and self.limit.limit > 0.0 else None


def limit_uses(run: xr.Dataset) -> list[LimitUse]:
    """All limits in the order of the canal file with the worst value of each, whether it was passed or not."""
    nearest: dict[Limit, LimitUse] = {}
    for watch in watches(run) if run.sizes["time"] else ():
        use = LimitUse(watch.limit, watch.where, watch.worst())
        before = nearest.get(watch.limit)
        if before is None or use.room < before.room:
            nearest[watch.limit] = use
    return [nearest.get(limit, LimitUse(limit, "", NO_EXTREME)) for limit in limits_of_run(run)]

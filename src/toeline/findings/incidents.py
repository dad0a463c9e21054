"""Incidents: what passed a limit, where, from when to when, how far, and whose limit it is.

An incident is one unbroken spell at one place. Where a margin runs through zero its beginning and end are interpolated
between output steps; elsewhere they are the steps at which the change is seen. No incident does not mean safe.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.deliveries import SHORTFALL_FROM
from toeline.findings.series import greatest, hours_of_rows, is_any, least, meanings, names
from toeline.findings.spells import Spell, spells
from toeline.results.provenance import COMPLETE

JUMP_END = "end of the jump from the gate"
VOLUME_LACKING = "volume not delivered"


@dataclass(frozen=True)
class Measure:
    """A further worst value of an incident, with its limit where it has one."""

    name: str
    value: float
    unit: str
    limit: float | None = None


@dataclass(frozen=True)
class Incident:
    """One incident. `worst` and `limit` are in `unit`; NaN and NaT where there is no number to give.

    `settling` says that waves of a gate move were still travelling in a pool beside it at some time of the incident, so
    that its levels are least trustworthy; `runs_to_end` that it still went on when the run ended.
    """

    what: str
    where: str
    start: np.datetime64
    end: np.datetime64
    worst: float
    worst_time: np.datetime64
    limit: float
    unit: str
    source: str
    settling: bool = False
    runs_to_end: bool = False
    chainage: float | None = None
    also: tuple[Measure, ...] = ()


def incidents(run: xr.Dataset) -> list[Incident]:
    """All incidents of a run, by their beginning."""
    settling = _Settling(run)
    found = [
        *_jumps_beyond_protection(run, settling),
        *_jumps_swept_out(run, settling),
        *_water_above("bank", run, settling),
        *_water_above("lining", run, settling),
        *_velocities_over_limit(run, settling),
        *_delivery_shortfalls(run, settling),
        *_early_stop(run),
    ]
    return sorted(found, key=lambda incident: (incident.start, incident.what, incident.where))


class _Settling:
    """When waves of a gate move still travelled in each pool."""

    def __init__(self, run: xr.Dataset):
        self._times = run["time"].values
        self._is_settling = is_any(run["settling"], "settling")
        self._columns = {name: column for column, name in enumerate(names(run["pool"]))}

    def during(self, spell: Spell, *pools: str) -> bool:
        """Whether one of the pools was settling at an output step of the spell; "head" and "tail" are no pools."""
        rows = slice(np.searchsorted(self._times, spell.start), np.searchsorted(self._times, spell.end, side="right"))
        return any(self._is_settling[rows, self._columns[pool]].any() for pool in pools if pool in self._columns)


def _jumps_beyond_protection(run: xr.Dataset, settling: _Settling) -> Iterator[Incident]:
    is_beyond = is_any(run["jump_state"], "beyond_protection", "swept_out_of_pool")
    return _jump_incidents("jump beyond protection", is_beyond, run["protection_margin"].values, run, settling)


def _jumps_swept_out(run: xr.Dataset, settling: _Settling) -> Iterator[Incident]:
    is_swept_out = is_any(run["jump_state"], "swept_out_of_pool")
    no_margin = np.full(is_swept_out.shape, np.nan)
    return _jump_incidents("jump swept out of the pool", is_swept_out, no_margin, run, settling)


def _jump_incidents(
    what: str, holds: np.ndarray, crossing: np.ndarray, run: xr.Dataset, settling: _Settling
) -> Iterator[Incident]:
    """`holds` and `crossing`, the margin that begins and ends it, are along time and gate."""
    times, margins, ends = (run[name].values for name in ("time", "protection_margin", "jump_end_distance"))
    neighbours = list(zip(names(run["gate_upstream_pool"]), names(run["gate_downstream_pool"]), strict=True))
    for gate, name in enumerate(names(run["gate"])):
        for spell in spells(holds[:, gate], times, crossing[:, gate]):
            worst = least(margins[spell.rows, gate], times[spell.rows])
            furthest = greatest(ends[spell.rows, gate], times[spell.rows])
            yield Incident(
                what,
                name,
                spell.start,
                spell.end,
                worst.value,
                worst.time,
                limit=0.0,
                unit="m",
                source="tailwater to spare before the jump ends beyond the protected surfaces of the canal file",
                settling=settling.during(spell, *neighbours[gate]),
                runs_to_end=spell.runs_to_end,
                also=(Measure(JUMP_END, furthest.value, "m", float(run["gate_protection_end"].values[gate])),),
            )


def _water_above(edge: str, run: xr.Dataset, settling: _Settling) -> Iterator[Incident]:
    """Water above the bank, or above the lining."""
    times, margins = run["time"].values, run[f"pool_{edge}_margin"].values
    for pool, name in enumerate(names(run["pool"])):
        for spell in spells(margins[:, pool] < 0, times, margins[:, pool]):
            worst = least(margins[spell.rows, pool], times[spell.rows])
            yield Incident(
                f"water above the {edge}",
                name,
                spell.start,
                spell.end,
                worst.value,
                worst.time,
                limit=0.0,
                unit="m",
                source=f"{edge} over the water, by {edge}_height of the canal file",
                settling=settling.during(spell, name),
                runs_to_end=spell.runs_to_end,
            )


def _velocities_over_limit(run: xr.Dataset, settling: _Settling) -> Iterator[Incident]:
    """At the times of the profiles, pool by pool, by the node furthest over the limit of its surface."""
    times, limits, velocities = (run[name].values for name in ("profile_time", "velocity_limit", "velocity"))
    margins = np.nan_to_num(limits - np.abs(velocities), nan=np.inf)
    for pool, name in enumerate(names(run["pool"])):
        nodes = np.flatnonzero((run["node_pool"].values == pool) & np.isfinite(limits))
        in_pool = margins[:, nodes].min(axis=1, initial=np.inf)
        for spell in spells(in_pool < 0, times, in_pool):
            row = spell.first + int(np.argmin(in_pool[spell.rows]))
            node = int(nodes[np.argmin(margins[row, nodes])])
            surface = meanings(run["surface"])[int(run["surface"].values[node])]
            yield Incident(
                "velocity over the limit of the surface",
                name,
                spell.start,
                spell.end,
                abs(float(velocities[row, node])),
                times[row],
                limit=float(limits[node]),
                unit="m s-1",
                source=f"velocity_limit of surface {surface} in the canal file",
                settling=settling.during(spell, name),
                runs_to_end=spell.runs_to_end,
                chainage=float(run["chainage"].values[node]),
            )


def _delivery_shortfalls(run: xr.Dataset, settling: _Settling) -> Iterator[Incident]:
    times, demands, deliveries = (run[name].values for name in ("time", "demand", "delivery"))
    lacking = demands - deliveries
    seconds = hours_of_rows(times) * 3600.0
    for offtake, (name, pool) in enumerate(zip(names(run["offtake"]), names(run["offtake_pool"]), strict=True)):
        for spell in spells(lacking[:, offtake] > SHORTFALL_FROM, times):
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


def _early_stop(run: xr.Dataset) -> Iterator[Incident]:
    outcome, times = run.attrs["outcome"], run["time"].values
    if outcome != COMPLETE:
        end = times[-1] if times.size else np.datetime64("NaT", "ns")
        yield Incident(
            "run stopped early", run.attrs["canal"], end, end, np.nan, end, np.nan, "", outcome, runs_to_end=True
        )

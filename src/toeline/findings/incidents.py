"""Incidents: what passed a limit, where, from when to when, how far, and whose limit it is.

An incident is one unbroken spell at one place. Where a margin runs through zero its beginning and end are interpolated
between output steps; elsewhere they are the steps at which the change is seen. No incident does not mean safe.
"""

from collections.abc import Callable, Iterator
from functools import partial

import numpy as np
import xarray as xr

from toeline.findings.delivery_incidents import delivery_shortfalls
from toeline.findings.incident import Incident, Measure, Settling
from toeline.findings.jump_incidents import jumps_beyond_protection, jumps_swept_out
from toeline.findings.limit_incidents import limits_passed
from toeline.findings.water_incidents import velocities_over_limit, water_above
from toeline.results.dataset import read_apart
from toeline.results.provenance import COMPLETE

__all__ = ["Incident", "Measure", "incidents"]


def incidents(run: xr.Dataset) -> list[Incident]:
    """All incidents of a run, by their beginning."""
    settling = Settling(run)
    found = list(_early_stop(run))
    for family in _FAMILIES:
        found += family(read_apart(run), settling)
    return sorted(found, key=lambda incident: (incident.start, incident.what, incident.where))


_FAMILIES: tuple[Callable[[xr.Dataset, Settling], Iterator[Incident]], ...] = (
    jumps_beyond_protection,
    jumps_swept_out,
    partial(water_above, "bank"),
    partial(water_above, "lining"),
    velocities_over_limit,
    delivery_shortfalls,
    limits_passed,
)


def _early_stop(run: xr.Dataset) -> Iterator[Incident]:
    outcome, times = run.attrs["outcome"], run["time"].values
    if outcome != COMPLETE:
        end = times[-1] if times.size else np.datetime64("NaT", "ns")
        yield Incident(
            "run stopped early", run.attrs["canal"], end, end, np.nan, end, np.nan, "", outcome, runs_to_end=True
        )

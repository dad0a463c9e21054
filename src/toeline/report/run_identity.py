"""Which run is looked at: what every page and figure says about where its numbers come from."""

from dataclasses import dataclass

import xarray as xr

from toeline.report.run_clock import RunClock


@dataclass(frozen=True)
class RunIdentity:
    """Canal, day, plan ("plan early" or "no plan"), period, zone of its clock times, version and outcome."""

    canal: str
    day: str
    plan: str
    period: str
    zone: str
    version: str
    outcome: str


def run_identity(run: xr.Dataset) -> RunIdentity:
    """What a run with at least one output step says about itself."""
    clock = RunClock(run)
    return RunIdentity(
        canal=run.attrs["canal"],
        day=run.attrs["title"],
        plan=f"plan {run.attrs['plan']}" if run.attrs["plan"] else "no plan",
        period=f"{clock.start:%A %Y-%m-%d}, {clock.span(run['time'].values[0], run['time'].values[-1])}",
        zone=run.attrs["zone"] or f"UTC{run.attrs['utc_offset']}",
        version=run.attrs["source"],
        outcome=run.attrs["outcome"],
    )

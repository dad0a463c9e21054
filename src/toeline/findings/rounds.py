"""Rounds: what a gatekeeper is to do at every visit, by the rules of the plan that speak of visits."""

import json
from dataclasses import dataclass
from typing import Any

import numpy as np
import xarray as xr

from toeline.findings.gate_orders import gauge_beside
from toeline.findings.series import names

KIND = "gatekeeper rounds"


@dataclass(frozen=True)
class Rounds:
    """The rule of one gate; lengths in m, `targets` as on the gauge that is named, else above the datum.

    `visits` are times of day such as "07:00", `every` and `hours` stand in their place where they are empty: seconds
    between the visits, and from when to when there are any. `targets` are seconds from the start and what holds from
    then on; on a straight line between them where `is_sloped`.
    """

    gate: str
    side: str
    gauge: str
    targets: tuple[tuple[float, float], ...]
    is_sloped: bool
    band: float
    step: float
    visits: tuple[str, ...]
    every: float
    hours: tuple[str, ...]


def rounds(run: xr.Dataset) -> list[Rounds]:
    """The rounds of the plan, in the order of the day file."""
    rules = json.loads(run.attrs["resolved_settings"]).get("rules", [])
    return [_rounds(run, rule) for rule in rules if rule["kind"] == KIND]


def _rounds(run: xr.Dataset, rule: dict[str, Any]) -> Rounds:
    side = "upstream" if rule["where"] == "above the gate" else "downstream"
    gauge, zero = gauge_beside(run, rule["gate"], side)
    targets = rule["target"] or {"times": [0], "values": [_target_above(run, rule["gate"])], "shape": "steps"}
    return Rounds(
        gate=rule["gate"],
        side=side,
        gauge=gauge,
        targets=tuple(
            (at / 1000.0, level - zero) for at, level in zip(targets["times"], targets["values"], strict=True)
        ),
        is_sloped=targets["shape"] == "lines" and len(set(targets["values"])) > 1,
        band=rule["band"],
        step=rule["step"],
        visits=tuple(visit[:5] for visit in rule["visits"] or ()),
        every=rule["every"] or np.nan,
        hours=tuple(hour[:5] for hour in rule["hours"] or ()),
    )


def _target_above(run: xr.Dataset, gate: str) -> float:
    pool = names(run["gate_upstream_pool"])[names(run["gate"]).index(gate)]
    return float(run["pool_target_level"].values[names(run["pool"]).index(pool)])

"""Where the jumps stood over the run: hours in every state and worst margins, gate by gate.

Two hazards stand side by side. Beyond the protected floor a jump scours; a drowned jump is a roller that drowns people.
Little of one says nothing about the other, and no state is safe to enter.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr

from toeline.findings.series import Extreme, greatest, hours_in_each, hours_of_rows, is_any, least
from toeline.findings.spells import Spell, spells
from toeline.results.dataset import in_parts

BEYOND_PROTECTION = ("beyond_protection", "swept_out_of_pool")
"""States of a jump that the floor does not bear."""

_NEEDED = (
    "gate_flow_state",
    "jump_state",
    "jump_kind",
    "protection_margin",
    "tailwater_margin",
    "jump_end_distance",
)


@dataclass(frozen=True)
class GateJumps:
    """One gate over the whole run: hours by state, and the worst values with their times.

    `protection_margin` and `tailwater_margin` are the least, `jump_end_distance` the greatest [m]; NaN where there was
    no value at all. `rollers` are the times with a drowned jump, `beyond_protection` those with one that ended beyond
    the protected floor or was swept out of the pool.
    """

    gate: str
    flow_state_hours: dict[str, float]
    jump_state_hours: dict[str, float]
    jump_kind_hours: dict[str, float]
    protection_margin: Extreme
    tailwater_margin: Extreme
    jump_end_distance: Extreme
    rollers: tuple[Spell, ...]
    beyond_protection: tuple[Spell, ...]

    @property
    def beyond_protection_hours(self) -> float:
        """Hazard to the floor: the jump ended beyond the protected floor, or was swept out of the pool."""
        return _hours(self.beyond_protection)

    @property
    def roller_hours(self) -> float:
        """Hazard to people: the jump was drowned, a roller at the gate. Other hours are no safer to enter."""
        return _hours(self.rollers)


def gate_jumps(run: xr.Dataset) -> list[GateJumps]:
    """All gates from the head down. Each output step stands for half of the time to its neighbours."""
    parts = (part[list(_NEEDED)].load() for part in in_parts(run, "gate", *_NEEDED))
    return [_of_gate(part.isel(gate=index)) for part in parts for index in range(part.sizes["gate"])]


def _of_gate(run: xr.Dataset) -> GateJumps:
    times = run["time"].values
    hours = hours_of_rows(times)
    return GateJumps(
        gate=str(run["gate"].values),
        flow_state_hours=hours_in_each(run["gate_flow_state"], hours),
        jump_state_hours=hours_in_each(run["jump_state"], hours),
        jump_kind_hours=hours_in_each(run["jump_kind"], hours),
        protection_margin=least(run["protection_margin"].values, times),
        tailwater_margin=least(run["tailwater_margin"].values, times),
        jump_end_distance=greatest(run["jump_end_distance"].values, times),
        rollers=tuple(spells(is_any(run["jump_state"], "drowned"), times, -run["tailwater_margin"].values)),
        beyond_protection=tuple(
            spells(is_any(run["jump_state"], *BEYOND_PROTECTION), times, run["protection_margin"].values)
        ),
    )


def _hours(times: Sequence[Spell]) -> float:
    return float(sum((spell.end - spell.start) / np.timedelta64(1, "h") for spell in times))

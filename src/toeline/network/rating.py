"""Rating of a gate: discharge by headwater, tailwater and opening, its modular limit, and the tailwater its jump
needs.
"""

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from itertools import product
from typing import NamedTuple

import numpy as np
import xarray as xr

from toeline.hydraulics.drowned_gate import jet_width
from toeline.hydraulics.gradually_varied_flow import supercritical_profile
from toeline.hydraulics.jump_location import Jet, drowning_depth, jet_on_floor, protection_margin
from toeline.hydraulics.underflow_gate import (
    GateFlow,
    free_jet,
    gate_flow,
    modular_limit_depth,
)
from toeline.network.build import network_of
from toeline.network.tables import Network
from toeline.scenario import CanalFile

SPACING = 100.0
"""Spacing of nodes [m]; a jet's profile does not depend on it."""

JET_POINTS = 400

HIGHEST_HEAD = 50.0
"""Highest level above the sill [m] that is rated (choice): above stand levels in another unit, not those of a canal."""

STATES = (
    "closed", "free", "near_modular_limit", "drowned", "clear_of_water", "clear_and_drowned", "overtopped", "reverse",
)  # fmt: skip
QUALITIES = ("good", "near_modular_limit", "lip_near_surface", "very_drowned", "reverse")


@dataclass(frozen=True)
class RatingRow:
    """One entry of a rating table; levels in m above datum, opening in m, discharge in m³/s.

    `modular_limit_level` is the tailwater at which the flow begins to drown, `protection_limit_level` that below
    which the end of the jump leaves the protected floor; NaN where there is none.
    """

    headwater_level: float
    tailwater_level: float
    opening: float
    discharge: float
    flow_state: str
    modular_limit_level: float
    protection_limit_level: float
    quality: str


class TailwaterLimits(NamedTuple):
    """Tailwater levels [m] at which something changes below a gate, at one headwater and opening; NaN where none does.

    The flow drowns above the first, the jump above the second; below the third the jump ends beyond the apron, below
    the fourth beyond the protected floor. The tailwater is taken as level.
    """

    modular_limit_level: float
    drowning_level: float
    apron_limit_level: float
    protection_limit_level: float


NO_LIMITS = TailwaterLimits(math.nan, math.nan, math.nan, math.nan)


def rating_table(
    canal: CanalFile,
    gate_name: str,
    headwater_levels: Iterable[float],
    tailwater_levels: Sequence[float],
    openings: Sequence[float],
) -> list[RatingRow]:
    """Rows for every combination of headwater level, opening and tailwater level, in this order of change.

    Raises ValueError where the canal has no gate of that name.
    """
    site = _Site(network_of(canal.canal, SPACING), gate_name)
    rows = []
    for up, opening in product(headwater_levels, openings):
        limits = site.limits(float(up), float(opening))
        rows += [site.row(float(up), float(down), float(opening), limits) for down in tailwater_levels]
    return rows


def operating_range(
    canal: CanalFile,
    gate_name: str,
    headwater_levels: np.ndarray,
    tailwater_levels: np.ndarray,
    openings: np.ndarray,
) -> xr.Dataset:
    """What flow and jump do over the plane of tailwater and opening, at each headwater, as a dataset in SI units.

    `discharge` and `flow_state` are by headwater, opening and tailwater; the levels of `TailwaterLimits` by headwater
    and opening. Tailwaters above a headwater have no values. ValueError where the canal has no gate of that name.
    """
    site = _Site(network_of(canal.canal, SPACING), gate_name)
    shape = len(headwater_levels), len(openings), len(tailwater_levels)
    discharge, state = np.full(shape, np.nan), np.full(shape, np.nan)
    limits = np.full((*shape[:2], len(TailwaterLimits._fields)), np.nan)
    for (i, up), (j, opening) in product(enumerate(headwater_levels), enumerate(openings)):
        limits[i, j] = site.limits(float(up), float(opening))
        for k, down in enumerate(tailwater_levels):
            if down < up:
                flow = site.flow(float(up), float(down), float(opening))
                discharge[i, j, k], state[i, j, k] = flow.discharge, flow.state
    by_opening = ("headwater", "opening")
    return xr.Dataset(
        {
            "discharge": ((*by_opening, "tailwater"), discharge),
            "flow_state": ((*by_opening, "tailwater"), state, {"flag_meanings": " ".join(STATES)}),
            **{name: (by_opening, limits[..., k]) for k, name in enumerate(TailwaterLimits._fields)},
        },
        {"headwater": headwater_levels, "opening": openings, "tailwater": tailwater_levels},
        {"canal": canal.canal.name, "gate": gate_name, "floor_level": site.law.floor_level},
    )  # fmt: skip


def default_rating_levels(canal: CanalFile, gate_name: str) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Headwater levels, tailwater levels and openings [m] that span the gate's work where the caller names none.

    Headwaters about the target level (or the reservoir's), tailwaters from the floor below up to the headwater,
    openings up to the travel.
    """
    names = [gate.name for gate in canal.canal.gates]
    gate = canal.canal.gates[names.index(gate_name)]
    pools = {pool.name: pool for pool in canal.canal.pools}
    target = canal.canal.head.level if gate.upstream == "head" else pools[gate.upstream].target_level
    top = target if target is not None else gate.sill_level + 1.5 * gate.max_opening
    headwaters = np.array([top - 0.2, top, top + 0.2])
    floor = _Site(network_of(canal.canal, SPACING), gate_name).law.floor_level
    tailwaters = np.linspace(floor, top, 6)[:-1]
    return headwaters, tailwaters, gate.max_opening * np.array([0.1, 0.2, 0.4, 0.6, 0.8, 1.0])


def ratable_levels(canal: CanalFile, gate_name: str) -> tuple[tuple[float, float], tuple[float, float]]:
    """Least and greatest headwater level, least and greatest tailwater level [m] at which a gate can be rated.

    The headwater stands on the sill or above, the tailwater on the floor or above.
    """
    law = _Site(network_of(canal.canal, SPACING), gate_name).law
    highest = law.sill_level + HIGHEST_HEAD
    return (law.sill_level, highest), (law.floor_level, highest)


class _Site:
    """A gate with the sections beside it and the floor below."""

    def __init__(self, network: Network, gate_name: str):
        if gate_name not in network.names.gates:
            raise ValueError(f"no gate named {gate_name!r}")
        g = network.names.gates.index(gate_name)
        self.gate, self.channel = network.tables.gates[g], network.channel
        self.law, self.above, self.below = network.gate_law(g)

    def flow(self, up: float, down: float, opening: float) -> GateFlow:
        return gate_flow(self.law, self.above, self.below, up, down, opening)

    def row(self, up: float, down: float, opening: float, limits: TailwaterLimits) -> RatingRow:
        flow = self.flow(up, down, opening)
        return RatingRow(
            up, down, opening, flow.discharge, STATES[flow.state], limits.modular_limit_level,
            limits.protection_limit_level, QUALITIES[flow.quality],
        )  # fmt: skip

    def limits(self, up: float, opening: float) -> TailwaterLimits:
        _, thickness, discharge, _ = free_jet(self.law, self.above, up, opening)
        if discharge <= 0.0:
            return NO_LIMITS
        modular = self.law.floor_level + modular_limit_depth(self.law, self.below, thickness, discharge)
        step = self.law.sill_level - self.law.floor_level
        jet = jet_on_floor(self.below, jet_width(self.law), thickness, step, discharge)
        if jet.froude <= 1.0:
            return NO_LIMITS._replace(modular_limit_level=modular)
        drowning = self.law.floor_level + drowning_depth(self.below, jet)
        return TailwaterLimits(modular, drowning, *self._levels_at_ends(jet, opening))

    def _levels_at_ends(self, jet: Jet, opening: float) -> Iterator[float]:
        """Levels of still tailwater whose jump ends where apron and protection end: margins of tailwater at datum."""
        first, last = self.gate.downstream_node, self.gate.floor_last
        origin = self.channel.nodes[first].chainage
        chainages, depths = np.zeros(JET_POINTS), np.zeros(JET_POINTS)
        count, _ = supercritical_profile(
            self.channel, first, last, origin + opening, jet.full_depth, jet.discharge, chainages, depths
        )
        still = np.zeros(self.channel.nodes.size)
        for end in (origin + self.gate.apron_end, origin + self.gate.protection_end):
            yield -protection_margin(self.channel, first, last, still, jet.discharge, chainages, depths, count, end)

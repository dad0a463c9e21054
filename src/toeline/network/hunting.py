"""Rules that may never bring a level to rest, because their gate cannot make moves as small as their dead band asks."""

import math
from collections.abc import Iterator

import numpy as np

from toeline.errors import Fault
from toeline.hydraulics.underflow_gate import gate_discharge
from toeline.network.tables import FORCING_TAIL, Network
from toeline.network.timetable import Timetable
from toeline.rules.hold_upstream_level import HoldUpstreamLevel
from toeline.scenario import Scenario
from toeline.units import UnitSystem, file_factor, quantity_text

LEVEL_STEP = 1e-3
"""Change of level [m] over which the slope of the gate law is taken."""


def hunting_rules(
    scenario: Scenario, network: Network, timetable: Timetable, level: np.ndarray, openings: np.ndarray
) -> Iterator[Fault]:
    """Rules for a level above their gate whose dead band, b on either side, a smallest move may step over (E46), each
    on its line.

    `level` [m] by node and `openings` [m] by leaf are those at the start. Rules that make no lasting error good come to
    rest all the same; under those that hold something else the level has no such end of its own.
    """
    for index, rule in enumerate(scenario.rules):
        if rule.found.rule is not HoldUpstreamLevel or not HoldUpstreamLevel.makes_good(rule.given):
            continue
        g, band = network.names.gates.index(rule.given.gate), rule.given.band
        move, opening = _smallest_move(network, timetable, g), float(np.mean(openings[network.leaves_of(g)]))
        change = level_change(network, g, _levels_beside(network, timetable, g, level), opening, move)
        if band < 0.5 * change:
            words = _words(rule.given.gate, band, move, change, scenario.display.system)
            yield scenario.fault(words, "plans", scenario.plan or "", "rules", index, "band", file="day")


def _smallest_move(network: Network, timetable: Timetable, g: int) -> float:
    """Smallest move of a gate [m], or the spacing of the marks that its openings are rounded to."""
    marks = timetable.marks[g]
    return max(float(network.names.smallest_move[g]), marks.spacing if marks else 0.0)


def _levels_beside(network: Network, timetable: Timetable, g: int, level: np.ndarray) -> tuple[float, float]:
    """Levels [m] above and below a gate with a pool above it."""
    row = network.tables.gates[g]
    is_tail = row.downstream_node >= network.node_count
    below = timetable.values_at(0)[FORCING_TAIL] if is_tail else level[row.downstream_node]
    return float(level[row.upstream_node]), float(below)


def level_change(network: Network, g: int, levels: tuple[float, float], opening: float, move: float) -> float:
    """Change of the level above gate `g` in the end [m] after a `move` [m] of all its leaves, what comes into the pool
    and the level below being as before; 0 where it has no such end, as at a gate that passes nothing (E46).

    `levels` [m] are those above and below the gate.
    """
    law, above, below = network.gate_law(g)
    up, down = levels
    if opening <= 0.0 or up <= down:
        return 0.0
    low, high = max(opening - 0.5 * move, 0.0), opening + 0.5 * move
    by_move = gate_discharge(law, above, below, up, down, high) - gate_discharge(law, above, below, up, down, low)
    by_level = gate_discharge(law, above, below, up + LEVEL_STEP, down, opening)
    slope = (by_level - gate_discharge(law, above, below, up, down, opening)) / LEVEL_STEP
    return float(by_move / slope) if by_move > 0.0 and slope > 0.0 else 0.0


def _words(gate: str, band: float, move: float, change: float, system: UnitSystem) -> str:
    finest = (0.001 if system is UnitSystem.metric else 0.01) * file_factor("length", system)
    least = math.ceil(0.5 * change / finest) * finest
    found, moved, changed, enough = (
        quantity_text(value, "length", system) for value in (band, move, round(change / finest) * finest, least)
    )
    return (
        f"found {found}; a smallest move of {gate}, {moved}, changes the level above it by {changed} in the end, which "
        f"is more than the band is wide: it may move to and fro without end; {enough} would do at the flow of the start"
    )

"""The equations of the time loop given to a general stiff integrator: LSODA with a banded Jacobian.

Source: Petzold 1983 (LSODA); Hindmarsh 1983 (ODEPACK), as scipy.integrate.odeint. Unknowns are the levels and, between
them, the convective heads of the reach links, so that the Jacobian has two bands on either side; the discharges of
reaches and gates follow from their balances. Calm flow is taken for granted (full convective head), as are wet
nodes, no offtakes, an inflow at the head and gates between the pools and at the tail.
"""

import math
from collections.abc import Callable, Sequence

import numpy as np
from numba import njit
from scipy.integrate import odeint
from tests.benchmarks.canal_day import CanalDay, Leg

from toeline.constants import GRAVITY
from toeline.engine.gate_link import gate_discharge_at
from toeline.engine.reach_link import CONVECTIVE_TIME
from toeline.hydraulics.cross_section import ALPHA, geometry
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, GATE, REACH, Tables

BANDS = 2


class Integrator:
    """A day of a canal, ready to be integrated again and again."""

    def __init__(self, day: CanalDay):
        run = day.state_at_start()
        self.legs: Sequence[Leg] = day.legs()
        self.rates = right_hand_side(day.network.tables)
        self.start = np.zeros(2 * day.network.node_count - 1)
        self.start[::2] = run.state.nodes.level
        self.start[1::2] = run.state.links.convective_head[1:-1]
        self.rates(self.start, 0.0, self.legs[0].value, self.legs[0].rate)

    def levels(self, tolerance: float, every: float) -> np.ndarray:
        """Levels [m] of all nodes at the multiples of `every` seconds before the end; `tolerance` [m] is LSODA's, of
        levels and convective heads alike.
        """
        rows, state = [], self.start
        for leg in self.legs:
            inside = np.arange(math.ceil(leg.start / every), math.ceil((leg.start + leg.length) / every)) * every
            wanted = np.unique(np.concatenate(([0.0], inside - leg.start, [leg.length])))
            found = odeint(
                self.rates, state, wanted, (leg.value, leg.rate), ml=BANDS, mu=BANDS, rtol=0.0, atol=tolerance,
                mxstep=100_000,
            )  # fmt: skip
            rows.append(found[np.isin(wanted, inside - leg.start), ::2])
            state = found[-1]
        return np.concatenate(rows)


def right_hand_side(tables: Tables) -> Callable[[np.ndarray, float, np.ndarray, np.ndarray], np.ndarray]:
    """Compile dy/dt for a canal. Its tables become constants of the code: handing them over at every call would cost
    more than the equations.
    """
    cells, links, gates = (np.asarray(table) for table in (tables.cells, tables.links, tables.gates))
    nodes, shapes = np.asarray(tables.channel.nodes), tables.channel.shapes
    count, first_opening = cells.size, FORCING_GATES

    @njit(error_model="numpy")
    def rates(y, t, value, rate):
        change = np.empty(y.size)
        conveyance_before = inverse_before = 0.0
        entering = value[FORCING_HEAD] + t * rate[FORCING_HEAD]
        width_before = 1.0
        for k in range(count + 1):
            width = area = conveyance = inverse = 0.0
            if k < count:
                section = shapes[nodes[k].section]
                area, width, perimeter, _ = geometry(section, y[2 * k] - nodes[k].bed_level)
                conveyance = area * math.exp(math.log(area / perimeter) * (2.0 / 3.0)) / nodes[k].roughness
                inverse = section[ALPHA] / (area * area)
            if k > 0:
                level_up = y[2 * k - 2]
                level_down = y[2 * k] if k < count else value[FORCING_TAIL] + t * rate[FORCING_TAIL]
                head = y[2 * k - 1] if k < count else 0.0
                q = target = 0.0
                if links[k].kind == REACH:
                    mean = 0.5 * (conveyance_before + conveyance)
                    drive = level_up - level_down + head
                    q = math.copysign(mean * math.sqrt(abs(drive) / links[k].length), drive)
                    target = q * q / (2.0 * GRAVITY) * (inverse_before - inverse)
                elif links[k].kind == GATE:
                    leaf = first_opening + gates[links[k].gate].first_leaf
                    opening = value[leaf] + t * rate[leaf]
                    q = gate_discharge_at(shapes, gates[links[k].gate], level_up, level_down, opening)
                if k < count:
                    change[2 * k - 1] = (target - head) / CONVECTIVE_TIME
                change[2 * k - 2] = (entering - q) / (cells[k - 1].length * width_before)
                entering = q
            conveyance_before, inverse_before, width_before = conveyance, inverse, width
        return change

    return rates

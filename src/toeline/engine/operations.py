"""What people do at the stops of a day: orders to gates, and the record of what became of them."""

import math

import numpy as np

from toeline.engine.gate_link import gate_levels, law_of
from toeline.engine.gate_motion import KINDS, GateMotion, OrderRecord
from toeline.engine.state import State
from toeline.engine.unrest import Unrest
from toeline.hydraulics.underflow_gate import opening_for_discharge
from toeline.network.tables import FORCING_HEAD, FORCING_TAIL, Network
from toeline.network.timetable import Timetable
from toeline.scenario import Order


class Operations:
    """The gates of a canal and those who move them."""

    def __init__(
        self, network: Network, timetable: Timetable, state: State, forcing: np.recarray, unrest: Unrest,
        openings: np.ndarray,
    ):  # fmt: skip
        """`openings` [m] are those at the start, by leaf."""
        self.network, self.state, self.forcing, self.unrest = network, state, forcing, unrest
        self.motions = [
            GateMotion(timetable.gates[g], float(opening), bay)
            for (g, bay), opening in zip(_places(network), openings, strict=True)
        ]
        self.orders = list(timetable.orders)
        self.records: list[OrderRecord] = []

    def act(self, time: int) -> None:
        """Carry out what is due at a stop [ms of the period], the forcing being set to it."""
        while self.orders and self.orders[0].at <= time:
            self._carry_out(self.orders.pop(0), time)

    def arrive(self, time: int) -> None:
        """Bring the leaves to where they are at a stop."""
        for motion in self.motions:
            motion.arrive(time)

    def next_arrival(self) -> list[int]:
        """When the leaves that move will stand [ms]."""
        return [motion.until for motion in self.motions if motion.is_moving]

    def end_of_day(self) -> None:
        """Close the records of moves under way and of orders that were not reached."""
        for motion in self.motions:
            motion.end_of_day()
        self.records += [motion.not_reached(order) for order in self.orders for motion in self._moved_by(order)]

    def take_records(self) -> dict[str, np.ndarray]:
        """Hand over, once, the records that will not change any more, by variable name."""
        final = next((k for k, record in enumerate(self.records) if not record.is_final), len(self.records))
        done, self.records = self.records[:final], self.records[final:]
        return _order_arrays(done)

    def end_state(self, time: int) -> dict[str, np.ndarray]:
        """Where the leaves stand and go, by variable name."""
        return {
            "end_opening": np.array([motion.opening for motion in self.motions]),
            "end_target_opening": np.array([motion.target for motion in self.motions]),
            "end_ordered_opening": np.array([motion.ordered for motion in self.motions]),
            "end_motion_remaining": np.array([motion.remaining(time) / 1000.0 for motion in self.motions]),
        }

    def take_over(self, end: dict[str, np.ndarray]) -> None:
        """Go on from the end state of the run before."""
        for k, motion in enumerate(self.motions):
            remaining = round(float(end["end_motion_remaining"][k]) * 1000.0)
            motion.resume(float(end["end_target_opening"][k]), float(end["end_ordered_opening"][k]), remaining)

    def _carry_out(self, order: Order, time: int) -> None:
        g = self._index(order)
        up, down = self._levels(g)
        for motion in self._moved_by(order):
            wanted, note = self._wanted_opening(order, motion, up, down)
            opening = motion.opening
            record = motion.order(time, order.kind, order.value, wanted, note)
            self.records.append(record)
            if not (record.is_final and math.isnan(record.completed)):
                self.unrest.note_move(time, g, up, down, opening, motion)

    def _moved_by(self, order: Order) -> list[GateMotion]:
        """The leaf that an order names, or all of its gate."""
        motions = [self.motions[leaf] for leaf in self.network.leaves_of(self._index(order))]
        return [motion for motion in motions if order.bay in (0, motion.bay)]

    def _levels(self, g: int) -> tuple[float, float]:
        """Headwater and tailwater level of a gate [m]."""
        return gate_levels(
            self.network.tables.gates[g], self.state.nodes.level, self.network.node_count,
            self.forcing.value[FORCING_HEAD], self.forcing.value[FORCING_TAIL],
        )  # fmt: skip

    def _index(self, order: Order) -> int:
        return self.network.names.gates.index(order.gate)

    def _wanted_opening(self, order: Order, motion: GateMotion, up: float, down: float) -> tuple[float, str]:
        """The opening that an order asks of a leaf; a discharge is that of the bay it names, or of the whole gate."""
        if order.kind == "opening":
            return order.value, ""
        if order.kind == "by":
            return motion.ordered + order.value, ""
        row, shapes = self.network.tables.gates[self._index(order)], self.network.channel.shapes
        shares = motion.gate.bays if order.bay else 1
        opening, of_gate = opening_for_discharge(
            law_of(row), shapes[row.upstream_section], shapes[row.downstream_section], up, down,
            order.value * shares, motion.gate.max_opening,
        )  # fmt: skip
        passed = of_gate / shares
        if abs(passed - order.value) > 1e-3 + 1e-6 * abs(order.value):
            return (
                opening,
                f"the {'bay' if order.bay else 'gate'} passes {passed:.3f} m3/s at {opening:.3f} m with the present levels",
            )
        return opening, ""


def _places(network: Network) -> list[tuple[int, int]]:
    """Gate and number of the bay of every leaf; 0 where it moves all bays."""
    tables = network.tables
    numbers = np.arange(tables.leaves.size) - tables.gates.first_leaf[tables.leaves.gate] + 1
    return list(zip(tables.leaves.gate.tolist(), np.where(tables.leaves.bay < 0, 0, numbers).tolist(), strict=True))


def _order_arrays(records: list[OrderRecord]) -> dict[str, np.ndarray]:
    return {
        "order_time": np.array([record.time / 1000.0 for record in records], float),
        "order_gate": np.array([record.gate for record in records], object),
        "order_bay": np.array([record.bay for record in records], np.int32),
        "order_kind": np.array([KINDS.index(record.kind) for record in records], np.int8),
        "order_value": np.array([record.value for record in records], float),
        "order_opening_before": np.array([record.before for record in records], float),
        "order_opening_after": np.array([record.after for record in records], float),
        "order_completed": np.array([record.completed / 1000.0 for record in records], float),
        "order_status": np.array([record.status for record in records], np.int8),
        "order_reason": np.array([record.reason for record in records], object),
    }

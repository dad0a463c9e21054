"""What people and rules do at the stops of a day: orders to gates, and the record of what became of them."""

import math
from dataclasses import asdict
from typing import Any

import numpy as np

from toeline.engine.decisions import Decisions
from toeline.engine.gate_motion import KINDS, GateMotion, OrderRecord
from toeline.engine.present import PresentCanal
from toeline.engine.state import State
from toeline.engine.unrest import Unrest
from toeline.network.tables import Network
from toeline.network.timetable import Timetable
from toeline.scenario import Order


class Operations:
    """The gates of a canal and those who move them."""

    def __init__(
        self, network: Network, timetable: Timetable, state: State, forcing: np.recarray, unrest: Unrest,
        openings: np.ndarray,
    ):  # fmt: skip
        """`openings` [m] are those at the start, by leaf; `begin` must follow once `state` is that of the start."""
        self.network, self.timetable, self.unrest = network, timetable, unrest
        self.motions = [
            self._motion(g, bay, float(opening))
            for (g, bay), opening in zip(network.places_of_leaves(), openings, strict=True)
        ]
        self.leaves = {
            name: [self.motions[leaf] for leaf in network.leaves_of(g)] for g, name in enumerate(network.names.gates)
        }
        self.present = PresentCanal(network, timetable, state, forcing, self.leaves)
        self.orders = list(timetable.orders)
        self.records: list[OrderRecord] = []

    def _motion(self, g: int, bay: int, opening: float) -> GateMotion:
        gate, marks = self.timetable.gates[g], self.timetable.marks[g]
        stuck = [one for one in self.timetable.stuck if one.gate == gate.name and one.bay in (0, bay)]
        return GateMotion(gate, opening, marks, stuck, bay)

    def begin(self, end: dict[str, np.ndarray] | None = None) -> None:
        """Make the rules for the state at the start; go on from the end state of the run before, if there was one."""
        self.decisions = Decisions(self.network, self.timetable, self.present)
        if end is None:
            return
        for leaf, motion in enumerate(self.motions):
            remaining = round(float(end["end_motion_remaining"][leaf]) * 1000.0)
            moves = [-round(float(age) * 1000.0) for age in end["end_move_age"][end["end_move_leaf"] == leaf]]
            motion.resume(
                float(end["end_target_opening"][leaf]), float(end["end_ordered_opening"][leaf]), remaining, moves
            )
        self.decisions.take_over(end)

    def act(self, time: int) -> None:
        """Do what is due at a stop [ms of the period], the forcing being set to it: orders first, then rules."""
        for motion in self.motions:
            motion.halt_if_stuck(time)
        while self.orders and self.orders[0].at <= time:
            self._carry_out(self.orders.pop(0), time)
        self.decisions.act(time, self._move)

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
        """Where the leaves stand and go, the moves of the last hour, and what the rules keep, by variable name."""
        moves = [
            (leaf, time - at) for leaf, motion in enumerate(self.motions) for at in motion.moves_within_an_hour(time)
        ]
        return {
            **self.decisions.end_state(),
            "end_move_leaf": np.array([leaf for leaf, _ in moves], np.int32),
            "end_move_age": np.array([age / 1000.0 for _, age in moves], float),
            "end_opening": np.array([motion.opening for motion in self.motions]),
            "end_target_opening": np.array([motion.target for motion in self.motions]),
            "end_ordered_opening": np.array([motion.ordered for motion in self.motions]),
            "end_motion_remaining": np.array([motion.remaining(time) / 1000.0 for motion in self.motions]),
        }

    def checkpoint(self) -> dict[str, Any]:
        """Leaves, orders to come, records that may still change and what the rules keep; fit for JSON."""
        return {
            "orders_left": len(self.orders),
            "records": [asdict(record) for record in self.records],
            "leaves": [motion.checkpoint(self.records) for motion in self.motions],
            "rules": self.decisions.checkpoint(),
        }

    def go_on_from(self, kept: dict[str, Any]) -> None:
        """Bring the operations of a new run of the same day to a checkpoint."""
        self.orders = self.orders[len(self.orders) - kept["orders_left"] :]
        self.records = [OrderRecord(**record) for record in kept["records"]]
        for motion, leaf in zip(self.motions, kept["leaves"], strict=True):
            motion.go_on_from(leaf, self.records)
        self.decisions.go_on_from(kept["rules"])

    def _carry_out(self, order: Order, time: int) -> None:
        for motion in self._moved_by(order):
            wanted, note = self._wanted_opening(order, motion)
            opening = motion.opening
            self._note(motion.order(time, order.kind, order.value, wanted, note), opening, motion)

    def _move(self, gate: str, kind: str, wanted: float) -> tuple[OrderRecord | None, bool]:
        """Have the leaves of a gate carry out the mean opening [m] that a rule wants: those that move make up for what
        a stuck one beside them lacks.
        """
        time, leaves = self.present.time_ms, self.leaves[gate]
        moved = [motion for motion in leaves if not motion.is_stuck(time)] or leaves
        if len(moved) < len(leaves):
            wanted += sum(wanted - motion.ordered for motion in leaves if motion not in moved) / len(moved)
        done, is_limited = None, False
        for motion in moved:
            opening = motion.opening
            record, is_held_back = motion.propose(time, kind, wanted)
            if record is not None:
                self._note(record, opening, motion)
            done, is_limited = done or record, is_limited or is_held_back
        return done, is_limited

    def _note(self, record: OrderRecord, opening: float, motion: GateMotion) -> None:
        """Keep a record, and what the move of a leaf that it is of leaves unsettled; `opening` [m] is that before."""
        self.records.append(record)
        if record.is_final and math.isnan(record.completed):
            return
        g = self.network.names.gates.index(record.gate)
        levels = self.present.headwater_level(record.gate), self.present.tailwater_level(record.gate)
        self.unrest.note_move(record.time, g, levels, opening, motion, self.present.openings())

    def _moved_by(self, order: Order) -> list[GateMotion]:
        return [motion for motion in self.leaves[order.gate] if order.bay in (0, motion.bay)]

    def _wanted_opening(self, order: Order, motion: GateMotion) -> tuple[float, str]:
        """The opening [m] that an order asks of a leaf, and how it falls short of the discharge of its bay or gate."""
        if order.kind == "opening":
            return order.value, ""
        if order.kind == "by":
            return motion.ordered + order.value, ""
        what, shares = ("bay", motion.gate.bays) if order.bay else ("gate", 1)
        opening = self.present.opening_for(order.gate, order.value * shares)
        passed = self.present.discharge_at(order.gate, opening) / shares
        if abs(passed - order.value) > 1e-3 + 1e-6 * abs(order.value):
            return opening, f"the {what} passes {passed:.3f} m3/s at {opening:.3f} m with the present levels"
        return opening, ""


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
        "order_source": np.array([record.source for record in records], object),
        "order_status": np.array([record.status for record in records], np.int8),
        "order_reason": np.array([record.reason for record in records], object),
    }

"""The day from stop to stop: Python sets the forcing and the gates, compiled code does the rest."""

import math
from collections.abc import Callable

import numpy as np

from toeline.engine.advance import LEG_DONE, PACE, STEP_TOO_SMALL, advance
from toeline.engine.gate_link import gate_levels, law_of
from toeline.engine.gate_motion import KINDS, GateMotion, OrderRecord
from toeline.engine.output import BANKS, GATE_WATCH, JET_POINTS, Watch
from toeline.engine.rows import filled_block, new_rows
from toeline.engine.settling import round_trip, surge_bounds
from toeline.engine.state import FORCING, new_state, new_totals, new_work, zeros
from toeline.engine.step import set_forcing, start_from_levels
from toeline.errors import RunError
from toeline.hydraulics.underflow_gate import opening_for_discharge
from toeline.network.initial_state import Start
from toeline.network.tables import FORCING_GATES, FORCING_HEAD, FORCING_TAIL, TAIL_LEVEL, Network
from toeline.network.timetable import Timetable
from toeline.scenario import Order

BLOCK_ROWS = 720
"""Rows of output after which a block is handed on."""

FIRST_STEP = 10.0
"""First step [s] of a day that starts steady (choice)."""

LEAST_CHANGE = 1e-9
"""Change of a discharge [m³/s] below which nothing is said to settle."""

SAME_RATE = 1e-9
"""Difference of two rates of a forcing that is rounding of the clock."""

END_OF_NODES = ("level", "volume")
END_OF_LINKS = ("discharge", "convective_head", "convective_share", "imbalance")


class Run:
    """One day being stepped. `sink.write(block)` receives the output as it is made."""

    def __init__(self, network: Network, timetable: Timetable, sink, start: Start | dict[str, np.ndarray]):
        self.network, self.timetable, self.sink, self.tables = network, timetable, sink, network.tables
        self.state, self.middle, self.after = (new_state(network) for _ in range(3))
        self.work, self.totals = new_work(network.node_count), new_totals(network)
        self.forcing = zeros(timetable.forcing_size, FORCING)
        self.pace = self._new_pace()
        self.rows, self.watch = self._new_rows(), self._new_watch()
        self.time = 0
        self.orders = list(timetable.orders)
        self.roughness = list(timetable.roughness)
        self.is_roughened = False
        self.records: list[OrderRecord] = []
        openings = start["end_opening"] if isinstance(start, dict) else start.opening
        self.motions = [GateMotion(g, float(a)) for g, a in zip(timetable.gates, openings, strict=True)]
        self._take_over(start) if isinstance(start, dict) else self._start_at(start)
        self.watch.start_storage[0] = np.sum(self.state.nodes.volume[: network.canal_node_count])

    def go(self, progress: Callable[[float], None] | None = None) -> None:
        """Step to the end of the period; raises RunError where no step can be solved."""
        stops = self.timetable.stops()
        while self.time < self.timetable.length:
            self._act()
            stop = int(stops[np.searchsorted(stops, self.time, side="right")])
            moving = [motion.until for motion in self.motions if motion.is_moving]
            self._leg(min([stop, *moving]))
            if progress is not None:
                progress(self.time / self.timetable.length)
        self._last_row()
        for motion in self.motions:
            motion.end_of_day()
        self.records += [self.motions[self._index(order)].not_reached(order) for order in self.orders]
        self.flush()

    def flush(self) -> None:
        """Hand on what has been filled."""
        final = next((k for k, record in enumerate(self.records) if not record.is_final), len(self.records))
        done, self.records = self.records[:final], self.records[final:]
        self.sink.write(filled_block(self.rows) | _order_arrays(done))
        self.rows.filled[:] = 0

    def end_state(self) -> dict[str, np.ndarray]:
        """Everything that the next day needs to go on as if this one had not ended."""
        left = {"end_" + name: self.state.nodes[name].copy() for name in END_OF_NODES}
        left |= {"end_" + name: self.state.links[name].copy() for name in END_OF_LINKS}
        surge = self.watch.gates
        return left | {
            "end_delivery": self.state.delivery.copy(),
            "end_opening": np.array([motion.opening for motion in self.motions]),
            "end_target_opening": np.array([motion.target for motion in self.motions]),
            "end_ordered_opening": np.array([motion.ordered for motion in self.motions]),
            "end_motion_remaining": self._seconds_left(np.array([m.until if m.is_moving else 0 for m in self.motions])),
            "end_surge_upstream": surge.surge_upstream.copy(),
            "end_surge_downstream": surge.surge_downstream.copy(),
            "end_surge_upstream_remaining": self._seconds_left(surge.surge_upstream_until),
            "end_surge_downstream_remaining": self._seconds_left(surge.surge_downstream_until),
            "end_settling_remaining": self._seconds_left(self.watch.settled_at),
            "end_roughness_factor": self.watch.roughness_factor.copy(),
            "end_rate": self.forcing.rate.copy(),
            "end_next_step": np.float64(self.pace.next_step[0]),
            "end_time": np.float64(self.time / 1000.0),
        }

    def _seconds_left(self, until: np.ndarray) -> np.ndarray:
        return np.maximum(until - self.time, 0) / 1000.0

    def _start_at(self, start: Start) -> None:
        self.state.nodes.level, self.state.links.discharge = start.level, start.discharge
        self.watch.roughness_factor[:] = self.timetable.roughness[0].factors
        start_from_levels(self.tables, self.state, self.work)

    def _take_over(self, end: dict[str, np.ndarray]) -> None:
        for name in END_OF_NODES:
            self.state.nodes[name] = end["end_" + name]
        for name in END_OF_LINKS:
            self.state.links[name] = end["end_" + name]
        self.state.delivery[:] = end["end_delivery"]
        self.pace.next_step = end["end_next_step"]
        self.forcing.rate = end["end_rate"]
        self.watch.roughness_factor[:] = end["end_roughness_factor"]
        for k, motion in enumerate(self.motions):
            remaining = round(float(end["end_motion_remaining"][k]) * 1000.0)
            motion.resume(float(end["end_target_opening"][k]), float(end["end_ordered_opening"][k]), remaining)
        for side in ("upstream", "downstream"):
            self.watch.gates[f"surge_{side}"] = end[f"end_surge_{side}"]
            self.watch.gates[f"surge_{side}_until"] = np.round(end[f"end_surge_{side}_remaining"] * 1000.0)
        self.watch.settled_at[:] = np.round(end["end_settling_remaining"] * 1000.0)

    def _new_pace(self) -> np.recarray:
        timetable, pace = self.timetable, zeros(1, PACE)
        pace.tolerance, pace.longest_step = timetable.tolerance, timetable.longest_step / 1000.0
        pace.every, pace.profiles_every = timetable.every, timetable.profiles_every
        pace.next_step = FIRST_STEP
        return pace

    def _new_rows(self):
        network, timetable = self.network, self.timetable
        spare = timetable.longest_step // timetable.every + 4
        profiles = timetable.longest_step // timetable.profiles_every + 4
        return new_rows(
            BLOCK_ROWS + spare, BLOCK_ROWS * timetable.every // timetable.profiles_every + 2 * profiles, network
        )

    def _new_watch(self) -> Watch:
        network, names = self.network, self.network.names
        banks = zeros(network.canal_node_count, BANKS)
        banks.bank_level = np.nan_to_num(names.bank_level, nan=np.inf)
        banks.lining_level = np.nan_to_num(names.lining_level, nan=np.inf)
        return Watch(
            banks=banks,
            gates=zeros(network.gate_count, GATE_WATCH),
            settled_at=np.zeros(network.pool_count, np.int64),
            roughness_factor=np.ones(network.pool_count),
            start_storage=np.zeros(1),
            level=np.zeros(self.tables.channel.nodes.size),
            discharge=np.zeros(network.node_count + 1),
            jet=np.zeros((2, JET_POINTS)),
        )

    def _act(self) -> None:
        """What people do at a stop: orders, and changes that leave a pool settling."""
        before = self.forcing.now.copy()
        self.forcing.value = self.timetable.values_at(self.time)
        self._note_changes(before)
        self._set_roughness()
        while self.orders and self.orders[0].at <= self.time:
            self._carry_out(self.orders.pop(0))

    def _set_roughness(self) -> None:
        """Change the roughness of the pools where the calendar does."""
        self.is_roughened = False
        while self.roughness and self.roughness[0].time <= self.time:
            factors = self.roughness.pop(0).factors
            self.is_roughened = not np.array_equal(factors, self.watch.roughness_factor)
            self.watch.roughness_factor[:] = factors
            self.network.set_roughness(factors)

    def _carry_out(self, order: Order) -> None:
        g = self._index(order)
        motion = self.motions[g]
        row = self.tables.gates[g]
        up, down = gate_levels(
            row, self.state.nodes.level, self.network.node_count,
            self.forcing.value[FORCING_HEAD], self.forcing.value[FORCING_TAIL],
        )  # fmt: skip
        wanted, note = self._wanted_opening(order, g, up, down)
        opening = motion.opening
        record = motion.order(self.time, order.kind, order.value, wanted, note)
        self.records.append(record)
        if record.is_final and math.isnan(record.completed):
            return
        self._note_move(g, up, down, opening, motion)

    def _index(self, order: Order) -> int:
        return self.network.names.gates.index(order.gate)

    def _wanted_opening(self, order: Order, g: int, up: float, down: float) -> tuple[float, str]:
        motion = self.motions[g]
        if order.kind == "opening":
            return order.value, ""
        if order.kind == "by":
            return motion.ordered + order.value, ""
        row, shapes = self.tables.gates[g], self.tables.channel.shapes
        opening, passed = opening_for_discharge(
            law_of(row), shapes[row.upstream_section], shapes[row.downstream_section], up, down,
            order.value, motion.gate.max_opening,
        )  # fmt: skip
        if abs(passed - order.value) > 1e-3 + 1e-6 * abs(order.value):
            return opening, f"the gate passes {passed:.3f} m3/s at {opening:.3f} m with the present levels"
        return opening, ""

    def _note_move(self, g: int, up: float, down: float, opening: float, motion: GateMotion) -> None:
        """Surge bounds of a move, and until when the pools above and below settle."""
        up_height, down_height, change = surge_bounds(
            self.tables.channel.shapes, self.tables.gates[g], up, down, opening, motion.target
        )
        if abs(change) < LEAST_CHANGE:
            return
        for side, height in (("upstream", up_height), ("downstream", down_height)):
            pool, watch = self._pool_beside(g, side), self.watch.gates
            if pool is None:
                continue
            running = watch[f"surge_{side}"][g] if watch[f"surge_{side}_until"][g] > self.time else 0.0
            settled = self._settled_after(pool, max(motion.until, self.time))
            watch[f"surge_{side}"][g] = running + height if running * height >= 0.0 else max(running, height, key=abs)
            watch[f"surge_{side}_until"][g] = settled
            self.watch.settled_at[pool] = max(self.watch.settled_at[pool], settled)

    def _pool_beside(self, g: int, side: str) -> int | None:
        """Index of the pool above ("upstream") or below a gate; None beyond the canal's ends."""
        node = self.tables.gates[f"{side}_node"][g]
        if node < 0 or node >= self.network.canal_node_count:
            return None
        return int(np.searchsorted(self.tables.pools.last_node, node))

    def _settled_after(self, pool: int, time: int) -> int:
        ends = self.tables.pools[pool]
        seconds = round_trip(self.tables.channel, ends.first_node, ends.last_node, self.state)
        return time + round(1000.0 * seconds) if math.isfinite(seconds) else self.timetable.length + 1

    def _note_changes(self, before: np.ndarray) -> None:
        """Pools that a change of inflow, of the tail level or of a delivery leaves settling."""
        if self.time == 0:
            return
        changed = np.abs(self.forcing.value - before) > LEAST_CHANGE
        network = self.network
        first = FORCING_GATES + network.gate_count
        pools = set()
        if changed[FORCING_HEAD] and self.tables.links.gate[0] < 0:
            pools.add(0)
        if changed[FORCING_TAIL] and self.tables.links.kind[-1] == TAIL_LEVEL:
            pools.add(len(network.names.pools) - 1)
        for k, node in enumerate(self.tables.offtakes.node):
            if changed[first + k] or changed[first + network.offtake_count + k]:
                pools.add(int(np.searchsorted(self.tables.pools.last_node, node)))
        for pool in pools:
            self.watch.settled_at[pool] = max(self.watch.settled_at[pool], self._settled_after(pool, self.time))

    def _leg(self, until: int) -> None:
        """Advance to the next stop."""
        gates = slice(FORCING_GATES, FORCING_GATES + self.network.gate_count)
        self.forcing.value[gates] = [motion.opening for motion in self.motions]
        before = self.forcing.rate.copy()
        self.forcing.rate = self.timetable.rates_between(self.time, until)
        self.forcing.rate[gates] = [motion.rate() for motion in self.motions]
        has_kink = self.is_roughened or bool(np.any(np.abs(self.forcing.rate - before) > SAME_RATE))
        self.is_roughened = False
        self.pace.leg_start, self.pace.done = self.time, 0.0
        seconds, outcome = (until - self.time) / 1000.0, None
        while outcome != LEG_DONE:
            outcome = self._advance(seconds, has_kink)
            if outcome == STEP_TOO_SMALL:
                self._give_up()
            if outcome != LEG_DONE or self.rows.filled[0] >= BLOCK_ROWS:
                self.flush()
        self.time = until
        for motion in self.motions:
            motion.arrive(until)
        set_forcing(self.forcing, seconds)

    def _give_up(self) -> None:
        self.time += round(float(self.pace.done[0]) * 1000.0)
        self.flush()
        raise RunError(f"no step could be solved {self.time / 1000.0:.1f} s after the start; the output ends there")

    def _last_row(self) -> None:
        self.forcing.value = self.forcing.now
        self.pace.leg_start, self.pace.done = self.time, 0.0
        self._advance(0.0, False)

    def _advance(self, seconds: float, has_kink: bool) -> int:
        return advance(
            self.tables, self.state, self.middle, self.after, self.work, self.totals, self.forcing, self.watch,
            self.rows, self.pace, seconds, has_kink, self.timetable.local_inertia,
        )  # fmt: skip


def _order_arrays(records: list[OrderRecord]) -> dict[str, np.ndarray]:
    return {
        "order_time": np.array([record.time / 1000.0 for record in records], float),
        "order_gate": np.array([record.gate for record in records], object),
        "order_kind": np.array([KINDS.index(record.kind) for record in records], np.int8),
        "order_value": np.array([record.value for record in records], float),
        "order_opening_before": np.array([record.before for record in records], float),
        "order_opening_after": np.array([record.after for record in records], float),
        "order_completed": np.array([record.completed / 1000.0 for record in records], float),
        "order_status": np.array([record.status for record in records], np.int8),
        "order_reason": np.array([record.reason for record in records], object),
    }

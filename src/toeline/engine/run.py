"""The day from stop to stop: Python sets the forcing and the gates, compiled code does the rest."""

from collections.abc import Callable

import numpy as np

from toeline.engine.advance import LEG_DONE, PACE, STEP_TOO_SMALL, advance
from toeline.engine.near_gate import FREE_JET
from toeline.engine.operations import Operations
from toeline.engine.output import BANKS, GATE_WATCH, JET_POINTS, POOL_VOLUMES, Watch
from toeline.engine.rows import filled_block, new_rows
from toeline.engine.state import FORCING, new_state, new_totals, new_work, zeros
from toeline.engine.step import set_forcing, start_from_levels
from toeline.engine.unrest import Unrest
from toeline.errors import RunError
from toeline.network.initial_state import Start
from toeline.network.tables import FORCING_GATES, Network
from toeline.network.timetable import Timetable
from toeline.units import UnitSystem, quantity_text

BLOCK_ROWS = 720
"""Rows of output after which a block is handed on."""

FIRST_STEP = 10.0
"""First step [s] of a day that starts steady (choice)."""

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
        self._keep_views()
        self.rows, self.watch = self._new_rows(), self._new_watch()
        self.time = 0
        self.roughness = list(timetable.roughness)
        openings = start["end_opening"] if isinstance(start, dict) else start.opening
        self.unrest = Unrest(network, self.state, self.watch, timetable.length)
        self.operations = Operations(network, timetable, self.state, self.forcing, self.unrest, openings)
        self._take_over(start) if isinstance(start, dict) else self._start_at(start)
        self.operations.begin(start if isinstance(start, dict) else None)
        self.watch.start_storage[0] = self._storage()

    def _keep_views(self) -> None:
        """Keep plain views of what is set at every stop: reading the fields of records by name costs more than a
        step.
        """
        self._value: np.ndarray = self.forcing["value"]
        self._rate: np.ndarray = self.forcing["rate"]
        self._now: np.ndarray = self.forcing["now"]
        self._leg_start, self._done = self.pace["leg_start"], self.pace["done"]
        self._leaves = slice(FORCING_GATES, FORCING_GATES + self.network.leaf_count)

    def go(self, progress: Callable[[float], None] | None = None) -> None:
        """Step to the end of the period; raises RunError where no step can be solved or a rule fails."""
        stops = self.timetable.stops()
        while self.time < self.timetable.length:
            self._act()
            stop = int(stops[np.searchsorted(stops, self.time, side="right")])
            self._leg(min([stop, *self.operations.next_arrival()]))
            if progress is not None:
                progress(self.time / self.timetable.length)
        self._last_row()
        self.operations.end_of_day()
        self.flush()

    def flush(self) -> None:
        """Hand on what has been filled."""
        self.sink.write(filled_block(self.rows) | self.operations.take_records())
        self.rows.filled[:] = 0

    def end_state(self) -> dict[str, np.ndarray]:
        """Everything that the next day needs to go on as if this one had not ended."""
        left = {"end_" + name: self.state.nodes[name].copy() for name in END_OF_NODES}
        left |= {"end_" + name: self.state.links[name].copy() for name in END_OF_LINKS}
        left |= self.operations.end_state(self.time) | self.unrest.end_state(self.time)
        return left | {
            "end_delivery": self.state.delivery.copy(),
            "end_roughness_factor": self.watch.roughness_factor.copy(),
            "end_rate": self._rate.copy(),
            "end_next_step": np.array(self.pace.next_step[0]),
            "end_time": np.array(self.time / 1000.0),
        }

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
        self._rate[:] = end["end_rate"]
        self.watch.roughness_factor[:] = end["end_roughness_factor"]
        self.unrest.take_over(end)

    def _storage(self) -> float:
        """Volume in the canal [m³], summed in the order of the output, so that the ledger starts at zero."""
        storage = 0.0
        for pool in self.tables.pools:
            storage += float(np.cumsum(self.state.nodes.volume[pool.first_node : pool.last_node + 1])[-1])
        return storage

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
            volumes=zeros(network.pool_count, POOL_VOLUMES),
            courses=np.zeros((4, network.node_count)),
            level=np.zeros(self.tables.channel.nodes.size),
            discharge=np.zeros(network.node_count + 1),
            jet=np.zeros((2, JET_POINTS)),
            free_jets=zeros(network.gate_count, FREE_JET),
        )

    def _act(self) -> None:
        """What changes at a stop: the forcing, then what people do."""
        before = self._now.copy()
        self._value[:] = self.timetable.values_at(self.time)
        if self.time > 0:
            self.unrest.note_changes(self.time, before, self._value)
        try:
            self.operations.act(self.time)
        except RunError as error:
            self.flush()
            since = quantity_text(self.time / 1000.0, "duration", UnitSystem.metric)
            raise RunError(f"{since} after the start: {error}") from error

    def _leg(self, until: int) -> None:
        """Advance to the next stop."""
        self._value[self._leaves] = [motion.opening for motion in self.operations.motions]
        before = self._rate.copy()
        self._rate[:] = self.timetable.rates_between(self.time, until)
        self._rate[self._leaves] = [motion.rate() for motion in self.operations.motions]
        has_kink = self._change_roughness() or bool(np.any(np.abs(self._rate - before) > SAME_RATE))
        self._begin_leg()
        seconds, outcome = (until - self.time) / 1000.0, None
        while outcome != LEG_DONE:
            outcome = self._advance(seconds, has_kink)
            if outcome == STEP_TOO_SMALL:
                self._give_up()
            if outcome != LEG_DONE or self.rows.filled[0] >= BLOCK_ROWS:
                self.flush()
        self.time = until
        self.operations.arrive(until)
        set_forcing(self.forcing, seconds)

    def _change_roughness(self) -> bool:
        """Give the pools the roughness that the calendar has for this stop; returns whether that changed any."""
        is_changed = False
        while self.roughness and self.roughness[0].time <= self.time:
            factors = self.roughness.pop(0).factors
            is_changed = not np.array_equal(factors, self.watch.roughness_factor)
            self.unrest.note_roughness(self.time, factors / self.watch.roughness_factor, self._value[self._leaves])
            self.watch.roughness_factor[:] = factors
            self.network.set_roughness(factors)
        return is_changed

    def _give_up(self) -> None:
        self.time += round(float(self._done[0]) * 1000.0)
        self.flush()
        raise RunError(f"no step could be solved {self.time / 1000.0:.1f} s after the start; the output ends there")

    def _last_row(self) -> None:
        self._value[:] = self._now
        self._begin_leg()
        self._advance(0.0, False)

    def _begin_leg(self) -> None:
        self._leg_start[0], self._done[0] = self.time, 0.0

    def _advance(self, seconds: float, has_kink: bool) -> int:
        return advance(
            self.tables, self.state, self.middle, self.after, self.work, self.totals, self.forcing, self.watch,
            self.rows, self.pace, seconds, has_kink, self.timetable.local_inertia,
        )  # fmt: skip

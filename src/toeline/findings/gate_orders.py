"""Orders as they are to be done at a gate, and what should be read beside it before and after.

What was simulated is what is to be done: openings are those the run moved the leaf to, after it trimmed the order.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
import xarray as xr

from toeline.findings.series import meanings, names
from toeline.results.dataset import values_at

EARLY_OR_LATE = 900.0
"""Seconds by which a reading may be taken early or late and still lie in its band (choice)."""

FROM_SCHEDULE = "schedule"
SIDES = ("upstream", "downstream")
MOST_HELD = 8
"""Series that are held at once: those of one gate, with its two pools and gauges."""
SAME_OPENING = 1e-4
"""Change of an opening [m] that is none: a tenth of what a sheet shows."""


@dataclass(frozen=True)
class Reading:
    """A level to expect [m]: above the zero of the staff gauge, or above the datum where there is none.

    `band` [m] holds on both sides. `is_settling`: waves of a gate move still travel in the pool then.
    """

    value: float
    band: float
    is_settling: bool


@dataclass(frozen=True)
class Side:
    """One side of a gate at one order. `gauge` is "" where levels are above the datum; `surge` [m] is a bound."""

    side: str
    gauge: str
    before: Reading
    after: Reading
    surge: float


@dataclass(frozen=True)
class GateOrder:
    """One order; openings and lengths in m. `number` counts the orders of the plan to this gate, from 1; `bay` is 0
    where all bays move together.

    `completed` is when the leaf stands, NaT where it does not; `read_after` when the readings after it are taken, and
    `waits_for_next_move` says that this is so early because the gate moves again. `turn` and `scale_mark` are NaN where
    the gate has none. A refused order has no sides.
    """

    number: int
    gate: str
    bay: int
    time: np.datetime64
    kind: str
    value: float
    before: float
    after: float
    completed: np.datetime64
    status: str
    reason: str
    turn: float
    scale_mark: float
    protection_end: float
    pools: tuple[str, str]
    next_move: np.datetime64
    read_after: np.datetime64
    waits_for_next_move: bool
    sides: tuple[Side, ...]

    @property
    def leaf(self) -> str:
        """What is moved: the gate, or one bay of it."""
        return f"{self.gate}, bay {self.bay}" if self.bay else self.gate

    @property
    def is_refused(self) -> bool:
        return self.status == "refused"

    @property
    def moves(self) -> bool:
        """Whether there is anything to do."""
        return not self.is_refused and abs(self.after - self.before) > SAME_OPENING


@dataclass(frozen=True)
class RuleMoves:
    """Moves that an operating rule made at a gate in the simulation: they are no orders."""

    gate: str
    rule: str
    count: int


def gate_orders(run: xr.Dataset, allowance: float) -> list[GateOrder]:
    """The orders of the plan in time order; `allowance` [m] is what a reading may be off.

    The band of a reading is the greatest change of the level within a quarter of an hour before it, and after it where
    the gate has not moved again, and the allowance on top, which is all that it holds for errors of the canal file.
    """
    around, gates = _Gates(run, allowance), names(run["gate"])
    rows = [row for row in around.rows if around.sources[row] == FROM_SCHEDULE]
    by_gate = sorted(rows, key=lambda row: gates.index(str(run["order_gate"].values[row])))
    orders = {row: around.order(row) for row in by_gate}
    return [orders[row] for row in rows]


def rule_moves(run: xr.Dataset) -> list[RuleMoves]:
    """How often each rule moved each gate, gates from the head down."""
    by_rule = list(zip(run["order_gate"].values.tolist(), _sources(run), strict=True))
    return [
        RuleMoves(gate, rule, by_rule.count((gate, rule)))
        for gate in names(run["gate"])
        for rule in dict.fromkeys(source for name, source in by_rule if name == gate and source != FROM_SCHEDULE)
    ]


def gatekeepers(run: xr.Dataset) -> dict[str, str]:
    """Who works each gate, gates from the head down; "" where the canal file names nobody."""
    return dict(zip(names(run["gate"]), _texts(run, "gate_gatekeeper", "gate"), strict=True))


def gauge_beside(run: xr.Dataset, gate: str, side: str) -> tuple[str, float]:
    """Name and zero level [m] of the first staff gauge on a side of a gate; "" and 0, the datum, without one."""
    if "gauge" in run.sizes:
        sides = meanings(run["gauge_side"])
        for place, name in enumerate(names(run["gauge"])):
            stands_at = run["gauge_gate"].values[place], sides[int(run["gauge_side"].values[place])]
            if stands_at == (gate, side):
                return name, float(run["gauge_zero_level"].values[place])
    return "", 0.0


def _sources(run: xr.Dataset) -> list[str]:
    return _texts(run, "order_source", "order", FROM_SCHEDULE)


def _texts(run: xr.Dataset, name: str, dimension: str, default: str = "") -> list[str]:
    """A text variable; the default for a file of a version that did not write it."""
    texts: list[str] = run[name].values.tolist() if name in run else [default] * run.sizes[dimension]
    return texts


def _lengths(run: xr.Dataset, name: str) -> np.ndarray:
    """A length by gate; NaN for a file of a version that did not write it."""
    lengths: np.ndarray = run[name].values if name in run else np.full(run.sizes["gate"], np.nan)
    return lengths


class _Gates:
    """The run as the orders need it: by gate, with its moves in time order."""

    def __init__(self, run: xr.Dataset, allowance: float):
        self._run = run
        self._allowance = allowance
        self._bays = run["order_bay"].values if "order_bay" in run else np.zeros(run.sizes["order"])
        self._turns, self._marks = _lengths(run, "gate_turn"), _lengths(run, "gate_scale_mark")
        self._ends = run["gate_protection_end"].values
        self.sources = _sources(run)
        self.rows: list[int] = np.argsort(run["order_time"].values, kind="stable").tolist()
        self._statuses = [meanings(run["order_status"])[value] for value in run["order_status"].values]
        self._held: dict[tuple[str, int], np.ndarray] = {}

    @cached_property
    def _seconds(self) -> np.ndarray:
        times = self._run["time"].values
        seconds: np.ndarray = (times - times[0]) / np.timedelta64(1, "s")
        return seconds

    def _series(self, name: str, place: int) -> np.ndarray:
        """A series at one gate, pool or gauge; those last asked for are held, for the next order of the same gate."""
        if (name, place) not in self._held:
            if len(self._held) == MOST_HELD:
                self._held.clear()
            self._held[name, place] = values_at(self._run, name, place)
        return self._held[name, place]

    def _settling(self, pool: int) -> np.ndarray:
        """Whether a pool was settling, by output step."""
        holds: np.ndarray = self._series("settling", pool) == meanings(self._run["settling"]).index("settling")
        return holds

    def _since_start(self, instant: np.datetime64) -> float:
        return float((instant - self._run["time"].values[0]) / np.timedelta64(1, "s"))

    def order(self, row: int) -> GateOrder:
        order, name = self._run.isel(order=row), str(self._run["order_gate"].values[row])
        gate = names(self._run["gate"]).index(name)
        begins, stands = (self._run[name].values[row] for name in ("order_time", "order_completed"))
        status, next_move = self._statuses[row], self._next_move(row)
        read_after = self._read_after(gate, stands if not np.isnat(stands) else next_move, next_move)
        return GateOrder(
            number=self._number(row),
            gate=name,
            bay=int(self._bays[row]),
            time=begins,
            kind=meanings(order["order_kind"])[int(order["order_kind"])],
            value=float(order["order_value"]),
            before=float(order["order_opening_before"]),
            after=float(order["order_opening_after"]),
            completed=stands,
            status=status,
            reason=str(order["order_reason"].item()),
            turn=float(self._turns[gate]),
            scale_mark=float(self._marks[gate]),
            protection_end=float(self._ends[gate]),
            pools=self._pools(gate),
            next_move=next_move,
            read_after=read_after,
            waits_for_next_move=bool(read_after == next_move < self._run["time"].values[-1]),
            sides=() if status == "refused" else tuple(self._sides(gate, row, read_after, next_move)),
        )

    def _pools(self, gate: int) -> tuple[str, str]:
        return names(self._run["gate_upstream_pool"])[gate], names(self._run["gate_downstream_pool"])[gate]

    def _number(self, row: int) -> int:
        gates = self._run["order_gate"].values
        earlier = self.rows[: self.rows.index(row) + 1]
        return sum(gates[k] == gates[row] and self.sources[k] == FROM_SCHEDULE for k in earlier)

    def _other_moves(self, row: int) -> list[int]:
        """Rows of the other moves of the same gate in time order; refused orders move nothing."""
        gates = self._run["order_gate"].values
        return [k for k in self.rows if k != row and gates[k] == gates[row] and self._statuses[k] != "refused"]

    def _next_move(self, row: int) -> np.datetime64:
        """When the gate moves again after the leaf stands; the end of the run where it does not.

        Bays that move meanwhile belong to the same move.
        """
        times, ends = self._run["order_time"].values, self._run["time"].values[-1]
        stands = self._run["order_completed"].values[row]
        from_when = times[row] if np.isnat(stands) else stands
        later = [times[k] for k in self._other_moves(row) if times[k] > times[row] and times[k] >= from_when]
        return min([*later[:1], ends])

    def _moved_last(self, row: int) -> np.datetime64:
        """When the leaf came to stand after the move before; the start of the run where there was none."""
        times, starts = self._run["order_time"].values, self._run["time"].values[0]
        earlier = [k for k in self._other_moves(row) if times[k] < times[row]]
        stood = self._run["order_completed"].values[earlier[-1]] if earlier else starts
        return starts if np.isnat(stood) else stood

    def _read_after(self, gate: int, stands: np.datetime64, next_move: np.datetime64) -> np.datetime64:
        """When the pools beside have settled, one wave round trip after the leaf stands at the latest; before the gate
        moves again."""
        pools = names(self._run["pool"])
        beside = [pools.index(pool) for pool in self._pools(gate) if pool in pools]
        trip = np.max(self._run["pool_wave_round_trip"].values[beside], initial=0.0)
        settling = np.any([self._settling(pool) for pool in beside], axis=0)
        times = self._run["time"].values
        settled = times[(times >= stands) & ~settling]
        one_trip = [stands + np.timedelta64(round(float(trip)), "s")] if np.isfinite(trip) else []
        return min([*settled[:1], *one_trip, next_move])

    def _sides(self, gate: int, row: int, read_after: np.datetime64, next_move: np.datetime64) -> Iterator[Side]:
        begins, stands = (self._run[name].values[row] for name in ("order_time", "order_completed"))
        stood = read_after if np.isnat(stands) else stands
        for side, pool in zip(SIDES, self._pools(gate), strict=True):
            gauge, levels = self._levels(gate, side)
            bound = self._series(f"surge_height_bound_{side}", gate)
            yield Side(
                side,
                gauge,
                self._reading(levels, pool, begins, self._moved_last(row), begins),
                self._reading(levels, pool, read_after, stood, next_move),
                float(np.max(bound[self._rows_after(begins, read_after)], initial=0.0)),
            )

    def _levels(self, gate: int, side: str) -> tuple[str, np.ndarray]:
        """Name and readings of the staff gauge on a side of a gate; without one "" and the level there."""
        gauge, _ = gauge_beside(self._run, names(self._run["gate"])[gate], side)
        if gauge:
            return gauge, self._series("gauge_reading", names(self._run["gauge"]).index(gauge))
        level = "gate_headwater_level" if side == "upstream" else "gate_tailwater_level"
        return "", self._series(level, gate)

    def _rows_after(self, begin: np.datetime64, end: np.datetime64) -> np.ndarray:
        times = self._run["time"].values
        return (times > begin) & (times <= end)

    def _reading(
        self, levels: np.ndarray, pool: str, at: np.datetime64, first: np.datetime64, last: np.datetime64
    ) -> Reading:
        """The level at an instant, and how far it goes from there between `first` and `last`, a while early or late."""
        now = self._since_start(at)
        begin = max(now - EARLY_OR_LATE, min(self._since_start(first), now))
        end = min(now + EARLY_OR_LATE, max(self._since_start(last), now))
        inside = (self._seconds >= begin) & (self._seconds <= end)
        value, *ends = np.interp((now, begin, end), self._seconds, levels)
        reach = np.nan_to_num(np.abs(np.concatenate((levels[inside], ends)) - value))
        return Reading(float(value), float(reach.max()) + self._allowance, self._is_settling(pool, at))

    def _is_settling(self, pool: str, at: np.datetime64) -> bool:
        pools: Sequence[str] = names(self._run["pool"])
        if pool not in pools:
            return False
        row = np.searchsorted(self._run["time"].values, at, side="right") - 1
        return bool(self._settling(pools.index(pool))[row])

"""Order sheets in words: one for each gatekeeper or gate, the same whether printed, written or sent."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np
import xarray as xr

from toeline.constants import CAUTION
from toeline.errors import UsageError
from toeline.findings.gate_orders import GateOrder, Reading, Side, gate_orders, gatekeepers, rule_moves
from toeline.findings.incidents import Incident, incidents
from toeline.findings.limits_beside import LimitBeside, limits_beside
from toeline.findings.rounds import rounds
from toeline.findings.series import names
from toeline.report.clock import duration_text
from toeline.report.layout import counted
from toeline.report.order_words import move_words, order_words, reason_words
from toeline.report.rounds import RoundsForm, rounds_form, rounds_words
from toeline.report.run_clock import RunClock
from toeline.results.provenance import COMPLETE
from toeline.units import FILE_UNITS, Display, UnitSystem, file_factor

By = Literal["gatekeeper", "gate"]

READ_TO = 0.01
"""How finely a staff gauge is read: 1 cm or 0.01 ft, in the units of the sheet (common practice, no source)."""

SLACK = 1e-3
"""Part of the fineness of a gauge by which an end of a band may be passed before it is rounded outward."""

NOBODY = "Gates without a gatekeeper"
HASH_SHOWN = 8
SYSTEMS = {UnitSystem.metric: "metric", UnitSystem.us_customary: "US customary"}
INCIDENTS_TOLD = 6
PLACES = {"upstream": "above the gate", "downstream": "below the gate"}
BLANK_CALL = "________________________________"

HOW_TO_READ = (
    "From, to: openings, lip above sill, as they were simulated; what was simulated is what is to be done.",
    "Before: the reading just before the order. After: the reading one wave round trip of the pools beside the gate "
    "after the leaf stands, or once they have settled if that is earlier, or just before the gate moves again.",
    "The band, below each reading: how far the level moves within 15 minutes of that time, early or late, and "
    "{allowance} on top{meaning}. Where the first readings are outside it, the canal is not as it was simulated, and "
    "the sheet does not hold.",
    "Wave: a bound for the height of the surge that the move sends along the pool, if the leaf moved at once.",
)
PEOPLE = "anybody is in the water, in a boat, or on the apron or the banks beside it: do not move the gate"
ALWAYS = (
    "the leaf does not move freely, trembles, or does not reach the opening written here",
    "anything that you see differs from this sheet",
)


@dataclass(frozen=True)
class ReadingWords:
    """One line of the table of readings: where, on what, and what to expect before and after."""

    place: str
    instrument: str
    before: str
    before_band: str
    after: str
    after_band: str


@dataclass(frozen=True)
class SheetOrder:
    """One order of a sheet in words. `order` holds the numbers behind them."""

    order: GateOrder
    number: int
    at: str
    leaf: str
    move: str
    openings: str
    warning: str
    read_before: str
    read_after: str
    readings: tuple[ReadingWords, ...]
    notes: tuple[str, ...]
    stop: tuple[str, ...]

    @property
    def blanks(self) -> tuple[str, ...]:
        """What the gatekeeper fills in when it is done, or seen where there is nothing to do."""
        return ("done at", "opening", "signed") if self.readings else ("seen at", "signed")


@dataclass(frozen=True)
class Sheet:
    """Everything on one sheet but its page numbers."""

    whose: str
    canal: str
    title: str
    day: str
    plan: str
    run: str
    units: str
    version: str
    call: str
    gates: tuple[str, ...]
    orders: tuple[SheetOrder, ...]
    always: tuple[str, ...]
    not_here: tuple[str, ...]
    trouble: tuple[str, ...]
    how_to_read: tuple[str, ...]
    rounds: tuple[RoundsForm, ...] = ()
    revision: int = 0

    @property
    def about(self) -> str:
        """Plan, revision and run: what tells two sheets of one day apart."""
        return f"{self.plan}; revision {self.revision}; run {self.run}"

    @property
    def blanks(self) -> tuple[str, ...]:
        """What is filled in once for the whole sheet."""
        return "issued by", "reviewed by", "received by"

    @property
    def lists_before(self) -> list[tuple[str, tuple[str, ...]]]:
        """Titles and lines of what stands before the orders."""
        lists = (
            ("Stop and call if", self.always),
            ("What goes wrong in the simulation", self.trouble),
            ("Rounds and rules beside the orders", self.not_here),
        )
        return [(title, lines) for title, lines in lists if lines]

    @property
    def lists_after(self) -> list[tuple[str, tuple[str, ...]]]:
        """Titles and lines of what stands after them; the caution is always there."""
        how_to_read = [("How to read this sheet", self.how_to_read)] if self.orders else []
        return [*how_to_read, ("Caution", (CAUTION,))]

    @property
    def orders_line(self) -> str:
        """How many orders, and for which gates."""
        gates = ", ".join(self.gates)
        return f"{counted(len(self.orders), 'order')} for {gates}" if self.orders else f"No orders for {gates}."


def order_sheets(run: xr.Dataset, by: By | None = None, *, allowance: float | None = None) -> list[Sheet]:
    """A sheet for each gatekeeper or each gate, also for those without orders; gates from the head down.

    Unless it is said, by gatekeeper where the canal file names any. `allowance` [m] is what a reading may be off for
    what the simulation does not know; the fineness of the gauge unless given. UsageError for a run that is not
    complete: what it leaves out would not be on the sheets.
    """
    if run.attrs["outcome"] != COMPLETE:
        raise UsageError(
            f"the run is not complete ({run.attrs['outcome']}), and orders would be missing; run the day to its end"
        )
    return _Maker(run, allowance).sheets(by)


class _Maker:
    """A run and what all of its sheets share."""

    def __init__(self, run: xr.Dataset, allowance: float | None):
        self._run = run
        self._clock = RunClock(run)
        self._display = Display(UnitSystem(run.attrs["units_for_display"]))
        self._read_to = READ_TO * file_factor("length", self._display.system)
        self._allowance = self._read_to if allowance is None else allowance

    @property
    def _unit(self) -> str:
        return FILE_UNITS["length"][self._display.system]

    @cached_property
    def _orders(self) -> list[GateOrder]:
        return gate_orders(self._run, self._allowance)

    @cached_property
    def _incidents(self) -> list[Incident]:
        return incidents(self._run)

    def sheets(self, by: By | None) -> list[Sheet]:
        keepers = gatekeepers(self._run)
        if by == "gatekeeper" and not any(keepers.values()):
            raise UsageError('no gate has a gatekeeper: name them in the canal file with the key "gatekeeper"')
        by_keeper = by == "gatekeeper" or (by is None and any(keepers.values()))
        whose = {gate: (keeper or NOBODY) if by_keeper else gate for gate, keeper in keepers.items()}
        together = {one: [gate for gate, other in whose.items() if other == one] for one in whose.values()}
        return [self._sheet(one, gates) for one, gates in together.items()]

    def _sheet(self, whose: str, gates: Sequence[str]) -> Sheet:
        run, clock = self._run, self._clock
        zone = run.attrs["zone"] or f"UTC{run.attrs['utc_offset']}"
        discharge = FILE_UNITS["discharge"][self._display.system]
        orders = [order for order in self._orders if order.gate in gates]
        return Sheet(
            whose=whose,
            canal=run.attrs["canal"],
            title=run.attrs["title"],
            day=f"{clock.start:%A %Y-%m-%d}, {clock.span(run['time'].values[0], run['time'].values[-1])}, "
            f"times of {zone}",
            plan=f"plan {run.attrs['plan']}" if run.attrs["plan"] else "no plan",
            run=run.attrs["input_hash"][:HASH_SHOWN],
            units=f"{SYSTEMS[self._display.system]} units: {self._unit}, {discharge}",
            version=run.attrs["source"],
            call=run.attrs.get("call", "") or BLANK_CALL,
            gates=tuple(gates),
            orders=tuple(self._order(number, order) for number, order in enumerate(orders, start=1)),
            always=tuple(self._always(gates)),
            not_here=tuple(self._not_here(gates)),
            trouble=tuple(self._trouble(gates)),
            how_to_read=tuple(self._how_to_read()),
            rounds=tuple(rounds_form(one, clock) for one in rounds(run) if one.gate in gates),
        )

    def _how_to_read(self) -> Iterator[str]:
        is_gauge_alone = self._allowance <= self._read_to
        meaning = (
            ", for reading the gauge; errors of the canal file, such as roughness, are not in it"
            if is_gauge_alone
            else ", which the planner allows for reading the gauge and for what the simulation does not know"
        )
        for line in HOW_TO_READ:
            yield line.format(allowance=self._display.length(self._allowance), meaning=meaning)

    def _order(self, number: int, order: GateOrder) -> SheetOrder:
        return SheetOrder(
            order=order,
            number=number,
            at=self._clock.at(order.time),
            leaf=order.leaf,
            move=self._move(order),
            openings=self._openings(order),
            warning=self._warning(order),
            read_before=self._clock.at(order.time),
            read_after=self._clock.at(order.read_after),
            readings=tuple(self._reading_words(side) for side in order.sides),
            notes=() if order.is_refused else tuple(self._notes(order)),
            stop=() if order.is_refused else tuple(self._stop(order)),
        )

    def _move(self, order: GateOrder) -> str:
        if order.is_refused:
            return "do not move"
        if not order.moves:
            return "leave as it is"
        return move_words(order.before, order.after, order.turn, order.scale_mark, self._display)

    def _openings(self, order: GateOrder) -> str:
        if not order.moves:
            return f"The opening stays at {self._display.setting(order.after)}."
        stands = "" if np.isnat(order.completed) else f" The leaf stands by {self._clock.by(order.completed)}."
        openings = f"From {self._display.setting(order.before)} to {self._display.setting(order.after)}."
        return openings + ("" if order.status == "replaced" else stands)

    def _warning(self, order: GateOrder) -> str:
        """What was not simulated as it was asked; the sheet tells what was."""
        reason = reason_words(order.reason, self._display)
        asked = order_words(order.kind, order.value, self._display)
        if order.is_refused:
            return f"Asked: {asked}. Not to be done: {reason}."
        if order.status == "replaced":
            return (
                f"The next order, at {self._clock.at(order.completed)}, comes while the leaf still moves, at about "
                f"{self._display.setting(order.after)}: go on with that one from there."
            )
        if order.status == "trimmed":
            return f"Asked: {asked}. Changed: {reason}. Do what stands here."
        return f"Note: {reason}." if reason else ""

    def _reading_words(self, side: Side) -> ReadingWords:
        return ReadingWords(
            PLACES[side.side],
            f"gauge {side.gauge}" if side.gauge else "level above datum",
            self._display.level(side.before.value),
            self._band(side.before),
            self._display.level(side.after.value),
            self._band(side.after),
        )

    def _band(self, reading: Reading) -> str:
        """Lowest and highest reading, to the fineness of the gauge, outward: nothing that is expected is outside."""
        low, high = (reading.value + sign * reading.band for sign in (-1, 1))
        if np.isnan(low):
            return "-"
        ends = (np.floor(low / self._read_to + SLACK), np.ceil(high / self._read_to - SLACK))
        return " to ".join(self._display.level(end * self._read_to).partition(" ")[0] for end in ends)

    def _notes(self, order: GateOrder) -> Iterator[str]:
        after = []
        if order.waits_for_next_move:
            after.append("just before the gate moves again")
        if any(side.after.is_settling for side in order.sides):
            after.append("while waves of a move still travel, and levels are least certain")
        if after:
            yield f"After: {', '.join(after)}."
        waves = [
            f"{self._display.length(side.surge)} {PLACES[side.side]}"
            for side in order.sides
            if side.surge >= self._read_to / 2
        ]
        if waves:
            yield f"Wave of the move, at most: {', '.join(waves)}."

    def _stop(self, order: GateOrder) -> Iterator[str]:
        bands = [
            f"{PLACES[side.side]} it is not {self._band(side.before)} {self._unit}"
            for side in order.sides
            if not np.isnan(side.before.value)
        ]
        if bands:
            yield f"before you start, {' or '.join(bands)}"
        yield "afterwards, a reading is outside its band"

    def _always(self, gates: Sequence[str]) -> Iterator[str]:
        yield PEOPLE
        ends = dict(zip(names(self._run["gate"]), self._run["gate_protection_end"].values, strict=True))
        protected = [f"{gate} {self._display.distance(float(ends[gate]))}" for gate in gates if ends[gate] > 0.0]
        if protected:
            yield (
                "white water of the jump, or fast water, goes past the end of the protected floor below the gate "
                f"({', '.join(protected)} from it)"
            )
        yield from (self._limit_words(limit) for limit in limits_beside(self._run, gates))
        yield from ALWAYS

    def _limit_words(self, limit: LimitBeside) -> str:
        """What the water must not do beside the gates, and whose limit it is."""
        places = ", ".join(f"{PLACES[side].removesuffix('the gate')}{gate}" for gate, side in limit.places)
        if limit.window:
            change = f"{limit.kind}s by more than {self._display.length(limit.limit)} in {duration_text(limit.window)}"
            return f"the water {places} {change}; {limit.source}"
        instrument = f"gauge {limit.gauge}" if limit.gauge else "level above datum"
        return f"the water {places} is {limit.kind} {self._display.level(limit.limit)} ({instrument}); {limit.source}"

    def _not_here(self, gates: Sequence[str]) -> Iterator[str]:
        """What moves the gates beside the orders."""
        for one in rounds(self._run):
            if one.gate in gates:
                yield rounds_words(one, self._clock, self._display)
        for moves in rule_moves(self._run):
            if moves.gate in gates:
                count = counted(moves.count, "move")
                yield f'{moves.gate}: {count} by the rule "{moves.rule}" in the simulation. They are no orders.'

    def _trouble(self, gates: Sequence[str]) -> Iterator[str]:
        """What goes wrong in the simulation at the gates and in the pools beside them."""
        rows = [place for place, gate in enumerate(self._run["gate"].values) if gate in gates]
        beside = {str(self._run[f"gate_{side}_pool"].values[row]) for row in rows for side in PLACES}
        found = [one for one in self._incidents if one.where in beside or one.where in gates]
        for incident in found[:INCIDENTS_TOLD]:
            yield f"{incident.where}: {incident.what}, {self._clock.span(incident.start, incident.end)}."
        if len(found) > INCIDENTS_TOLD:
            yield f"And {len(found) - INCIDENTS_TOLD} more: ask the planner."

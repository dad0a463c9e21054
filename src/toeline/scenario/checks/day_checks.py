"""What must hold between a day file and its canal."""

from collections.abc import Iterable, Iterator
from pathlib import Path

from toeline.scenario.misfits import Misfit, length_outside, nearest, shown, too_often
from toeline.scenario.orders import Order
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import MARKS_OF_ROUNDING, TO_HOLD_TARGETS, Day, OpeningOfGate
from toeline.scenario.schema.gates import Gate
from toeline.scenario.text_file import is_there
from toeline.units import UnitSystem, quantity_text

MOST_PROFILE_LEVELS = 1_000_000_000
"""Levels of long profiles that a file may hold (choice): 20 GB before they are compressed, with what goes with them."""


def misfits_of_day(day: Day, canal: Canal, folder: Path, system: UnitSystem) -> Iterator[Misfit]:
    """Find what is wrong between a day and its canal; quantities in messages are in the units of the day file."""
    yield from _misfits_of_ends(day, canal)
    yield from _misfits_of_offtakes(day.deliveries, "deliveries", "demand", canal)
    yield from _misfits_of_offtakes(day.offtake_openings, "offtake_openings", "orifice", canal)
    yield from _misfits_of_seepage(day, canal)
    yield from _misfits_of_output(day)
    yield from _misfits_of_size(day, canal, system)
    yield from _misfits_of_start(day, canal, folder, system)
    yield from _misfits_of_rounding(day, canal)


def _misfits_of_ends(day: Day, canal: Canal) -> Iterator[Misfit]:
    if canal.head.kind == "inflow" and day.inflow is None:
        yield Misfit(("inflow",), 'required with the canal\'s head kind = "inflow", but not given')
    if canal.head.kind == "reservoir" and day.inflow is not None:
        yield Misfit(("inflow",), 'not used with the canal\'s head kind = "reservoir": the head gate lets the water in')
    if canal.head.kind == "inflow" and day.head is not None:
        yield Misfit(("head",), 'not used with the canal\'s head kind = "inflow", which has no level')
    if canal.tail.kind != "level" and day.tail is not None:
        yield Misfit(("tail",), f'not used with the canal\'s tail kind = "{canal.tail.kind}"')


def _misfits_of_offtakes(names: Iterable[str], key: str, kind: str, canal: Canal) -> Iterator[Misfit]:
    of_kind = [offtake.name for offtake in canal.offtakes if offtake.kind == kind]
    others = {offtake.name: offtake.kind for offtake in canal.offtakes}
    for name in names:
        if name in of_kind:
            continue
        reason = f"is of kind {others[name]}, not {kind}" if name in others else "is no offtake of the canal"
        yield Misfit((key, name), f"{shown(name)} {reason}; {nearest(name, of_kind)}")


def _misfits_of_seepage(day: Day, canal: Canal) -> Iterator[Misfit]:
    pools = [pool.name for pool in canal.pools]
    for name in day.losses.seepage:
        if name not in pools:
            yield Misfit(("losses", "seepage", name), f"{shown(name)} is no pool of the canal; {nearest(name, pools)}")


def _misfits_of_output(day: Day) -> Iterator[Misfit]:
    for key in ("every", "profiles_every"):
        if getattr(day.output, f"{key}_ms") > day.period.length_ms:
            yield Misfit(("output", key), "longer than the period; allowed: up to the length of the period")


def _misfits_of_size(day: Day, canal: Canal, system: UnitSystem) -> Iterator[Misfit]:
    """Find what makes a run endless, or a file that no disk holds."""
    length, output = day.period.length_ms, day.output
    yield from too_often(("output", "events_every" if output.is_thinned else "every"), output.finest_ms, length)
    yield from too_often(("period", "longest_step"), day.period.longest_step_ms, length)
    canal_length = sum(pool.length for pool in canal.pools)
    points, profiles = canal_length / day.period.spacing, length / output.profiles_every_ms
    if points * profiles > MOST_PROFILE_LEVELS:
        spacing = quantity_text(day.period.spacing, "length", system)
        every = quantity_text(output.profiles_every_ms / 1000.0, "duration", system)
        found = f"found {every}, {profiles:,.0f} long profiles of {points:,.0f} points, at the spacing of {spacing}"
        allowed = f"up to {MOST_PROFILE_LEVELS:,} levels in all"
        yield Misfit(("output", "profiles_every"), f"{found}; allowed: {allowed}")


def _misfits_of_start(day: Day, canal: Canal, folder: Path, system: UnitSystem) -> Iterator[Misfit]:
    start = day.start
    if start.file is not None and not is_there(folder / start.file):
        yield Misfit(("start", "file"), f"found {shown(start.file)}; there is no such file")
    if start.openings == TO_HOLD_TARGETS:
        yield from _misfits_of_holding(day, canal)
    elif isinstance(start.openings, dict):
        yield from _misfits_of_openings(start.openings, start.state, canal, system)


def _misfits_of_holding(day: Day, canal: Canal) -> Iterator[Misfit]:
    has_reservoir = canal.head.kind == "reservoir"
    if has_reservoir and day.start.inflow is None:
        yield Misfit(("start", "inflow"), f'required with openings "{TO_HOLD_TARGETS}" and a reservoir, but not given')
    if not has_reservoir and day.start.inflow is not None:
        yield Misfit(("start", "inflow"), "not used with the canal's head kind = \"inflow\": the day's inflow says it")
    above_gates = {gate.upstream for gate in canal.gates}
    lacking = [pool.name for pool in canal.pools if pool.name in above_gates and pool.target_level is None]
    if lacking:
        names = ", ".join(f'"{name}"' for name in lacking)
        message = f'found "{TO_HOLD_TARGETS}", but the canal file gives no target_level for {names}'
        yield Misfit(("start", "openings"), message)


def _misfits_of_openings(
    openings: dict[str, OpeningOfGate], state: str | None, canal: Canal, system: UnitSystem
) -> Iterator[Misfit]:
    gates = {gate.name: gate for gate in canal.gates}
    for name, opening in openings.items():
        path = ("start", "openings", name)
        if name not in gates:
            yield Misfit(path, f"{shown(name)} is no gate of the canal; {nearest(name, gates)}")
        else:
            yield from _misfits_of_leaves(path, gates[name], opening, system)
    missing = [name for name in gates if name not in openings]
    if state == "steady" and missing:
        names = ", ".join(f'"{name}"' for name in missing)
        yield Misfit(("start", "openings"), f"a steady start needs the opening of every gate; missing: {names}")


def _misfits_of_leaves(
    path: tuple[str, ...], gate: Gate, opening: OpeningOfGate, system: UnitSystem
) -> Iterator[Misfit]:
    if isinstance(opening, float):
        yield from _misfits_of_opening(path, gate, opening, system)
    elif not gate.separate_bays:
        yield Misfit(path, "found an array, but the bays of the gate move together; allowed: one opening")
    elif len(opening) != gate.bays:
        yield Misfit(
            path, f"found an array of {len(opening)}; allowed: one opening, or one for each of {gate.bays} bays"
        )
    else:
        for index, own in enumerate(opening):
            yield from _misfits_of_opening((*path, index), gate, own, system)


def _misfits_of_opening(
    path: tuple[str | int, ...], gate: Gate, opening: float, system: UnitSystem
) -> Iterator[Misfit]:
    if opening > gate.max_opening:
        yield length_outside(path, opening, "up to the max_opening of the gate", gate.max_opening, system)
    if gate.is_avoided(opening):
        found = quantity_text(opening, "length", system)
        yield Misfit(path, f"found {found}, which lies in a band of the gate's avoid_openings")


def _misfits_of_rounding(day: Day, canal: Canal) -> Iterator[Misfit]:
    key = MARKS_OF_ROUNDING.get(day.round_openings or "")
    if key is not None and all(getattr(gate, key) is None for gate in canal.gates):
        yield Misfit(("round_openings",), f'found {shown(day.round_openings)}, but no gate of the canal has "{key}"')


def misfits_of_orders(orders: list[Order], canal: Canal) -> Iterator[Misfit]:
    """Find orders to unknown gates or bays, and two for one leaf at one time; paths begin with the order's index."""
    gates = {gate.name: gate for gate in canal.gates}
    seen: set[tuple[int, str, int]] = set()
    for index, order in enumerate(orders):
        if order.gate not in gates:
            message = f"found {shown(order.gate)}, which is no gate of the canal; {nearest(order.gate, gates)}"
            yield Misfit((index, "gate"), message)
            continue
        yield from misfits_of_bay(index, order.bay, gates[order.gate])
        bays = {order.bay} if order.bay else set(range(gates[order.gate].bays + 1))
        if any((order.at, order.gate, bay) in seen for bay in bays):
            yield Misfit((index, "at"), f"{shown(order.gate)} already has an order for that time")
        seen |= {(order.at, order.gate, bay) for bay in bays | {0}}


def misfits_of_bay(index: int, bay: int, gate: Gate) -> Iterator[Misfit]:
    """Find a bay (0 for all) that does not move apart, or that the gate does not have."""
    if bay and not gate.separate_bays:
        message = f"not used with {shown(gate.name)}, whose bays move together; separate_bays = true in the canal file"
        yield Misfit((index, "bay"), message)
    elif bay > gate.bays:
        yield Misfit((index, "bay"), f"found {bay}; allowed: 1 to {gate.bays}, the bays of {shown(gate.name)}")

"""Gates and pools must form one chain: exactly one gate between neighbouring pools, in the order of the pools."""

from collections.abc import Iterator
from itertools import pairwise

from toeline.scenario.misfits import Misfit, nearest, shown
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.gates import Gate
from toeline.scenario.schema.table import HEAD, TAIL

_Place = tuple[str, str]


def misfits_of_gate_chain(canal: Canal) -> Iterator[Misfit]:
    """Find gates that stand nowhere, twice in one place, or out of order, and places without their gate."""
    standing: dict[_Place, int] = {}
    for index, gate in enumerate(canal.gates):
        found = list(_misfits_of_ends(canal, index, gate))
        yield from found
        if not found:
            yield from _misfits_of_order(canal, index, standing)
            standing.setdefault((gate.upstream, gate.downstream), index)
    ends = _ends(canal)
    if all(gate.upstream in ends and gate.downstream in ends for gate in canal.gates):
        yield from _missing_gates(canal, standing)


def _ends(canal: Canal) -> list[str]:
    """Give what a gate may name on its two sides, from the head down."""
    return [HEAD, *(pool.name for pool in canal.pools), TAIL]


def _places(canal: Canal) -> list[_Place]:
    """Give the places where a gate may stand, from the head down."""
    return list(pairwise(_ends(canal)))


def _misfits_of_ends(canal: Canal, index: int, gate: Gate) -> Iterator[Misfit]:
    ends = _ends(canal)
    if gate.upstream not in ends[:-1]:
        hint = nearest(gate.upstream, ends[:-1])
        yield Misfit(("gates", index, "upstream"), f"found {shown(gate.upstream)}, which is no pool; {hint}")
    elif gate.downstream not in ends[1:]:
        hint = nearest(gate.downstream, ends[1:])
        yield Misfit(("gates", index, "downstream"), f"found {shown(gate.downstream)}, which is no pool; {hint}")
    elif (next_one := ends[ends.index(gate.upstream) + 1]) != gate.downstream:
        message = f'found {shown(gate.downstream)}; allowed: "{next_one}", which follows "{gate.upstream}"'
        yield Misfit(("gates", index, "downstream"), message)
    elif gate.upstream == HEAD and canal.head.kind == "inflow":
        message = 'found "head"; allowed only with head kind = "reservoir": an inflow enters the first pool by itself'
        yield Misfit(("gates", index, "upstream"), message)


def _misfits_of_order(canal: Canal, index: int, standing: dict[_Place, int]) -> Iterator[Misfit]:
    gate, places = canal.gates[index], _places(canal)
    place = (gate.upstream, gate.downstream)
    if place in standing:
        other = canal.gates[standing[place]].name
        message = f'"{other}" already stands between {_between(place)}; gates side by side are bays of one gate'
        yield Misfit(("gates", index), message)
    elif standing and places.index(place) < max(places.index(earlier) for earlier in standing):
        yield Misfit(("gates", index), "stands above a gate listed before it; allowed: gates from the head down")


def _missing_gates(canal: Canal, standing: dict[_Place, int]) -> Iterator[Misfit]:
    for index, place in enumerate(_places(canal)):
        is_needed = HEAD not in place and TAIL not in place
        if place in standing or not (is_needed or (place[0] == HEAD and canal.head.kind == "reservoir")):
            continue
        path: tuple[str | int, ...] = ("pools", index) if is_needed else ("head", "kind")
        yield Misfit(path, f"there is no gate between {_between(place)}")


def _between(place: _Place) -> str:
    return f'"{place[0]}" and "{place[1]}"'

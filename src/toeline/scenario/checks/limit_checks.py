"""Limits of a canal against the pools, gates, offtakes and surfaces that they name."""

from collections.abc import Iterable, Iterator

from toeline.scenario.limits import fitting_places, lacking
from toeline.scenario.misfits import Misfit, nearest, shown
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.limits import ALL, Limit


def misfits_of_limits(canal: Canal) -> Iterator[Misfit]:
    """Find names that are not there, and limits of what a place does not have."""
    for index, limit in enumerate(canal.limits):
        yield from _misfits_of_places(canal, index, limit)
        if limit.surfaces != ALL:
            yield from _unknown(("limits", index, "surfaces"), limit.surfaces, canal.surfaces)


def _misfits_of_places(canal: Canal, index: int, limit: Limit) -> Iterator[Misfit]:
    places = {place.name: place for place in getattr(canal, limit.watched)}
    names, path = getattr(limit, limit.watched), ("limits", index, limit.watched)
    if names == ALL:
        if not fitting_places(limit, canal):
            yield Misfit(("limits", index, "kind"), f"found {shown(limit.kind)}, {_nowhere(limit, canal)}")
        return
    yield from _unknown(path, names, places)
    for place, name in enumerate(names):
        if name in places and (key := lacking(limit, places[name], canal)):
            yield Misfit((*path, place), f"found {shown(name)}, which has no {key}")


def _nowhere(limit: Limit, canal: Canal) -> str:
    """Why a limit holds for nothing in the canal."""
    places = getattr(canal, limit.watched)
    key = lacking(limit, places[0], canal) if places else ""
    return f"but none of the {limit.watched} has {key}" if key else f"but the canal has no {limit.watched}"


def _unknown(path: tuple[str | int, ...], names: Iterable[str], known: Iterable[str]) -> Iterator[Misfit]:
    for place, name in enumerate(names):
        if name not in known:
            yield Misfit((*path, place), f"found {shown(name)}, which is not described; {nearest(name, known)}")

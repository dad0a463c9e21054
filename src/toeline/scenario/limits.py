"""The limits of a canal with the names they hold for, ready for a run to carry."""

from typing import Any

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.limits import ALL, Limit
from toeline.scenario.schema.pools import Pool

UNITS = {
    "velocity": "m s-1",
    "moves": "count",
    "avoided opening": "s",
    "near modular limit": "s",
}
"""SI units of limits; those of all other kinds are lengths."""


def limits_of(canal: Canal) -> list[dict[str, Any]]:
    """All limits in the order of the file, in SI units, with every name written out; fit for JSON."""
    return [_resolved(limit, canal) for limit in canal.limits]


def _resolved(limit: Limit, canal: Canal) -> dict[str, Any]:
    names = getattr(limit, limit.watched)
    resolved: dict[str, Any] = {
        "kind": limit.kind,
        "limit": limit.limit,
        "unit": UNITS.get(limit.kind, "m"),
        "places": fitting_places(limit, canal) if names == ALL else list(names),
        "source": limit.source,
    }
    if limit.window is not None:
        resolved["window"] = limit.window / 1000.0
    if limit.reference:
        resolved["measured_from"] = limit.reference
    if limit.kind in ("above", "below"):
        resolved["at"] = limit.at
    if limit.kind == "velocity":
        resolved["surfaces"] = list(canal.surfaces if limit.surfaces == ALL else limit.surfaces)
    return resolved


def fitting_places(limit: Limit, canal: Canal) -> list[str]:
    """Names of the pools, gates or offtakes of the canal that have what the limit is about."""
    return [place.name for place in getattr(canal, limit.watched) if not lacking(limit, place, canal)]


def lacking(limit: Limit, place: Any, canal: Canal) -> str:
    """The key without which a limit means nothing at a pool, gate or offtake; "" where nothing is lacking."""
    if limit.reference == "target" and place.target_level is None:
        return "target_level"
    if limit.kind == "freeboard":
        key = f"{limit.reference}_height"
        return "" if _has_height(place, key, canal) else key
    if limit.kind == "avoided opening" and not place.avoid_openings:
        return "avoid_openings"
    return ""


def _has_height(pool: Pool, key: str, canal: Canal) -> bool:
    sections = (canal.sections.get(stretch.section) for stretch in pool.stretches)
    return any(section is not None and getattr(section, key) is not None for section in sections)

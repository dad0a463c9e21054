"""The owner's limits of a run, as its file carries them."""

import json
from dataclasses import dataclass
from typing import Any

import xarray as xr

from toeline.units import UnitSystem, quantity_text


@dataclass(frozen=True)
class Limit:
    """One limit, in `unit`: what is limited, at which pools, gates or offtakes, and who says so.

    `window` [s] is the length of the rolling window where it has one; `measured_from` and `at` say what its heights
    mean; `surfaces` over which a velocity is limited.
    """

    kind: str
    limit: float
    unit: str
    places: tuple[str, ...]
    source: str
    window: float = 0.0
    measured_from: str = ""
    at: str = ""
    surfaces: tuple[str, ...] = ()

    @property
    def subject(self) -> str:
        """What is limited, in a few words."""
        subject = _SUBJECTS[self.kind] if self.kind in _SUBJECTS else _LEVELS[self.kind, self.measured_from]
        window = quantity_text(self.window, "duration", UnitSystem.metric)
        return subject.format(window=window, edge=self.measured_from)

    @property
    def dimension(self) -> str:
        """What `places` are: pool, gate or offtake."""
        return _DIMENSIONS.get(self.kind, "pool")

    @property
    def is_least(self) -> bool:
        """Whether the limit is the least value allowed; else it is the greatest."""
        return self.kind in ("freeboard", "head on offtake") or (self.kind == "below" and not self.is_from_target)

    @property
    def is_from_target(self) -> bool:
        """Whether a level is limited by how far it is from the target, in the direction of the kind."""
        return self.measured_from == "target"

    @property
    def is_share(self) -> bool:
        """Whether a part of the limit can be used up, as of a fall; a level or a freeboard has no such part."""
        return not self.is_least and not (self.kind == "above" and not self.is_from_target)


_SUBJECTS = {
    "fall": "fall in {window}",
    "rise": "rise in {window}",
    "freeboard": "freeboard to the {edge}",
    "velocity": "velocity",
    "moves": "moves in {window}",
    "head on offtake": "head on the offtake",
    "avoided opening": "time at avoided openings in {window}",
    "near modular limit": "time near the modular limit in {window}",
}
_DIMENSIONS = {
    "moves": "gate",
    "avoided opening": "gate",
    "near modular limit": "gate",
    "head on offtake": "offtake",
}
_LEVELS = {
    ("above", "datum"): "level",
    ("above", "target"): "height above target",
    ("above", "bed"): "depth",
    ("below", "datum"): "level",
    ("below", "target"): "drop below target",
    ("below", "bed"): "depth",
}


def limits_of_run(run: xr.Dataset) -> list[Limit]:
    """The limits in the order of the canal file; none for a file that carries none."""
    return [limit_of(entry) for entry in json.loads(run.attrs.get("limits", "[]"))]


def limit_of(entry: dict[str, Any]) -> Limit:
    """A limit from its entry in the list that a file carries."""
    values: dict[str, Any] = {key: tuple(v) if isinstance(v, list) else v for key, v in entry.items()}
    return Limit(**values)


def avoided_openings(run: xr.Dataset) -> dict[str, list[list[float]]]:
    """Bands of openings [m] that are not to be held, by gate."""
    bands: dict[str, list[list[float]]] = json.loads(run.attrs.get("avoided_openings", "{}"))
    return bands

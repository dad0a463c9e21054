"""Limits of a canal file: what its owner does not want to be passed. None is built in."""

from collections.abc import Iterator
from typing import Annotated, Any, Literal

from pydantic import Field, ValidationInfo, field_validator

from toeline.scenario.misfits import Misfit, in_quotes, shown
from toeline.scenario.schema.table import LEVEL, OPENING, KeysOfKind, Table
from toeline.scenario.schema.value_kinds import Duration, Names, Quantity, Text, ValueKind, WholeNumber
from toeline.units import UnitSystem

ALL: Literal["all"] = "all"
"""What a limit names in place of single pools, gates, offtakes or surfaces."""

_NamesOrAll = Annotated[Literal["all"] | tuple[str, ...], Names()]
_LEVELS = ("pools", "at", "measured_from")
_KEYS_OF_KINDS = {
    "fall": KeysOfKind(("window",), ("pools",)),
    "rise": KeysOfKind(("window",), ("pools",)),
    "above": KeysOfKind((), _LEVELS),
    "below": KeysOfKind((), _LEVELS),
    "freeboard": KeysOfKind((), ("pools", "measured_from")),
    "velocity": KeysOfKind((), ("pools", "surfaces")),
    "moves": KeysOfKind(("window",), ("gates",)),
    "head on offtake": KeysOfKind((), ("offtakes",)),
    "avoided opening": KeysOfKind(("window",), ("gates",)),
    "near modular limit": KeysOfKind(("window",), ("gates",)),
}
_REFERENCES = {
    "above": ("datum", "target", "bed"),
    "below": ("datum", "target", "bed"),
    "freeboard": ("bank", "lining"),
}
"""What the heights of a kind may be measured from; the first is meant where nothing is said."""

_CHANGE = Quantity("length", above=0.0, most=1000.0)
_TIME = Duration("1 s", "400 d")
_VALUES: dict[str, ValueKind] = {
    "fall": _CHANGE,
    "rise": _CHANGE,
    "above": LEVEL,
    "below": LEVEL,
    "freeboard": OPENING,
    "velocity": Quantity("velocity", above=0.0, most=50.0),
    "moves": WholeNumber(1, 100_000),
    "head on offtake": OPENING,
    "avoided opening": _TIME,
    "near modular limit": _TIME,
}


class Limit(Table):
    """What is not to be passed, where, and who says so. A run reports an incident where it is."""

    kind: Literal[
        "fall", "rise", "above", "below", "freeboard", "velocity", "moves", "head on offtake", "avoided opening",
        "near modular limit",
    ] = Field(
        description="What is limited. fall, rise: of the level at both ends of a pool, in any window. above, below: a "
        "level at one end of a pool. freeboard: the least along a pool, with the surge bound of the moves taken off. "
        "velocity: the greatest over the surfaces of a pool. moves: of a gate, in any window. head on offtake: water "
        "over its sill. avoided opening, near modular limit: time of a gate there, in any window."
    )  # fmt: skip
    window: Annotated[int, _TIME] | None = Field(
        None,
        description="Length of the rolling window: the limit holds in every window of this length, whenever it begins.",
    )
    measured_from: Literal["datum", "target", "bed", "bank", "lining"] | None = Field(
        None,
        description="above, below: the datum (so left out; the limit is a level), the target (a distance from it, up "
        "or down) or the bed (a depth). freeboard: the bank (so left out) or the lining.",
    )
    at: Literal["lower end", "upper end"] = Field(
        "lower end", description="End of the pool at which a level is watched (above, below)."
    )
    limit: float = Field(
        description="Greatest fall or rise, highest or lowest level, least freeboard or head over the sill of the "
        'offtake, greatest velocity, most moves, or longest time in the window, such as `"2 h"`.'
    )
    pools: _NamesOrAll = Field(ALL, description="Pools it holds for.")
    gates: _NamesOrAll = Field(ALL, description="Gates it holds for.")
    offtakes: _NamesOrAll = Field(ALL, description="Offtakes it holds for.")
    surfaces: _NamesOrAll = Field(ALL, description="Surfaces it holds over (velocity).")
    source: Annotated[str, Text("text: who sets the limit, or where it is written", longest=400)] = Field(
        description="Where the limit comes from. It stands beside every finding."
    )

    @field_validator("limit", mode="plain", json_schema_input_type=float | str)
    @classmethod
    def _of_its_kind(cls, value: Any, info: ValidationInfo) -> float:
        kind, is_distance = info.data.get("kind"), info.data.get("measured_from") in ("target", "bed")
        if kind not in _VALUES:
            return 0.0  # the kind itself is at fault, and says so
        number: float = (OPENING if is_distance else _VALUES[kind]).read(value, info)
        return number / 1000.0 if _VALUES[kind] is _TIME else number

    @property
    def reference(self) -> str:
        """What its heights are measured from; "" where it limits no height."""
        return self.measured_from or _REFERENCES.get(self.kind, ("",))[0]

    @property
    def watched(self) -> Literal["pools", "gates", "offtakes"]:
        """The kind of place at which it is watched."""
        needed, optional = _KEYS_OF_KINDS[self.kind]
        return next(place for place in ("pools", "gates", "offtakes") if place in (*needed, *optional))

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("kind", _KEYS_OF_KINDS)
        allowed = _REFERENCES.get(self.kind, ())
        if self.measured_from and allowed and self.measured_from not in allowed:
            found = f"found {shown(self.measured_from)}; allowed"
            yield Misfit(("measured_from",), f'{found} with kind = "{self.kind}": {in_quotes(allowed)}')
        if self.at == "upper end" and self.measured_from == "target":
            yield Misfit(("at",), 'found "upper end"; a target is that of the lower end')

"""Gates of a canal file."""

from collections.abc import Iterator
from itertools import pairwise
from typing import Annotated, Literal

from pydantic import Field

from toeline.scenario.misfits import Misfit, length_outside
from toeline.scenario.schema.table import DischargeOrZero, FromTo, KeysOfKind, Level, Name, Size, SizeOrZero, Table
from toeline.scenario.schema.value_kinds import Quantity, WholeNumber
from toeline.units import UnitSystem, quantity_text

_KEYS_OF_KINDS = {
    "vertical": KeysOfKind(),
    "radial": KeysOfKind(("radius", "pinion_height")),
}


class Gate(Table):
    """An underflow gate of one or more equal bays; listed from the head down, one between two neighbouring pools."""

    name: Name = Field(description="Name of the gate.")
    upstream: Name = Field(description='Name of the pool above it, or "head" for the gate of a reservoir.')
    downstream: Name = Field(description='Name of the pool below it, or "tail".')
    kind: Literal["vertical", "radial"] = Field(description="Leaf that slides in a plane, or turns about a pinion.")
    radius: Size | None = Field(None, description="Radius of the leaf (radial).")
    pinion_height: Size | None = Field(None, description="Height of the pinion above the sill (radial).")
    bays: Annotated[int, WholeNumber(1, 50)] = Field(1, description="Number of equal bays.")
    separate_bays: bool = Field(
        False,
        description="Whether every bay is ordered by itself, numbered from the left bank; else all move together.",
    )
    bay_width: Size = Field(description="Clear width of one bay.")
    sill_level: Level = Field(
        description="Level of the sill; not below the bed at the end of the pool above, nor at the head of that below."
    )
    leaf_height: Size | None = Field(
        None, description="Height of the leaf; water above its upper edge flows over it. Left out: never overtopped."
    )
    max_opening: Size = Field(description="Largest opening of the lip above the sill.")
    smallest_move: SizeOrZero = Field(0.0, description="Smallest change of opening that can be carried out.")
    largest_move: Size | None = Field(None, description="Largest change of opening in one move. Left out: no limit.")
    moves_per_hour: Annotated[int, WholeNumber(1, 1000)] | None = Field(
        None, description="Most moves that may begin within an hour. Left out: no limit."
    )
    hoist_speed: Annotated[float, Quantity("speed", above=0.0, most=10.0)] | None = Field(
        None, description="Speed at which the opening changes. Left out: moves are done at once."
    )
    avoid_openings: list[FromTo] = Field(
        [], description="Bands [from, to] that may be passed and not held, as where a leaf vibrates. Closed is allowed."
    )
    contraction: Annotated[float, Quantity(above=0.3, most=1.0)] | None = Field(
        None, description="Contraction coefficient of the lip. Left out: 0.61 (vertical), Toch 1955 (radial)."
    )
    discharge_factor: Annotated[float, Quantity(above=0.0, most=2.0)] = Field(
        1.0, description="Factor of this site on the discharge of the gate law."
    )
    leakage: DischargeOrZero = Field(
        0.0, description="Discharge past the closed gate under 1 m (3.2808 ft) of head, in either unit system."
    )
    turn: Size | None = Field(None, description="Change of opening for one turn of the handwheel.")
    scale_mark: Size | None = Field(None, description="Spacing of the marks on the scale of the opening.")
    gatekeeper: Name | None = Field(
        None, description="Who works the gate: a person, a post or a beat. Order sheets are made for each."
    )
    leaf_weir_coefficient: Annotated[float, Quantity("weir coefficient", above=0.0, most=3.0)] = Field(
        1.7, description="Coefficient C of the flow C·b·h^1.5 over the leaf."
    )

    @property
    def width(self) -> float:
        """Clear width of all bays [m]."""
        return self.bays * self.bay_width

    @property
    def leaf_count(self) -> int:
        """Leaves that move by themselves."""
        return self.bays if self.separate_bays else 1

    def is_avoided(self, opening: float) -> bool:
        """Say whether an opening [m] may not be held; closed may always be."""
        return opening > 0.0 and any(lower < opening < upper for lower, upper in self.avoid_openings)

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("kind", _KEYS_OF_KINDS)
        yield from self._misfits_of_travel(system)
        yield from self._misfits_of_bands(system)
        yield from self._misfits_of_radial_leaf(system)

    def _misfits_of_travel(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.smallest_move >= self.max_opening:
            allowed = "below the max_opening"
            yield length_outside(("smallest_move",), self.smallest_move, allowed, self.max_opening, system)
        if self.largest_move is not None and self.largest_move < self.smallest_move:
            allowed = "not below the smallest_move"
            yield length_outside(("largest_move",), self.largest_move, allowed, self.smallest_move, system)

    def _misfits_of_bands(self, system: UnitSystem) -> Iterator[Misfit]:
        for index, (lower, upper) in enumerate(self.avoid_openings):
            if not lower < upper <= self.max_opening:
                band, most = self._band_text(index, system), quantity_text(self.max_opening, "length", system)
                message = f"found {band}; allowed: a rising pair up to the max_opening, {most}"
                yield Misfit(("avoid_openings", index), message)
        for index, ((_, upper), (lower, _)) in enumerate(pairwise(self.avoid_openings), start=1):
            if lower < upper:
                message = f"found {self._band_text(index, system)}, which begins inside or below the band before it"
                yield Misfit(("avoid_openings", index), message)

    def _band_text(self, index: int, system: UnitSystem) -> str:
        lower, upper = (quantity_text(x, "length", system) for x in self.avoid_openings[index])
        return f"[{lower}, {upper}]"

    def _misfits_of_radial_leaf(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.radius is None or self.pinion_height is None:
            return
        if self.pinion_height > self.radius:
            yield length_outside(("pinion_height",), self.pinion_height, "up to the radius", self.radius, system)
        highest = self.pinion_height + self.radius
        if self.max_opening > highest:
            yield length_outside(("max_opening",), self.max_opening, "up to pinion_height + radius", highest, system)

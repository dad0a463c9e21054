"""Cross-sections and surfaces of a canal file."""

from collections.abc import Iterator
from itertools import pairwise
from typing import Annotated, Literal

from pydantic import Field

from toeline.scenario.misfits import Misfit, length_outside
from toeline.scenario.schema.losses import Seepage
from toeline.scenario.schema.table import KeysOfKind, LevelAtStation, Size, Table
from toeline.scenario.schema.value_kinds import Quantity
from toeline.units import UnitSystem

_KEYS_OF_SHAPES = {
    "rectangle": KeysOfKind(("bottom_width",)),
    "trapezoid": KeysOfKind(("bottom_width", "side_slope")),
    "triangle": KeysOfKind(("side_slope",)),
    "circle": KeysOfKind(("diameter",)),
    "points": KeysOfKind(("points",)),
}


class Section(Table):
    """A cross-section, used by name in stretches. Depths are above its lowest point."""

    shape: Literal["rectangle", "trapezoid", "triangle", "circle", "points"] = Field(
        description="Shape; it decides which of the next four keys are needed."
    )
    bottom_width: Size | None = Field(None, description="Width of the bottom (rectangle, trapezoid).")
    side_slope: Annotated[float, Quantity(above=0.0, most=10.0)] | None = Field(
        None, description="Slope of the sides, horizontal to 1 vertical (trapezoid, triangle)."
    )
    diameter: Size | None = Field(None, description="Inner diameter (circle).")
    points: Annotated[list[LevelAtStation], Field(min_length=3)] | None = Field(
        None,
        description="Surveyed points [station, level] from the left bank to the right (points). "
        "Only differences of level count: the lowest point is laid on the bed.",
    )
    roughness: Annotated[float, Quantity(least=0.005, most=0.3)] = Field(
        description="Manning n, the same number in both unit systems."
    )
    lining_height: Size | None = Field(None, description="Top of the lining above the bed.")
    bank_height: Size | None = Field(None, description="Top of the bank above the bed.")
    velocity_coefficient: Annotated[float, Quantity(least=1.0, most=3.0)] = Field(
        1.0, description="Energy (Coriolis) coefficient alpha."
    )
    momentum_coefficient: Annotated[float, Quantity(least=1.0, most=2.0)] = Field(
        1.0, description="Momentum (Boussinesq) coefficient beta."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("shape", _KEYS_OF_SHAPES)
        yield from self._misfits_of_heights(system)
        yield from self._misfits_of_points()

    def _misfits_of_heights(self, system: UnitSystem) -> Iterator[Misfit]:
        lining, bank = self.lining_height, self.bank_height
        if lining is not None and bank is not None and lining > bank:
            yield length_outside(("lining_height",), lining, "up to the bank_height", bank, system)

    def _misfits_of_points(self) -> Iterator[Misfit]:
        for index, ((station, _), (next_station, _)) in enumerate(pairwise(self.points or ()), start=1):
            if next_station < station:
                yield Misfit(("points", index, 0), "this station lies left of the one before; order them left to right")
        if self.points and self.points[0][0] == self.points[-1][0]:
            yield Misfit(("points",), "the points have no width: first and last station are the same")


class Surface(Table):
    """What the floor is made of, used by name in stretches."""

    protected: bool = Field(description="Whether a jump may stand on it without damage to the floor.")
    apron: bool = Field(False, description="Whether it is the concrete apron of a gate; an apron is protected.")
    velocity_limit: Annotated[float, Quantity("velocity", above=0.0, most=50.0)] | None = Field(
        None, description="Velocity of the water above which a run reports an incident; the owner's value."
    )
    seepage: Seepage | None = Field(
        None, description="Seepage through the wetted perimeter over it. Left out: that of [losses]."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.apron and not self.protected:
            yield Misfit(("protected",), "found false; allowed: true, because apron = true")

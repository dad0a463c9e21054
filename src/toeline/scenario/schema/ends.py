"""The two ends of a canal: where its water comes from and where it goes."""

from collections.abc import Iterator
from itertools import pairwise
from typing import Annotated, Literal

from pydantic import Field

from toeline.scenario.misfits import Misfit
from toeline.scenario.schema.pools import Stretch, misfits_of_first_stretch
from toeline.scenario.schema.table import KeysOfKind, Level, LevelAndDischarge, Name, Table
from toeline.scenario.schema.value_kinds import Quantity
from toeline.units import UnitSystem

_FLOOR = ("floor_level", "section", "surface", "stretches")
_KEYS_OF_HEADS = {
    "inflow": KeysOfKind(),
    "reservoir": KeysOfKind(("level",)),
}
_KEYS_OF_TAILS = {
    "level": KeysOfKind(("level",), _FLOOR),
    "rating": KeysOfKind(("rating",), _FLOOR),
    "free overfall": KeysOfKind((), _FLOOR),
    "normal depth": KeysOfKind(("slope",), _FLOOR),
}


class Head(Table):
    """The upper end: a discharge that the day file gives, or a reservoir above the first gate."""

    kind: Literal["inflow", "reservoir"] = Field(description="What feeds the canal.")
    level: Level | None = Field(None, description="Level of the reservoir, where the day file gives no other.")

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("kind", _KEYS_OF_HEADS)


class Tail(Table):
    """The lower end: what the water level depends on there, and the floor beyond the last gate."""

    kind: Literal["level", "rating", "free overfall", "normal depth"] = Field(
        description="A given level, a table of level and discharge, critical depth, or uniform flow beyond."
    )
    level: Level | None = Field(None, description="Level beyond the end (level), where the day file gives no other.")
    slope: Annotated[float, Quantity(above=0.0, most=0.1)] | None = Field(
        None, description="Slope of the bed beyond the end (normal depth)."
    )
    rating: Annotated[list[LevelAndDischarge], Field(min_length=2)] | None = Field(
        None, description="Pairs [level, discharge], both rising (rating)."
    )
    floor_level: Level | None = Field(
        None, description="Level of the floor beyond the last gate. Left out: the level of its sill."
    )
    section: Name | None = Field(
        None, description="Name of the section beyond the last gate. Left out: that of the end of the last pool."
    )
    surface: Name | None = Field(
        None, description="Name of the surface beyond the last gate. Left out: none that is protected."
    )
    stretches: list[Stretch] = Field(
        [], description="The floor beyond the last gate as stretches, in place of section and surface."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from self.misfits_of_kind("kind", _KEYS_OF_TAILS)
        yield from misfits_of_first_stretch(self.stretches)
        for index, (before, after) in enumerate(pairwise(self.rating or ()), start=1):
            if not (after[0] > before[0] and after[1] > before[1]):
                yield Misfit(("rating", index), "level and discharge must both be above those of the pair before")
        if self.stretches:
            for key in ("section", "surface"):
                if getattr(self, key) is not None:
                    yield Misfit((key,), "not used with stretches, which carry their own")

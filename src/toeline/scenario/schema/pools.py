"""Pools of a canal file: stretches laid end to end between two gates."""

from collections.abc import Iterator
from typing import Annotated

from pydantic import Field

from toeline.scenario.misfits import Misfit, length_outside
from toeline.scenario.schema.table import HEAD, TAIL, Length, LengthOrZero, Level, Name, Table
from toeline.scenario.schema.value_kinds import Quantity, Text
from toeline.units import UnitSystem

_LossCoefficient = Annotated[float, Quantity(least=0.0, most=100.0)]


class Stretch(Table):
    """A length of canal with one section, slope and surface."""

    length: Length = Field(description="Length along the canal.")
    section: Name = Field(description="Name of its section; for a transition, the section that it ends in.")
    surface: Name = Field(description="Name of its surface.")
    slope: Annotated[float, Quantity(least=-0.1, most=0.1)] = Field(
        0.0, description="Fall of the bed per length, positive downstream."
    )
    transition: bool = Field(
        False, description="Whether it leads evenly from the section before it to its own; never the first stretch."
    )
    transition_loss: _LossCoefficient = Field(
        0.0, description="Coefficient of the loss in the transition, times the change of V²/2g."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.transition_loss and not self.transition:
            yield Misfit(("transition_loss",), "not used without transition = true")


def misfits_of_first_stretch(stretches: list[Stretch]) -> Iterator[Misfit]:
    """Find a transition with no section before it."""
    if stretches and stretches[0].transition:
        yield Misfit(("stretches", 0, "transition"), "found true; the first stretch has no section before it")


class PointLoss(Table):
    """A loss of head at one place: a bridge, a bend, a trash rack."""

    chainage: LengthOrZero = Field(description="Distance below the head of the pool.")
    coefficient: _LossCoefficient = Field(description="Coefficient k of the loss k·V²/2g.")
    name: Name | None = Field(None, description="What causes it.")


class Pool(Table):
    """Water between two gates, or between a gate and an end of the canal; listed from the head down."""

    name: Annotated[str, Text(refused=(HEAD, TAIL))] = Field(description="Name of the pool.")
    bed_level: Level = Field(description="Level of the bed at the head of the pool.")
    target_level: Level | None = Field(None, description="Level to be held at the lower end of the pool.")
    stretches: list[Stretch] = Field(min_length=1, description="Its stretches from the head down.")
    point_losses: list[PointLoss] = Field([], description="Losses of head at single places.")

    @property
    def length(self) -> float:
        """Length of the pool [m]."""
        return sum(stretch.length for stretch in self.stretches)

    def bed_at(self, chainage: float) -> float:
        """Level of the bed [m] at a distance below the head of the pool [m]; beyond the end, that of the end."""
        level, beginning = self.bed_level, 0.0
        for stretch in self.stretches:
            level -= stretch.slope * min(stretch.length, max(chainage - beginning, 0.0))
            beginning += stretch.length
        return level

    @property
    def end_bed_level(self) -> float:
        """Level of the bed at the lower end [m]."""
        return self.bed_at(self.length)

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        yield from misfits_of_first_stretch(self.stretches)
        yield from self._misfits_of_point_losses(system)
        yield from self._misfits_of_target(system)

    def _misfits_of_point_losses(self, system: UnitSystem) -> Iterator[Misfit]:
        for index, loss in enumerate(self.point_losses):
            if loss.chainage > self.length:
                path = ("point_losses", index, "chainage")
                yield length_outside(path, loss.chainage, "up to the pool's end", self.length, system)

    def _misfits_of_target(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.target_level is not None and self.target_level <= self.end_bed_level:
            allowed = "above the bed at the pool's lower end"
            yield length_outside(("target_level",), self.target_level, allowed, self.end_bed_level, system)

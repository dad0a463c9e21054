"""Escapes of a canal file: side weirs by which surplus water leaves a pool."""

from typing import Annotated

from pydantic import Field

from toeline.scenario.schema.table import Length, LengthOrZero, Level, Name, Table
from toeline.scenario.schema.value_kinds import Quantity


class Escape(Table):
    """A side weir along a pool, over which surplus water leaves by itself; water never comes back over it."""

    name: Name = Field(description="Name of the escape.")
    pool: Name = Field(description="Name of its pool.")
    chainage: LengthOrZero = Field(description="Distance of the middle of its crest below the head of the pool.")
    crest_level: Level = Field(description="Level of the crest.")
    length: Length = Field(description="Length of the crest along the canal.")
    coefficient: Annotated[float, Quantity("weir coefficient", above=0.0, most=3.0)] = Field(
        1.7, description="Coefficient C of the flow C·L·h^1.5 over the crest (1.7: common practice, no source)."
    )
    outside_level: Level | None = Field(
        None, description="Level of the water beyond the crest, which may drown it. Left out: the water falls freely."
    )

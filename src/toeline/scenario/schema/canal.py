"""The canal file as a whole."""

from typing import Annotated

from pydantic import Field

from toeline.scenario.schema.ends import Head, Tail
from toeline.scenario.schema.escapes import Escape
from toeline.scenario.schema.gates import Gate
from toeline.scenario.schema.gauges import Gauge
from toeline.scenario.schema.limits import Limit
from toeline.scenario.schema.losses import Losses
from toeline.scenario.schema.offtakes import Offtake
from toeline.scenario.schema.pools import Pool
from toeline.scenario.schema.roughness import RoughnessEntry
from toeline.scenario.schema.sections import Section, Surface
from toeline.scenario.schema.table import Name, Table
from toeline.scenario.schema.value_kinds import Text
from toeline.units import UnitSystem


class Canal(Table):
    """The canal file: written once and kept for years."""

    name: Name = Field(description="Name of the canal.")
    units: Annotated[UnitSystem, Field(strict=False)] = Field(description="Units of plain numbers in this file.")
    sections: dict[Name, Section] = Field(min_length=1, description="Cross-sections by name.")
    surfaces: dict[Name, Surface] = Field(min_length=1, description="Surfaces of the floor by name.")
    pools: list[Pool] = Field(min_length=1, description="Pools from the head down.")
    gates: list[Gate] = Field([], description="Gates from the head down.")
    offtakes: list[Offtake] = Field([], description="Offtakes, in any order.")
    escapes: list[Escape] = Field([], description="Side weirs for surplus water, in any order.")
    gauges: list[Gauge] = Field([], description="Staff gauges, in any order.")
    losses: Losses = Field(default_factory=Losses, description="Seepage, evaporation and rain. Left out: none.")
    roughness_calendar: list[RoughnessEntry] = Field(
        [], description="Factors on Manning's n by day and pool, in any order. Left out: 1."
    )
    head: Head = Field(description="The upper end of the canal.")
    tail: Tail = Field(description="The lower end of the canal.")
    limits: list[Limit] = Field([], description="What is not to be passed; none is built in.")
    call: Annotated[str, Text("text of one line", longest=200)] | None = Field(
        None, description="Whom gatekeepers call, and how, for order sheets. Left out: a blank to fill in by hand."
    )

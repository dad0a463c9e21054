"""The day file as a whole."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime
from typing import Annotated, Any, Literal

from pydantic import Field, ValidationInfo

from toeline.scenario.misfits import Misfit, MisfitsError, shown
from toeline.scenario.reading import reading_of
from toeline.scenario.schema.day_series import Delivery, Inflow, LevelSeries, OpeningSeries
from toeline.scenario.schema.losses import LossesOfDay
from toeline.scenario.schema.plans import Plan
from toeline.scenario.schema.table import OPENING, DischargeOrZero, FileName, Name, Table
from toeline.scenario.schema.value_kinds import Duration, Quantity, Text, ValueKind
from toeline.scenario.times import read_start, read_zone
from toeline.units import UnitSystem, quantity_text

TO_HOLD_TARGETS = "to hold targets"

OpeningOfGate = float | tuple[float, ...]
"""The opening of a gate [m], or those of its separate bays."""

MARKS_OF_ROUNDING = {"turns": "turn", "scale marks": "scale_mark"}
"""The key of a gate that gives the spacing for each way of rounding openings."""


@dataclass(frozen=True)
class Zone(ValueKind):
    """A name of the tz database."""

    def read(self, value: Any, info: ValidationInfo) -> str:
        return read_zone(value).key

    def describe(self) -> str:
        return "name of the tz database"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string"}


@dataclass(frozen=True)
class PeriodStart(ValueKind):
    """Date and time with offset, or local in the zone of the day."""

    def read(self, value: Any, info: ValidationInfo) -> datetime:
        return read_start(value, reading_of(info).zone)

    def describe(self) -> str:
        return "date and time with offset from UTC; the offset may be left out where a zone is given"

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string", "format": "date-time"}


@dataclass(frozen=True)
class OpeningsAtStart(ValueKind):
    """Openings by gate, or those that hold the target levels."""

    opening: Quantity

    def read(self, value: Any, info: ValidationInfo) -> Any:
        if value is None:
            return {"steady": TO_HOLD_TARGETS, "dry": {}}.get(info.data.get("state", ""))
        if value == TO_HOLD_TARGETS:
            return value
        if not isinstance(value, dict):
            raise ValueError(f'found {shown(value)}; allowed: "{TO_HOLD_TARGETS}" or a table of openings by gate')
        return self._by_gate(value, info)

    def _by_gate(self, table: dict[str, Any], info: ValidationInfo) -> dict[str, OpeningOfGate]:
        openings: dict[str, OpeningOfGate] = {}
        misfits = []
        for gate, value in table.items():
            try:
                openings[gate] = self._of_gate(value, info)
            except ValueError as error:
                misfits.append(Misfit((gate,), str(error)))
        if misfits:
            raise MisfitsError(misfits)
        return openings

    def _of_gate(self, value: Any, info: ValidationInfo) -> OpeningOfGate:
        if isinstance(value, list):
            return tuple(self.opening.read(item, info) for item in value)
        return self.opening.read(value, info)

    def describe(self) -> str:
        by_gate = f"a table of openings by gate (an array for separate bays): {self.opening.describe()}"
        return f'"{TO_HOLD_TARGETS}", or {by_gate}'

    def json_schema(self) -> dict[str, Any]:
        opening = self.opening.json_schema()
        of_gate = {"anyOf": [opening, {"type": "array", "items": opening}]}
        by_gate = {"type": "object", "additionalProperties": of_gate}
        return {"anyOf": [{"const": TO_HOLD_TARGETS}, by_gate]}


class Period(Table):
    """The time that is simulated, and how finely."""

    start: Annotated[datetime, PeriodStart()] = Field(description="When it starts.")
    length_ms: Annotated[int, Duration("1 min", "400 d")] = Field(alias="length", description="How long it lasts.")
    level_tolerance: Annotated[float, Quantity("length", least=1e-9, most=0.1)] = Field(
        0.003, description="Error of level that one time step may make."
    )
    spacing: Annotated[float, Quantity("length", least=1.0, most=1000.0)] = Field(
        100.0, description="Largest distance between two computed points along a pool."
    )
    longest_step_ms: Annotated[int, Duration("1 s", "6 h")] = Field(
        900_000, alias="longest_step", description="Longest time step; of which the period has up to 10,000,000."
    )
    local_inertia: bool = Field(
        False, description="Whether the inertia of the water is kept: to measure what the quasi-steady view leaves out."
    )


class Output(Table):
    """How often results are written: up to 10,000,000 rows, and 1,000,000,000 levels of long profiles in all."""

    every_ms: Annotated[int, Duration("1 s", "24 h")] = Field(
        60_000, alias="every", description="Time between values of gates, pools and offtakes."
    )
    profiles_every_ms: Annotated[int, Duration("1 s", "24 h")] = Field(
        600_000, alias="profiles_every", description="Time between long profiles of the whole canal."
    )
    events_every_ms: Annotated[int, Duration("1 s", "24 h")] | None = Field(
        None,
        alias="events_every",
        description="Shorter time between values around events: a leaf moves, the flow through a gate or its jump "
        "changes its state, water passes a bank, a lining or the crest of an escape. Left out: as every.",
    )
    events_within_ms: Annotated[int, Duration("1 s", "24 h")] = Field(
        1_800_000, alias="events_within", description="How long before and after an event events_every holds."
    )

    @property
    def is_thinned(self) -> bool:
        """Whether values are kept closer around events than elsewhere."""
        return self.events_every_ms is not None

    @property
    def finest_ms(self) -> int:
        """Time between values that are computed."""
        return self.every_ms if self.events_every_ms is None else self.events_every_ms

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if self.every_ms % self.finest_ms:
            found, whole = (quantity_text(ms / 1000.0, "duration", system) for ms in (self.finest_ms, self.every_ms))
            yield Misfit(("events_every",), f"found {found}; allowed: a whole part of every, {whole}")


class Start(Table):
    """The state of the canal at the start of the period."""

    state: Literal["steady", "dry"] | None = Field(
        None, description="steady: steady flow at the first values of the day; dry: an empty canal."
    )
    file: FileName | None = Field(None, description="Run file to go on from the end of, in place of a state.")
    openings: Annotated[Literal["to hold targets"] | dict[str, OpeningOfGate] | None, OpeningsAtStart(OPENING)] = Field(
        None,
        validate_default=True,
        description="Openings of the gates. Left out: those that hold the targets (steady), closed (dry).",
    )
    inflow: DischargeOrZero | None = Field(
        None, description="Discharge from the reservoir, for a steady start that holds the targets."
    )

    def misfits(self, system: UnitSystem) -> Iterator[Misfit]:
        if (self.state is None) == (self.file is None):
            yield Misfit(("state",), 'exactly one of "state" and "file" is required')
        if self.file is not None and self.openings is not None:
            yield Misfit(("openings",), "not used with file, which holds the openings")
        if self.state == "dry" and self.openings == TO_HOLD_TARGETS:
            yield Misfit(("openings",), f'found "{TO_HOLD_TARGETS}"; allowed with a dry start: openings by gate')
        if self.inflow is not None and not (self.state == "steady" and self.openings == TO_HOLD_TARGETS):
            yield Misfit(("inflow",), f'not used without a steady start with openings "{TO_HOLD_TARGETS}"')


class Day(Table):
    """The day file: written daily for a canal."""

    canal: FileName = Field(description="The canal file.")
    title: Annotated[str, Text("text of one line")] = Field(description="What the day is about, for headings.")
    units: Annotated[UnitSystem, Field(strict=False)] | None = Field(
        None, description="Units of plain numbers in this file and of output for people. Left out: those of the canal."
    )
    zone: Annotated[str, Zone()] | None = Field(
        None, description="Time zone of the canal, for local times and days on which the clocks change."
    )
    period: Period = Field(description="The time that is simulated.")
    output: Output = Field(default_factory=Output, description="How often results are written.")
    inflow: Inflow | None = Field(None, description="Discharge into the first pool, where no reservoir feeds it.")
    deliveries: dict[str, Delivery] = Field({}, description="Discharge asked by each demand offtake; else 0.")
    offtake_openings: dict[str, OpeningSeries] = Field({}, description="Opening of orifice offtakes that are moved.")
    head: LevelSeries | None = Field(None, description="Level of the reservoir, where it changes during the day.")
    tail: LevelSeries | None = Field(None, description="Level beyond the end, where it changes during the day.")
    losses: LossesOfDay = Field(default_factory=LossesOfDay, description="Seepage, evaporation and rain of the day.")
    start: Start = Field(description="The state of the canal at the start.")
    round_openings: Literal["turns", "scale marks"] | None = Field(
        None,
        description="What openings are rounded to before they are simulated: whole turns of the handwheel (turn) or "
        "marks of the scale (scale_mark) of each gate that has them. Left out: not rounded.",
    )
    plans: dict[Name, Plan] = Field({}, description="Ways of operating the day, by name.")

"""Rules of a plan: every rule declares its settings plainly, and here they become a table like any other."""

import re
from dataclasses import dataclass
from datetime import time
from functools import cache
from types import SimpleNamespace
from typing import Annotated, Any, Literal

from pydantic import Field, ValidationError, ValidationInfo, create_model

from toeline.rules.registry import BUILT_IN, FoundRule, UnknownRuleError, find_rule, known_kinds
from toeline.rules.setting import EVERY_KEY, LEAST_EVERY, Setting
from toeline.scenario.messages import misfits_of
from toeline.scenario.misfits import Misfit, MisfitsError, nearest, shown
from toeline.scenario.reading import reading_of
from toeline.scenario.rules import RuleChoice
from toeline.scenario.schema.day_series import SeriesKind
from toeline.scenario.schema.table import Name, Table
from toeline.scenario.schema.toml_json_schema import TomlJsonSchema
from toeline.scenario.schema.value_kinds import Duration, Quantity, ValueKind
from toeline.units import UnitSystem, quantity_text

KINDS_OF_LEAD = ("wave", "volume")
_CLOCK_TIME = re.compile(r"(\d{1,2}):(\d{2})(?::(\d{2}))?")
_FIELD = "setting_"
_LONGEST_LEAD = Duration("0 s", "10 d")


@dataclass(frozen=True)
class Seconds(ValueKind):
    """A duration, read in seconds."""

    kind: Duration

    def read(self, value: Any, info: ValidationInfo) -> float:
        return self.kind.read(value, info) / 1000.0

    def describe(self) -> str:
        return self.kind.describe()

    def json_schema(self) -> dict[str, Any]:
        return self.kind.json_schema()


@dataclass(frozen=True)
class TimesOfDay(ValueKind):
    """Times of day, by the clock of the canal; exactly so many, or at least one."""

    count: int | None = None

    def read(self, value: Any, info: ValidationInfo) -> tuple[time, ...]:
        if not isinstance(value, list) or not value or (self.count is not None and len(value) != self.count):
            raise ValueError(f"found {shown(value)}; allowed: {self.describe()}")
        misfits, times = [], []
        for index, item in enumerate(value):
            try:
                times.append(_time_of_day(item))
            except ValueError as error:
                misfits.append(Misfit((index,), str(error)))
        if misfits:
            raise MisfitsError(misfits)
        if self.count == 2 and times[0] == times[1]:
            raise ValueError("found twice the same time; allowed: two times that differ")
        return tuple(times)

    def describe(self) -> str:
        what = 'array of times of day, as ["07:00", "18:00"]'
        return f"{what}, of {self.count}" if self.count is not None else what

    def json_schema(self) -> dict[str, Any]:
        return {"type": "array", "items": {"type": "string"}, "minItems": self.count or 1}


def _time_of_day(value: Any) -> time:
    """Read "00:00" to "24:00", which is midnight again."""
    if isinstance(value, time):
        return value.replace(microsecond=0)
    match = _CLOCK_TIME.fullmatch(value) if isinstance(value, str) else None
    hour, minute, second = (int(part or 0) for part in match.groups()) if match else (25, 0, 0)
    if (hour, minute, second) > (24, 0, 0) or max(minute, second) > 59:
        raise ValueError(f'found {shown(value)}; allowed: a time of day such as "06:30"')
    return time(hour % 24, minute, second)


@dataclass(frozen=True)
class LeadTimesKind(ValueKind):
    """A kind of lead time for all pools, or one or a duration by pool."""

    def read(self, value: Any, info: ValidationInfo) -> str | dict[str, str | float]:
        if isinstance(value, dict):
            return self._by_pool(value, info)
        if value in KINDS_OF_LEAD:
            return str(value)
        raise ValueError(f"found {shown(value)}; allowed: {self.describe()}")

    def _by_pool(self, table: dict[str, Any], info: ValidationInfo) -> dict[str, str | float]:
        leads: dict[str, str | float] = {}
        misfits = []
        for pool, value in table.items():
            try:
                leads[pool] = value if value in KINDS_OF_LEAD else _LONGEST_LEAD.read(value, info) / 1000.0
            except ValueError as error:
                misfits.append(Misfit((pool,), f'{error}, or "wave" or "volume"'))
        if misfits:
            raise MisfitsError(misfits)
        return leads

    def describe(self) -> str:
        return '"wave", "volume", or a table of these or durations by pool'

    def json_schema(self) -> dict[str, Any]:
        by_pool = {"type": "object", "additionalProperties": {"type": "string"}}
        return {"anyOf": [{"enum": list(KINDS_OF_LEAD)}, by_pool]}


def _annotation(key: str, setting: Setting) -> Any:
    least = max(setting.least, LEAST_EVERY) if key == EVERY_KEY else setting.least
    quantity = Quantity(setting.dimension, least=least, most=setting.most, above=setting.above)
    match setting.takes:
        case "number":
            return Annotated[float, quantity]
        case "series":
            return Annotated[Any, SeriesKind(quantity, "lines")]
        case "duration":
            bounds = (quantity_text(bound, "duration", UnitSystem.metric) for bound in (least, setting.most))
            return Annotated[float, Seconds(Duration(*bounds))]
        case "gate" | "pool":
            return Name
        case "word":
            return Literal[setting.words]
        case "times of day":
            return Annotated[Any, TimesOfDay()]
        case "hours":
            return Annotated[Any, TimesOfDay(2)]
        case "lead times":
            return Annotated[Any, LeadTimesKind()]


@cache
def table_of(found: FoundRule) -> type[Table]:
    """The table of a kind of rule: its settings as fields, under names that no table has of its own."""
    fields: dict[str, Any] = {"kind": (Literal[found.kind], Field(description="The rule."))}
    for key, setting in found.rule.settings.items():
        default = ... if setting.is_required else setting.default
        annotation = _annotation(key, setting)
        if default is None:
            annotation = annotation | None
        fields[_FIELD + key] = (annotation, Field(default, alias=key, description=setting.description))
    summary = " ".join((found.rule.__doc__ or "").split())
    table: type[Table] = create_model(found.rule.__name__, __base__=Table, __doc__=summary, **fields)
    return table


@dataclass(frozen=True)
class RulesKind(ValueKind):
    """An array of rules, each with the settings that its kind declares."""

    def read(self, value: Any, info: ValidationInfo) -> list[RuleChoice]:
        if not isinstance(value, list):
            raise ValueError(f"found {shown(value)}; allowed: {self.describe()}")
        rules, misfits = [], []
        for index, item in enumerate(value):
            try:
                rules.append(_rule(item, info))
            except MisfitsError as error:
                misfits += [Misfit((index, *path), text) for path, text in error.items]
        if misfits:
            raise MisfitsError(misfits)
        return rules

    def describe(self) -> str:
        return "an array of rules"

    def json_schema(self) -> dict[str, Any]:
        tables = [table_of(FoundRule(kind, rule)) for kind, rule in BUILT_IN.items()]
        own = {
            "type": "object",
            "properties": {
                "kind": {"type": "string", "not": {"enum": list(BUILT_IN)}},
                EVERY_KEY: {"description": f"Time between decisions: {LEAST_EVERY:g} s or longer."},
            },
            "required": ["kind"],
        }
        built_in = [table.model_json_schema(schema_generator=TomlJsonSchema) for table in tables]
        return {"type": "array", "items": {"anyOf": [*built_in, own]}}


def _rule(item: Any, info: ValidationInfo) -> RuleChoice:
    if not isinstance(item, dict):
        raise MisfitsError([Misfit((), f"found {shown(item)}; allowed: a table")])
    kind = item.get("kind")
    if not isinstance(kind, str):
        found = "not given" if kind is None else f"found {shown(kind)}"
        raise MisfitsError([Misfit(("kind",), f"required, but {found}; {nearest('', known_kinds())}")])
    reading = reading_of(info)
    try:
        found_rule = find_rule(kind, reading.folder)
    except UnknownRuleError as error:
        own = 'one of your own is written "file.py:ClassName" or "package.module:ClassName"'
        hint = str(error) or f"{nearest(kind, known_kinds())}; {own}"
        raise MisfitsError([Misfit(("kind",), f"found {shown(kind)}; {hint}")]) from None
    if found_rule.file:
        reading.rule_sources[found_rule.file] = found_rule.source
    table = table_of(found_rule)
    try:
        read = table.model_validate(item, context=info.context)
    except ValidationError as error:
        raise MisfitsError(misfits_of(error, table)) from None
    given = {key: getattr(read, _FIELD + key) for key in found_rule.rule.settings}
    return RuleChoice(found_rule, SimpleNamespace(**given))

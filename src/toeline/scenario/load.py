"""From the two input files to a scenario that is right in itself, or to all faults found in them."""

import hashlib
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any, Literal, TypeVar

from pydantic import ValidationError

from toeline.errors import Fault, ScenarioError, UsageError
from toeline.scenario.checks.canal_checks import misfits_of_canal
from toeline.scenario.checks.day_checks import misfits_of_day, misfits_of_orders
from toeline.scenario.checks.rule_checks import misfits_of_pace, misfits_of_rules, misfits_of_stuck
from toeline.scenario.input_file import InputFile, read_input_file
from toeline.scenario.messages import csv_faults_of, misfits_of
from toeline.scenario.misfits import Misfit, in_quotes, nearest, shown
from toeline.scenario.orders import Order
from toeline.scenario.overrides import read_overrides
from toeline.scenario.reading import Reading
from toeline.scenario.rules import RuleChoice, Stuck
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import Day, Period
from toeline.scenario.schema.plans import Plan
from toeline.scenario.schema.table import Table
from toeline.scenario.text_file import is_there
from toeline.scenario.times import Clock, read_zone
from toeline.units import Display, UnitSystem

AnyTable = TypeVar("AnyTable", bound=Table)
Placed = TypeVar("Placed", Order, RuleChoice)


@dataclass(frozen=True)
class CanalFile:
    """A canal file that is right in itself."""

    canal: Canal
    source: InputFile = field(repr=False)

    @property
    def units(self) -> UnitSystem:
        """Units of the file."""
        return self.canal.units

    @property
    def path(self) -> Path:
        """Where the file is."""
        return self.source.path

    @property
    def text(self) -> str:
        """The file, verbatim."""
        return self.source.text

    def locate(self, *key_path: str | int) -> int | None:
        """Give the line of a key path such as ("pools", 2, "bed_level"), indices from 0."""
        return self.source.line(*key_path)

    def fault(self, message: str, *key_path: str | int) -> Fault:
        """Give a fault at a key path, indices from 0."""
        return self.source.fault(message, *key_path)


@dataclass(frozen=True)
class Scenario:
    """A day on a canal with one plan: everything that a run needs, in SI."""

    canal: Canal
    day: Day
    plan: str | None
    orders: tuple[Order, ...]
    rules: tuple[RuleChoice, ...]
    stuck: tuple[Stuck, ...]
    start_file: Path | None
    input_hash: str
    display: Display
    canal_source: InputFile = field(repr=False)
    day_source: InputFile = field(repr=False)

    @property
    def canal_text(self) -> str:
        """The canal file, verbatim."""
        return self.canal_source.text

    @property
    def day_text(self) -> str:
        """The day file, verbatim."""
        return self.day_source.text

    @property
    def canal_path(self) -> Path:
        """Where the canal file is."""
        return self.canal_source.path

    @property
    def day_path(self) -> Path:
        """Where the day file is."""
        return self.day_source.path

    def fault(self, message: str, *key_path: str | int, file: Literal["canal", "day"] = "canal") -> Fault:
        """Give a fault at a key path such as ("pools", 2, "stretches", 1), indices from 0."""
        source = self.canal_source if file == "canal" else self.day_source
        return source.fault(message, *key_path)


def load_canal(path: Path | str) -> CanalFile:
    """Read and check a canal file. Raises ScenarioError with all faults found."""
    return _checked_canal(read_input_file(Path(path)))


def _checked_canal(source: InputFile) -> CanalFile:
    canal = _validated(Canal, source, Reading(_units_of_canal(source), source.path.parent))
    _raise_if_any(source.fault(misfit.message, *misfit.path) for misfit in misfits_of_canal(canal))
    return CanalFile(canal, source)


def load_scenario(path: Path | str, *, plan: str | None = None, overrides: Iterable[str] = ()) -> Scenario:
    """Read and check a day file, its canal file and the CSV files that it names.

    `plan` names the plan to run; a day with one plan needs no name. `overrides` set keys of the day file anew,
    as 'period.length="6 h"'. Raises ScenarioError with all faults found, and UsageError where several plans are there
    and none is named, where the named one is not there, or where an override is no key=value.
    """
    source = read_input_file(Path(path)).overridden(read_overrides(overrides))
    canal = _canal_of(source)
    reading = _reading_of_day(source, canal.units)
    try:
        day = _validated(Day, source, reading)
    except ScenarioError as error:
        raise ScenarioError([*canal.faults, *error.faults]) from None
    if canal.file is None:
        raise ScenarioError(canal.faults)
    plans = {name: _placed(plan, name, source) for name, plan in day.plans.items()}
    _raise_if_any(_faults_between(day, plans, canal.file, source, reading))
    return _scenario(canal.file, source, day, plans, _chosen(plan, plans, source), reading)


def plan_names(path: Path | str) -> tuple[str, ...]:
    """Give the names of the plans of a day file, without checking it. Raises ScenarioError where it is no TOML."""
    plans = read_input_file(Path(path)).data.get("plans")
    return tuple(plans) if isinstance(plans, dict) else ()


@dataclass(frozen=True)
class _CanalOfDay:
    """The canal of a day as far as it could be read, and the faults found in it."""

    file: CanalFile | None = None
    units: UnitSystem = UnitSystem.metric
    faults: list[Fault] = field(default_factory=list)


def _canal_of(day: InputFile) -> _CanalOfDay:
    """Read the canal of a day; no faults where the day does not name it properly, which the day file is told."""
    name = day.data.get("canal")
    if not isinstance(name, str) or not name:
        return _CanalOfDay()
    path, units = day.path.parent / name, UnitSystem.metric
    if not is_there(path):
        return _CanalOfDay(faults=[day.fault(f"found {shown(name)}; there is no such file", "canal")])
    try:
        source = read_input_file(path)
        units = _units_of_canal(source)
        return _CanalOfDay(_checked_canal(source), units)
    except ScenarioError as error:
        return _CanalOfDay(None, units, error.faults)


def _units_of_canal(source: InputFile) -> UnitSystem:
    return _units_named(source) or UnitSystem.metric


def _reading_of_day(source: InputFile, units_of_canal: UnitSystem) -> Reading:
    """Find what the rest of the day file is read with: its units, zone and period."""
    reading = Reading(_units_named(source) or units_of_canal, source.path.parent)
    try:
        reading.zone = read_zone(source.data["zone"]) if "zone" in source.data else None
        period = Period.model_validate(source.data.get("period"), context=reading)
    except ValueError:
        return reading  # these faults are found again, with all others, when the whole day is read
    is_shortened = any(override.lies_in(("period",)) for override in source.overrides)
    reading.clock = Clock(period.start, period.length_ms, is_shortened)
    return reading


def _units_named(source: InputFile) -> UnitSystem | None:
    try:
        return UnitSystem(source.data.get("units", ""))
    except ValueError:
        return None


def _validated(table: type[AnyTable], source: InputFile, reading: Reading) -> AnyTable:
    try:
        return table.model_validate(source.data, context=reading)
    except ValidationError as error:
        faults = [source.fault(message, *path) for path, message in misfits_of(error, table)]
        raise ScenarioError([*faults, *csv_faults_of(error)]) from None


def _placed(plan: Plan, name: str, source: InputFile) -> Plan:
    """Give the plan with the place where each order and rule is written; orders of a CSV file have it already."""
    orders = [
        order if order.file else _at(source, order, "plans", name, "orders", index)
        for index, order in enumerate(plan.orders)
    ]
    rules = [_at(source, rule, "plans", name, "rules", index) for index, rule in enumerate(plan.rules)]
    return plan.model_copy(update={"orders": orders, "rules": rules})


def _at(source: InputFile, item: Placed, *key_path: str | int) -> Placed:
    place = source.fault("", *key_path)
    return replace(item, file=place.file, line=place.line)


def _faults_between(
    day: Day, plans: dict[str, Plan], canal_file: CanalFile, source: InputFile, reading: Reading
) -> Iterator[Fault]:
    canal = canal_file.canal
    for misfit in misfits_of_day(day, canal, reading.folder, reading.system):
        yield source.fault(misfit.message, *misfit.path)
    for name, plan in plans.items():
        for misfit in misfits_of_orders(plan.orders, canal):
            yield _fault_of_order(misfit, name, plan.orders, source)
        for misfit in (*misfits_of_rules(plan.rules, canal), *misfits_of_pace(plan.rules, day.period.length_ms)):
            yield source.fault(misfit.message, "plans", name, "rules", *misfit.path)
        for misfit in misfits_of_stuck(plan.stuck, canal):
            yield source.fault(misfit.message, "plans", name, "stuck", *misfit.path)


def _fault_of_order(misfit: Misfit, plan: str, orders: list[Order], source: InputFile) -> Fault:
    index, key = misfit.path
    order = orders[int(index)]
    fault = source.fault(misfit.message, "plans", plan, "orders", index, key)
    is_in_csv = order.file != fault.file
    return Fault(order.file, order.line, str(key), misfit.message) if is_in_csv else fault


def _raise_if_any(faults: Iterable[Fault]) -> None:
    found = list(faults)
    if found:
        raise ScenarioError(found)


def _chosen(plan: str | None, plans: dict[str, Any], source: InputFile) -> str | None:
    if plan is not None and plan not in plans:
        raise UsageError(f"{source.path}: there is no plan {shown(plan)}; {nearest(plan, plans)}")
    if plan is None and len(plans) > 1:
        raise UsageError(f"{source.path}: the day has several plans; name one of {in_quotes(plans)}")
    return plan or next(iter(plans), None)


def _scenario(
    canal_file: CanalFile,
    source: InputFile,
    day: Day,
    plans: dict[str, Plan],
    plan: str | None,
    reading: Reading,
) -> Scenario:
    chosen = plans[plan] if plan else Plan()
    start_file = reading.folder / day.start.file if day.start.file else None
    return Scenario(
        canal=canal_file.canal,
        day=day,
        plan=plan,
        orders=tuple(sorted(chosen.orders, key=lambda order: order.at)),
        rules=tuple(chosen.rules),
        stuck=tuple(entry.stuck() for entry in chosen.stuck),
        start_file=start_file,
        input_hash=_input_hash(canal_file.source, source, plan, reading, start_file),
        display=Display(reading.system),
        canal_source=canal_file.source,
        day_source=source,
    )


def _input_hash(canal: InputFile, day: InputFile, plan: str | None, reading: Reading, start_file: Path | None) -> str:
    """Digest everything that the numbers of a run depend on; each part is led by its length."""
    parts = [canal.text, day.text, plan or "", *(override.text for override in day.overrides)]
    parts += [part for item in sorted(reading.csv_texts.items()) for part in item]
    parts += [reading.rule_sources[file] for file in sorted(reading.rule_sources)]
    digest = hashlib.sha256()
    for part in [text.encode() for text in parts] + ([start_file.read_bytes()] if start_file else []):
        digest.update(len(part).to_bytes(8, "big"))
        digest.update(part)
    return digest.hexdigest()

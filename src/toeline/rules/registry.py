"""The kinds of rules: those built in, those of installed packages, and those of the user's own files."""

import hashlib
import importlib
import importlib.util
import inspect
import sys
import traceback
from collections.abc import Callable, Iterable
from contextlib import redirect_stdout
from dataclasses import dataclass
from datetime import datetime
from importlib.metadata import EntryPoint, entry_points
from pathlib import Path
from types import ModuleType, SimpleNamespace
from typing import TypeVar

import numpy as np

from toeline.errors import RunError
from toeline.rules.answers import are_settings, finite, is_memory, is_misfits, is_too_often, whole_times
from toeline.rules.base import Answer, CanalFacts, Present, Rule
from toeline.rules.gatekeeper_rounds import GatekeeperRounds
from toeline.rules.hold_discharge import HoldDischarge
from toeline.rules.hold_downstream_level import HoldDownstreamLevel
from toeline.rules.hold_upstream_level import HoldUpstreamLevel
from toeline.rules.hold_volume import HoldVolume
from toeline.rules.setting import EVERY_KEY, LEAST_EVERY

Result = TypeVar("Result")

BUILT_IN: dict[str, type[Rule]] = {
    rule.kind: rule for rule in (HoldUpstreamLevel, HoldDownstreamLevel, HoldDischarge, GatekeeperRounds, HoldVolume)
}
ENTRY_POINTS = "toeline.rules"
"""Group of entry points in which an installed package announces rules, each under its kind."""

LONGEST_SHOWN = 60
"""Characters of an answer that a message repeats."""


class UnknownRuleError(ValueError):
    """No such rule, or one that cannot be loaded: a sentence for the planner."""


@dataclass(frozen=True)
class FoundRule:
    """A kind of rule as a day file names it; `source` is the text of a file of somebody else's code that was run to
    make it, `file` where that is.

    What goes wrong in such code becomes an UnknownRuleError, or a RunError once the run has begun, with the place; so
    does an answer that is none. What it prints goes to the error stream: the output of a command stays what it is.
    """

    kind: str
    rule: type[Rule]
    file: str = ""
    source: str = ""

    def misfits(self, given: SimpleNamespace, canal: CanalFacts) -> list[tuple[str, str]]:
        """What the rule objects to; see `Rule.misfits`."""
        found = self._run(UnknownRuleError, lambda: list(self.rule.misfits(given, canal)))
        if not is_misfits(found):
            raise UnknownRuleError(self._nonsense("objects with", found, "pairs of a key and a sentence"))
        return found

    def gate_of(self, given: SimpleNamespace, canal: CanalFacts) -> str | None:
        """The gate that the rule moves, None where the canal has none such."""
        gate = self._run(UnknownRuleError, lambda: self.rule.gate_of(given, canal))
        return gate if gate in list(canal.gates) else None

    def decision_times(self, given: SimpleNamespace, start: datetime, length_ms: int) -> np.ndarray:
        """When the rule decides [ms from the start], in the period and rising; see `Rule.decision_times`."""
        found = self._run(RunError, lambda: self.rule.decision_times(given, start, length_ms))
        times = whole_times(found, length_ms)
        if times is None:
            raise RunError(self._nonsense("decides at", found, "an array of times in ms from the start"))
        if times.size > length_ms / (1000.0 * LEAST_EVERY) + 1:
            raise RunError(f'rule "{self.kind}" decides {times.size:,} times; allowed: once a second')
        return times

    def make(self, given: SimpleNamespace, canal: CanalFacts) -> Rule:
        """The rule of a run; it may do to its settings what it likes, those of the next run are as given."""
        rule = self._run(RunError, lambda: self.rule(SimpleNamespace(**vars(given)), canal))
        gate = self._run(RunError, lambda: rule.gate)
        if gate not in list(canal.gates):
            raise RunError(self._nonsense("moves", gate, "a gate of the canal"))
        self._check_memory(rule)
        return rule

    def decide(self, rule: Rule, now: Present) -> float | None:
        """The opening [m] that the rule wants now."""
        wanted = self._run(RunError, lambda: rule.decide(now))
        self._check_memory(rule)
        opening = finite(wanted)
        if wanted is not None and opening is None:
            raise RunError(self._nonsense("wants an opening of", wanted, "a number in m, or None"))
        return opening

    def learn(self, rule: Rule, answer: Answer, ordered: float) -> None:
        """Tell the rule what became of its decision."""
        self._run(RunError, lambda: rule.learn(answer, ordered))
        self._check_memory(rule)

    def _check_memory(self, rule: Rule) -> None:
        if self.file and not is_memory(memory := getattr(rule, "memory", None)):
            raise RunError(self._nonsense("has the memory", memory, "numbers by name, from which the next day goes on"))

    def _nonsense(self, what: str, found: object, allowed: str) -> str:
        return f'rule "{self.kind}" {what} {_shown(found)}; allowed: {allowed}'

    def _run(self, kind_of_error: type[Exception], work: Callable[[], Result]) -> Result:
        if not self.file:
            return work()
        try:
            with redirect_stdout(sys.stderr):
                return work()
        except RunError:
            raise
        except (Exception, SystemExit) as error:
            raise kind_of_error(f'rule "{self.kind}" failed in {_place(error, self.file)}: {_words(error)}') from error


def find_rule(kind: str, folder: Path) -> FoundRule:
    """Find a kind of rule: built in, `"file.py:ClassName"` in the folder, `"package.module:ClassName"`, or the name of
    an entry point. Code that is not built in is run. Raises UnknownRuleError.
    """
    if kind in BUILT_IN:
        return FoundRule(kind, BUILT_IN[kind])
    place, colon, name = kind.partition(":")
    if colon and place.endswith(".py"):
        return _of_module(kind, _module_of_file(folder / place), name, str(folder / place))
    if colon:
        return _of_module(kind, _imported(place), name)
    announced = _announced()
    if kind in announced:
        return _of_module(kind, _imported(announced[kind].module), announced[kind].attr)
    raise UnknownRuleError("")


def known_kinds() -> list[str]:
    """The kinds that have a name of their own."""
    return [*BUILT_IN, *_announced()]


def _announced() -> dict[str, EntryPoint]:
    found: Iterable[EntryPoint] = entry_points(group=ENTRY_POINTS)
    return {point.name: point for point in found}


def _imported(module: str) -> ModuleType:
    try:
        with redirect_stdout(sys.stderr):
            return importlib.import_module(module)
    except (Exception, SystemExit) as error:
        raise UnknownRuleError(f"{module} cannot be loaded: {_words(error)}") from error


def _module_of_file(path: Path) -> ModuleType:
    try:
        source = path.read_bytes()
    except OSError as error:
        raise UnknownRuleError(f"{path} cannot be read: {(error.strerror or str(error)).lower()}") from error
    except ValueError as error:  # a character that no file name may have
        raise UnknownRuleError(f"{path} cannot be read: {error}") from error
    name = f"toeline_rules_of_{path.stem}_{hashlib.sha256(str(path).encode() + source).hexdigest()[:12]}"
    if name in sys.modules:
        return sys.modules[name]
    spec = importlib.util.spec_from_file_location(name, path)
    assert spec is not None  # it ends in .py
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[name] = module
    try:
        with redirect_stdout(sys.stderr):
            exec(compile(source, str(path), "exec"), module.__dict__)
    except (Exception, SystemExit) as error:
        del sys.modules[name]
        raise UnknownRuleError(f"{path} cannot be loaded: {_words(error)}") from error
    return module


def _of_module(kind: str, module: ModuleType, name: str, path: str = "") -> FoundRule:
    rule = getattr(module, name, None)
    written = getattr(module, "__file__", None)
    file = path or str(written or module.__name__)
    if not isinstance(rule, type) or not issubclass(rule, Rule):
        raise UnknownRuleError(f"{file} has no class {name} that derives from toeline.rules.Rule")
    if inspect.isabstract(rule):
        raise UnknownRuleError(f"{name} has no {' and no '.join(sorted(rule.__abstractmethods__))} in {file}")
    if not are_settings(rule.settings):
        allowed = "a toeline.rules.Setting by key, any but kind"
        raise UnknownRuleError(f"{name} in {file} has settings that are none; allowed: {allowed}")
    if is_too_often(rule.settings):
        allowed = f"a default, and bounds, of {LEAST_EVERY:g} s or more"
        raise UnknownRuleError(f"{name} in {file} decides too often by its setting {EVERY_KEY}; allowed: {allowed}")
    source = Path(file).read_text(encoding="utf-8", errors="replace") if written else ""
    return FoundRule(kind, rule, file, source)


def _place(error: BaseException, file: str) -> str:
    """The last line of the file on the way to an error, else the file."""
    lines = [frame.lineno for frame in traceback.extract_tb(error.__traceback__) if frame.filename == file]
    return f"{file}, line {lines[-1]}" if lines else file


def _words(error: BaseException) -> str:
    """What went wrong, in one line."""
    if isinstance(error, SyntaxError):
        line = "" if error.lineno is None else f", line {error.lineno}"
        return f"{type(error).__name__}: {error.msg}{line}"
    return f"{type(error).__name__}: {' '.join(str(error).split())}".removesuffix(": ")


def _shown(found: object) -> str:
    """What code gave back, as it would be written in it, in one line that is not too long."""
    text = " ".join(repr(found).split())
    return text if len(text) <= LONGEST_SHOWN else f"{text[:LONGEST_SHOWN]}..."

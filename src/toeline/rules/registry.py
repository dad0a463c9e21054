"""The kinds of rules: those built in, those of installed packages, and those of the user's own files."""

import hashlib
import importlib
import importlib.util
import inspect
import math
import sys
import traceback
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from datetime import datetime
from importlib.metadata import EntryPoint, entry_points
from pathlib import Path
from types import ModuleType, SimpleNamespace
from typing import TypeVar

import numpy as np

from toeline.errors import RunError, ToelineError
from toeline.rules.base import Answer, CanalFacts, Present, Rule
from toeline.rules.gatekeeper_rounds import GatekeeperRounds
from toeline.rules.hold_discharge import HoldDischarge
from toeline.rules.hold_downstream_level import HoldDownstreamLevel
from toeline.rules.hold_upstream_level import HoldUpstreamLevel
from toeline.rules.hold_volume import HoldVolume
from toeline.rules.setting import Setting

Result = TypeVar("Result")

BUILT_IN: dict[str, type[Rule]] = {
    rule.kind: rule for rule in (HoldUpstreamLevel, HoldDownstreamLevel, HoldDischarge, GatekeeperRounds, HoldVolume)
}
ENTRY_POINTS = "toeline.rules"
"""Group of entry points in which an installed package announces rules, each under its kind."""


class UnknownRuleError(ValueError):
    """No such rule, or one that cannot be loaded: a sentence for the planner."""


@dataclass(frozen=True)
class FoundRule:
    """A kind of rule as a day file names it; `source` is the text of a file of somebody else's code that was run to
    make it, `file` where that is.

    What goes wrong in such code becomes an UnknownRuleError, or a RunError once the run has begun, with the place.
    """

    kind: str
    rule: type[Rule]
    file: str = ""
    source: str = ""

    def misfits(self, given: SimpleNamespace, canal: CanalFacts) -> list[tuple[str, str]]:
        """What the rule objects to; see `Rule.misfits`."""
        return self._run(UnknownRuleError, lambda: list(self.rule.misfits(given, canal)))

    def gate_of(self, given: SimpleNamespace, canal: CanalFacts) -> str | None:
        """The gate that the rule moves."""
        return self._run(UnknownRuleError, lambda: self.rule.gate_of(given, canal))

    def decision_times(self, given: SimpleNamespace, start: datetime, length_ms: int) -> np.ndarray:
        """When the rule decides; see `Rule.decision_times`."""
        return self._run(RunError, lambda: self.rule.decision_times(given, start, length_ms))

    def make(self, given: SimpleNamespace, canal: CanalFacts) -> Rule:
        """The rule of a run."""
        return self._run(RunError, lambda: self.rule(given, canal))

    def decide(self, rule: Rule, now: Present) -> float | None:
        """The opening [m] that the rule wants now."""
        opening = self._run(RunError, lambda: rule.decide(now))
        if opening is not None and not (isinstance(opening, (int, float)) and math.isfinite(opening)):
            raise RunError(f'rule "{self.kind}" wants an opening of {opening!r}; allowed: a number in m, or None')
        return opening

    def learn(self, rule: Rule, answer: Answer, ordered: float) -> None:
        """Tell the rule what became of its decision."""
        self._run(RunError, lambda: rule.learn(answer, ordered))

    def _run(self, kind_of_error: type[Exception], work: Callable[[], Result]) -> Result:
        if not self.file:
            return work()
        try:
            return work()
        except ToelineError:
            raise
        except Exception as error:
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
        return importlib.import_module(module)
    except Exception as error:
        raise UnknownRuleError(f"{module} cannot be loaded: {_words(error)}") from error


def _module_of_file(path: Path) -> ModuleType:
    try:
        source = path.read_bytes()
    except OSError as error:
        raise UnknownRuleError(f"{path} cannot be read: {(error.strerror or str(error)).lower()}") from error
    name = f"toeline_rules_of_{path.stem}_{hashlib.sha256(str(path).encode() + source).hexdigest()[:12]}"
    if name in sys.modules:
        return sys.modules[name]
    spec = importlib.util.spec_from_file_location(name, path)
    assert spec is not None  # it ends in .py
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[name] = module
    try:
        exec(compile(source, str(path), "exec"), module.__dict__)
    except Exception as error:
        del sys.modules[name]
        raise UnknownRuleError(f"{path} cannot be loaded: {_words(error)}") from error
    return module


def _of_module(kind: str, module: ModuleType, name: str, path: str = "") -> FoundRule:
    rule = getattr(module, name, None)
    file = path or str(module.__file__ or module.__name__)
    if not isinstance(rule, type) or not issubclass(rule, Rule):
        raise UnknownRuleError(f"{file} has no class {name} that derives from toeline.rules.Rule")
    if inspect.isabstract(rule):
        raise UnknownRuleError(f"{name} has no {' and no '.join(sorted(rule.__abstractmethods__))} in {file}")
    if not all(isinstance(setting, Setting) for setting in rule.settings.values()):
        raise UnknownRuleError(f"{name} in {file} has settings that are none; each is a toeline.rules.Setting")
    source = Path(file).read_text(encoding="utf-8", errors="replace") if module.__file__ else ""
    return FoundRule(kind, rule, file, source)


def _place(error: Exception, file: str) -> str:
    """The last line of the file on the way to an error, else the file."""
    lines = [frame.lineno for frame in traceback.extract_tb(error.__traceback__) if frame.filename == file]
    return f"{file}, line {lines[-1]}" if lines else file


def _words(error: Exception) -> str:
    line = f", line {error.lineno}" if isinstance(error, SyntaxError) else ""
    return f"{type(error).__name__}: {error.msg if isinstance(error, SyntaxError) else error}{line}"

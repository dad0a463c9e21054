"""Rules and stuck leaves of a plan, as read."""

from dataclasses import dataclass
from types import SimpleNamespace

from toeline.rules.registry import FoundRule


@dataclass(frozen=True, eq=False)
class RuleChoice:
    """A rule of a plan with its settings in SI; `file` and `line` say where it is written."""

    found: FoundRule
    given: SimpleNamespace
    file: str = ""
    line: int | None = None

    @property
    def kind(self) -> str:
        """The kind as written."""
        return self.found.kind


@dataclass(frozen=True)
class Stuck:
    """A gate, or a bay of it (from 1; 0 for all), that cannot be moved from a time until before another [ms from the
    start].
    """

    gate: str
    begin: int
    end: int
    bay: int = 0

    @property
    def place(self) -> str:
        """The gate, and the bay where it is one alone."""
        return f"{self.gate}, bay {self.bay}" if self.bay else self.gate

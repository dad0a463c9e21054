"""Everything that can go wrong on purpose, as one tree.

ToelineError            exit status 1
├── RunError            the run could not go on; what was written stays readable
└── UsageError          exit status 2: the request cannot be carried out as it stands
    └── ScenarioError   one or more faults in the input files, each with its place
"""

from dataclasses import dataclass


class ToelineError(Exception):
    """Base of all errors that Toeline raises for a reason a user can act on."""

    exit_status = 1


class RunError(ToelineError):
    """The simulation stopped before its end."""


class UsageError(ToelineError):
    """A command or a call that cannot be carried out as given."""

    exit_status = 2


@dataclass(frozen=True)
class Fault:
    """One fault in an input file.

    `message` says what is wrong with the value found and what is allowed, as one sentence.
    """

    file: str
    line: int | None
    key: str
    message: str

    def __str__(self) -> str:
        place = self.file if self.line is None else f"{self.file}:{self.line}"
        return f"{place}: {self.key}: {self.message}" if self.key else f"{place}: {self.message}"


class ScenarioError(UsageError):
    """All faults found in the input files, in file and line order."""

    def __init__(self, faults: list[Fault]):
        self.faults = sorted(faults, key=lambda f: (f.file, f.line or 0, f.key))
        super().__init__("\n".join(str(fault) for fault in self.faults))

"""What `toeline verify` finds: a day run again in other ways, the mass test, and the ramp test."""

from dataclasses import dataclass, field

import numpy as np
import xarray as xr

from toeline.findings.closure import Closure
from toeline.findings.incidents import Incident
from toeline.findings.movements import BoundCheck, JumpChange, Movement
from toeline.findings.ramp import RampPassage


@dataclass(frozen=True)
class Setting:
    """A setting of the period that a run changes, before and after, in SI."""

    name: str
    before: float
    after: float


@dataclass(frozen=True)
class Member:
    """The day run in another way, and how far its answer moves from that of the day as it is.

    `reason` says why there is no such run, and everything else is then empty.
    """

    name: str
    settings: tuple[Setting, ...]
    movements: tuple[Movement, ...] = ()
    jump_changes: tuple[JumpChange, ...] = ()
    incidents: tuple[Incident, ...] = ()
    closure: Closure | None = None
    reason: str = ""
    failed: bool = False

    @property
    def opening_moved(self) -> float:
        """How far apart a gate stood in both runs at most [m]: rules, and orders of a discharge, answer the levels."""
        moved = [m.largest.value for m in self.movements if m.quantity == "opening"]
        return float(np.nan_to_num(moved).max(initial=0.0))

    def movement(self, quantity: str, *, settling: bool) -> Movement:
        """How far a quantity moves in one kind of time."""
        return next(m for m in self.movements if (m.quantity, m.settling) == (quantity, settling))


@dataclass(frozen=True)
class Verification:
    """A day as it is (`run`), the other ways of running it, and both tests.

    Levels are held against `gauge_reading` [m], to which gauges are read. `ramp_reason` says why there is no ramp test,
    `ramp_failed` that it could not be solved to its end.
    """

    run: xr.Dataset = field(repr=False)
    gauge_reading: float
    members: tuple[Member, ...]
    incidents: tuple[Incident, ...]
    closure: Closure
    bound_checks: tuple[BoundCheck, ...]
    ramp: RampPassage | None
    ramp_reason: str = ""
    ramp_failed: bool = False

    @property
    def closures(self) -> dict[str, Closure]:
        """The mass test of every run by its name."""
        others = {member.name: member.closure for member in self.members if member.closure is not None}
        return {"as it is": self.closure} | others

    @property
    def is_within_tolerance(self) -> bool:
        """Whether both tests keep to their stated tolerances; a ramp test that could not be done is not counted."""
        closed = all(found.is_closed for found in self.closures.values())
        return closed and (self.ramp is None or self.ramp.is_passed)

    @property
    def has_failed(self) -> bool:
        """Whether a run could not be solved to its end."""
        return self.ramp_failed or any(member.failed for member in self.members)

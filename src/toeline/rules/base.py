"""What a rule is, what it may know of the canal, and what it sees when it decides."""

import math
from abc import ABC, abstractmethod
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from datetime import datetime
from enum import Enum
from functools import cached_property
from types import SimpleNamespace
from typing import ClassVar, Protocol

import numpy as np

from toeline.rules.decision_times import decision_times
from toeline.rules.setting import Setting

HEAD, TAIL = "head", "tail"
"""What stands in place of a pool at the two ends of the canal."""

LEAST_BACK_HEAD = 0.01
"""By how much the water below a gate stands higher when it is shut [m]: what a gauge is read to (choice)."""


@dataclass(frozen=True)
class GateFacts:
    """A gate: the pools beside it (HEAD or TAIL beyond the ends) and its greatest opening [m]."""

    upstream_pool: str
    downstream_pool: str
    max_opening: float


@dataclass(frozen=True)
class PoolFacts:
    """A pool: length [m], target level at its lower end [m] or None, and what the state at the start makes of it.

    `lead_times` [s] are those of a change of flow through the pool, "wave" and "volume"; `backed_up_area` [m²] is the
    area that fills when more comes in than goes out; `wave_admittance` [m²/s] is the change of discharge that a wave
    brings to the lower end, per metre of its height. NaN where the start gives none, as in a dry pool, and before a
    run.
    """

    length: float
    target_level: float | None
    lead_times: Mapping[str, float] = field(default_factory=lambda: {"wave": math.nan, "volume": math.nan})
    backed_up_area: float = math.nan
    wave_admittance: float = math.nan


@dataclass(frozen=True)
class OfftakeFacts:
    """An offtake: its pool, and where it stands, as a share of the pool's length."""

    pool: str
    share: float


@dataclass(frozen=True)
class CanalFacts:
    """Gates, pools and offtakes by name, gates and pools from the head down."""

    gates: Mapping[str, GateFacts]
    pools: Mapping[str, PoolFacts]
    offtakes: Mapping[str, OfftakeFacts]

    def pools_from(self, gate: str) -> list[str]:
        """The pools below a gate, from it down."""
        below, names = self.gates[gate].downstream_pool, list(self.pools)
        return names[names.index(below) :] if below in names else []

    def gate_above(self, pool: str) -> str | None:
        """The gate at the head of a pool, if any."""
        return next((name for name, gate in self.gates.items() if gate.downstream_pool == pool), None)

    def gate_below(self, pool: str) -> str | None:
        """The gate at the lower end of a pool, if any."""
        return next((name for name, gate in self.gates.items() if gate.upstream_pool == pool), None)


class Present(Protocol):
    """The canal at a decision, SI; levels above datum, discharges positive downstream.

    Discharges at other openings are those of the gate law at the present levels.
    """

    time_ms: int
    """From the start of the period."""

    def headwater_level(self, gate: str) -> float:
        """Level just above a gate [m]."""
        ...

    def tailwater_level(self, gate: str) -> float:
        """Level just below a gate [m]."""
        ...

    def opening(self, gate: str) -> float:
        """Where the leaf is [m]."""
        ...

    def ordered_opening(self, gate: str) -> float:
        """Where the leaf is, or is going to [m]."""
        ...

    def discharge(self, gate: str) -> float:
        """What passes the gate [m³/s]."""
        ...

    def discharge_at(self, gate: str, opening: float) -> float:
        """What would pass at an opening [m³/s]."""
        ...

    def opening_for(self, gate: str, discharge: float) -> float:
        """The opening that would pass a discharge [m]; closed or fully open where none does."""
        ...

    def head_level(self, pool: str) -> float:
        """Level at the upper end of a pool [m]."""
        ...

    def tail_level(self, pool: str) -> float:
        """Level at the lower end of a pool [m]."""
        ...

    def volume(self, pool: str) -> float:
        """Water in a pool [m³]."""
        ...

    def demand(self, offtake: str, time_ms: int) -> float:
        """What is known to be asked of an offtake at a time of the period [m³/s]; zero where nothing is."""
        ...


class Answer(Enum):
    """What became of an opening that a rule wanted."""

    moved = "moved"
    carried_over = "carried over"  # the move would be too small, or end where the leaf is held already
    limited = "limited"  # travel, the largest move, moves an hour or a stuck leaf stood in the way


class Rule(ABC):
    """Base of all rules. A rule moves one gate.

    `given` holds its settings as attributes, `canal` what is known of the canal, and `memory` all that it has to keep
    from one decision to the next, as numbers by name: it is stored with the state at the end of a run, so that the
    next day goes on as if there had been no break. `memory` is filled when the first decision comes, not before.
    """

    kind: ClassVar[str] = ""
    """How a day file names it, for rules that are named otherwise than by their class."""
    settings: ClassVar[Mapping[str, Setting]] = {}

    def __init__(self, given: SimpleNamespace, canal: CanalFacts):
        self.given, self.canal = given, canal
        self.memory: dict[str, float] = {}

    @classmethod
    def gate_of(cls, given: SimpleNamespace, canal: CanalFacts) -> str | None:
        """The gate that the rule moves, None where there is none such."""
        gate: str | None = given.gate
        return gate

    @classmethod
    def misfits(cls, given: SimpleNamespace, canal: CanalFacts) -> Iterator[tuple[str, str]]:
        """What is wrong between the settings and the canal: the key, and a sentence that says what is allowed."""
        return iter(())

    @classmethod
    def decision_times(cls, given: SimpleNamespace, start: datetime, length_ms: int) -> np.ndarray:
        """When to decide [ms from the start]: by the settings `every` or `visits`, within `hours`."""
        return decision_times(given, start, length_ms)

    @abstractmethod
    def decide(self, now: Present) -> float | None:
        """The opening [m] that the gate should have; None to leave it alone."""

    def learn(self, answer: Answer, ordered: float) -> None:  # noqa: B027
        """Called after `decide` gave an opening: what became of it, and the opening [m] that is ordered now."""

    def is_head_reversed(self, now: Present) -> bool:
        """Whether the water below the gate stands higher, so that opening it would let more come back."""
        return now.tailwater_level(self.gate) > now.headwater_level(self.gate)

    def against_back_flow(self, now: Present) -> float | None:
        """Closed, as soon as the water below stands higher by what a gauge is read to; None until then, and where the
        gate is closed. Where it stood before stays in `memory` as "shut_from", for `standing_opening`.
        """
        ordered = now.ordered_opening(self.gate)
        if ordered == 0.0 or now.tailwater_level(self.gate) - now.headwater_level(self.gate) < LEAST_BACK_HEAD:
            return None
        self.memory.setdefault("shut_from", ordered)
        return 0.0

    def standing_opening(self, now: Present) -> float:
        """The opening ordered [m]; of a gate that is shut against back flow, that which it had before."""
        ordered = now.ordered_opening(self.gate)
        if ordered > 0.0:
            self.memory.pop("shut_from", None)
        return self.memory.get("shut_from", ordered)

    @cached_property
    def gate(self) -> str:
        """The gate that the rule moves."""
        name = self.gate_of(self.given, self.canal)
        assert name is not None  # settings are checked against the canal before a rule is made
        return name

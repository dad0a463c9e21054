"""Orders to gates."""

from dataclasses import dataclass
from typing import Literal

OrderKind = Literal["opening", "by", "discharge"]


@dataclass(frozen=True)
class Order:
    """One order: at a time [ms from the start], a gate is to have an opening [m], change it by so much [m],
    or take the opening that passes a discharge [m³/s] then; `bay` from 1, 0 for all bays. `file` and `line` say where
    it is written.
    """

    at: int
    gate: str
    kind: OrderKind
    value: float
    file: str = ""
    line: int | None = None
    bay: int = 0

"""One figure that tells how well a run went, to be laid beside that of another run."""

from dataclasses import dataclass
from typing import Literal

Better = Literal["lower", "higher", "none"]


@dataclass(frozen=True)
class Indicator:
    """A figure of a run by its name and place; `where` is "" for the whole canal.

    `better` says which way is the wish of planners, "none" where neither is. A figure that is better is no safer.
    """

    name: str
    where: str
    value: float
    unit: str
    better: Better
    note: str = ""

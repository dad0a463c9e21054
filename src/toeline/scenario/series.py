"""Values that change during the day."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

SeriesShape = Literal["lines", "steps"]


@dataclass(frozen=True, eq=False)
class Series:
    """Values in SI at times in ms from the start of the period, strictly increasing.

    Between two times the value is on the straight line ("lines") or still the earlier one ("steps").
    Before the first time it is the first value, after the last the last.
    """

    times: NDArray[np.int64]
    values: NDArray[np.float64]
    shape: SeriesShape

    def at(self, ms: int) -> float:
        """Give the value at a time [ms from the start]; at a step it is the new value."""
        if self.values.size == 1:
            return float(self.values[0])
        if self.shape == "lines":
            return float(np.interp(ms, self.times, self.values))
        index = int(np.searchsorted(self.times, ms, side="right")) - 1
        return float(self.values[max(index, 0)])


def constant(value: float) -> Series:
    """Give the series that never changes."""
    return Series(np.zeros(1, dtype=np.int64), np.array([value]), "steps")

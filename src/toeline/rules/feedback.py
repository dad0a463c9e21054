"""Proportional-integral feedback with a dead band, and the gains that a rule takes where none are given."""

import math
from typing import NamedTuple

from toeline.rules.base import Answer

DETUNING = 4.0
"""Reset time over the sum of closed-loop time and delay (Skogestad 2003, for integrating processes; from memory)."""

ROUND_TRIPS, INTERVALS = 1.0, 4.0
"""Least closed-loop time of a pool in its wave round trips, and in decision intervals (choice)."""


class Gains(NamedTuple):
    """`proportional` [wanted quantity per unit of error] and `reset` [s], the time in which a lasting error is added
    once more; infinite without an integral part.
    """

    proportional: float
    reset: float


def gains_of_pool(area: float, delay: float, round_trip: float, every: float) -> Gains:
    """Discharge per level error [m²/s] and reset time [s] for a pool that stores on an area [m²] what comes after a
    delay [s].

    A/(T + τ) and 4(T + τ) with the closed-loop time T (Skogestad 2003, from memory): at least the delay, one wave round
    trip of the pool and four decision intervals (choice), so that a rule does not hunt.
    """
    closed_loop = max(delay, ROUND_TRIPS * round_trip, INTERVALS * every)
    return Gains(area / (closed_loop + delay), DETUNING * (closed_loop + delay))


class Feedback:
    """A quantity (an opening or a discharge) that follows an error: base + gain · error, the base moved by
    gain · error · interval / reset at every decision at which the error lies outside the dead band.

    Everything it keeps is in `memory`: "base", and "ordered", the opening that was ordered after the last decision.
    """

    def __init__(self, memory: dict[str, float], band: float, every: float):
        self.memory, self.band, self.every = memory, band, every
        self.step = 0.0

    def is_new(self, ordered: float) -> bool:
        """Whether the opening that is ordered [m] is not the one that the last decision left: it is the first decision,
        or somebody else has moved the gate.
        """
        return self.memory.get("ordered", math.nan) != ordered

    def start(self, quantity: float, error: float, gains: Gains) -> None:
        """Go on without a bump from the quantity as it is."""
        self.memory["base"] = quantity - gains.proportional * error

    def shift(self, change: float) -> None:
        """Move the base, as feedforward does."""
        self.memory["base"] += change

    def wanted(self, error: float, gains: Gains, is_pressed: bool = False) -> float | None:
        """The quantity that the error calls for; inside the dead band None, unless the rule is pressed to move all the
        same.
        """
        is_off = abs(error) > self.band
        self.step = gains.proportional * error * self.every / gains.reset if is_off else 0.0
        self.memory["base"] += self.step
        return self.memory["base"] + gains.proportional * error if is_off or is_pressed else None

    def learn(self, answer: Answer, ordered: float) -> None:
        """Keep the base from winding up while something stands in the way."""
        if answer is Answer.limited:
            self.memory["base"] -= self.step
        self.memory["ordered"] = ordered

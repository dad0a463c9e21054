"""Proportional-integral feedback with a dead band, and the gains that a rule takes where none are given."""

import math
from typing import NamedTuple

DETUNING = 4.0
"""Reset time over the sum of closed-loop time and delay (Skogestad 2003, for integrating processes; from memory)."""

SHARE_OF_ADMITTANCE, INTERVALS = 0.5, 4.0
"""Most gain in shares of the wave admittance of the pool, and least closed-loop time in decision intervals (choice)."""


class Gains(NamedTuple):
    """`proportional` [wanted quantity per unit of error] and `reset` [s], the time in which a lasting error is added
    once more; infinite without an integral part.
    """

    proportional: float
    reset: float


def gains_of_pool(area: float, delay: float, wave_admittance: float, every: float) -> Gains:
    """Discharge per level error [m²/s] and reset time [s] for a pool that stores on an area [m²] what comes after a
    delay [s], where decisions fall every so often [s].

    A/(T + τ) and 4(T + τ) with the closed-loop time T (Skogestad 2003, from memory): at least the delay, four decision
    intervals, and such that the gain stays below half of T_s(C − V) [m²/s], which is as far as the pool's own waves let
    it go (their peak gain is 1/(T_s(C − V)), Clemmens et al. 2015, second-hand). The numbers four and half are choices.
    """
    closed_loop = max(delay, area / (SHARE_OF_ADMITTANCE * wave_admittance), INTERVALS * every)
    return Gains(area / (closed_loop + delay), DETUNING * (closed_loop + delay))


class Feedback:
    """A quantity (an opening or a discharge) that follows what of an error lies beyond its dead band: base +
    gain · error, the base moved by gain · error · interval / reset at every decision.

    Counted from the edge of the band the gate goes back gently as the level comes in; counted from the target it would
    jump by the whole band at every edge, and hunt between the two. Everything it keeps is in `memory`: "base", and
    "ordered", the opening that was ordered after the last decision.
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
        self.memory["base"] = quantity - gains.proportional * self._beyond(error)

    def shift(self, change: float) -> None:
        """Move the base, as feedforward does."""
        self.memory["base"] += change

    def wanted(self, error: float, gains: Gains, is_pressed: bool = False) -> float | None:
        """The quantity that the error calls for; inside the dead band None, unless the rule is pressed to move all the
        same.
        """
        beyond = self._beyond(error)
        self.step = gains.proportional * beyond * self.every / gains.reset
        self.memory["base"] += self.step
        return self.memory["base"] + gains.proportional * beyond if beyond != 0.0 or is_pressed else None

    def learn(self, ordered: float, lacking: float) -> None:
        """Keep the base from winding up while something stands in the way: it is not moved further towards what is
        still `lacking`, only back.
        """
        if self.step * lacking > 0.0:
            self.memory["base"] -= self.step
        self.memory["ordered"] = ordered

    def _beyond(self, error: float) -> float:
        return math.copysign(max(abs(error) - self.band, 0.0), error)

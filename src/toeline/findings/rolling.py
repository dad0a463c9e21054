"""Rolling windows: the largest fall, and the most of what adds up, in any window of a length, whenever it begins.

Between output steps a series is taken as linear. What is found is exact for such a series: a window may begin and end
between steps. What happened between two steps and was over at the second is not in the series; `every` of the day
file bounds it.
"""

import numpy as np


class RollingWindow:
    """Windows of one length over the steps of a run, each told by its end; at the start of the run they are shorter.

    What a window holds changes its course where its end or its beginning meets a step. `times` are the ends at which
    that happens: all extremes are among them, and between two of them a sum is linear.
    """

    def __init__(self, times: np.ndarray, seconds: float):
        """`times` are those of the output steps (datetime64, increasing)."""
        self._steps = _nanoseconds(times)
        self._length = round(seconds * 1e9)
        later = self._steps + self._length
        self._ends = np.union1d(self._steps, later[later <= self._steps[-1:].max(initial=0)])
        self._first = np.searchsorted(self._steps, self._ends - self._length)
        self._last = np.searchsorted(self._steps, self._ends, side="right") - 1

    @property
    def times(self) -> np.ndarray:
        """Ends of windows (datetime64)."""
        return _instants(self._ends)

    def sums(self, totals: np.ndarray) -> np.ndarray:
        """The growth of a running total, given by step, in every window."""
        return self._at(totals, self._ends) - self._at(totals, self._beginnings(self._ends))

    def falls(self, levels: np.ndarray) -> np.ndarray:
        """The largest fall inside every window, from any time in it to its end; levels are given by step."""
        now = self._at(levels, self._ends)
        highest = np.maximum(self._at(levels, self._beginnings(self._ends)), self._highest_step(levels))
        return np.maximum(highest - now, 0.0)

    def corners(self, levels: np.ndarray, falls: np.ndarray, limit: float) -> tuple[np.ndarray, np.ndarray]:
        """Times and falls once more, with those between that make the fall linear wherever it passes a limit > 0.

        From one end to the next the fall is the greater of two lines, counted from the beginning of the window and
        from the highest step within; where these cross, or come to nothing, a corner is added.
        """
        passes = np.flatnonzero(np.maximum(falls[:-1], falls[1:]) > limit)
        start, end = self._ends[passes], self._ends[passes + 1]
        inside = self._highest_between(levels, self._first[passes + 1], self._last[passes])
        now = np.stack([self._at(levels, start), self._at(levels, end)])
        begun = np.stack([self._at(levels, self._beginnings(at)) for at in (start, end)])
        shares = [_zero(*(begun - inside)), _zero(*(begun - now)), _zero(*(inside - now))]
        added, values = [self._ends], [falls]
        for share in shares:
            is_inside = np.isfinite(share)
            part = share[is_inside]
            line = [pair[0] + part * (pair[1] - pair[0]) for pair in (begun[:, is_inside], now[:, is_inside])]
            added.append(start[is_inside] + np.round(part * (end - start)[is_inside]).astype(np.int64))
            values.append(np.maximum(np.maximum(line[0], inside[is_inside]) - line[1], 0.0))
        ends, order = np.unique(np.concatenate(added), return_index=True)
        return _instants(ends), np.concatenate(values)[order]

    def _beginnings(self, ends: np.ndarray) -> np.ndarray:
        return np.maximum(ends - self._length, self._steps[0])

    def _at(self, values: np.ndarray, instants: np.ndarray) -> np.ndarray:
        origin = self._steps[0]
        return np.interp(instants - origin, self._steps - origin, values)

    def _highest_step(self, levels: np.ndarray) -> np.ndarray:
        return self._highest_between(levels, self._first, self._last)

    @staticmethod
    def _highest_between(levels: np.ndarray, first: np.ndarray, last: np.ndarray) -> np.ndarray:
        """The highest of the steps from first to last, both included; where there is none, a value below all levels.

        Every range is covered by two of a length that is a power of 2; the highest of these are made by doubling.
        """
        highest = np.full(first.size, levels.min() - 1.0)
        count = last - first + 1
        power = np.frexp(np.maximum(count, 1))[1] - 1
        blocks = levels
        for k in range(int(power.max(initial=0)) + 1):
            of_size = np.flatnonzero((power == k) & (count > 0))
            if of_size.size:
                beginning, end = first[of_size], last[of_size] - (1 << k) + 1
                highest[of_size] = np.maximum(blocks[beginning], blocks[end])
            blocks = np.maximum(blocks[: -(1 << k)], blocks[1 << k :]) if blocks.size > 1 << k else blocks
        return highest


def _zero(start: np.ndarray, end: np.ndarray) -> np.ndarray:
    """At which share from start to end lines run through zero, strictly inside; NaN where they do not."""
    crosses = start * end < 0.0
    return np.where(crosses, start / np.where(crosses, start - end, 1.0), np.nan)


def _nanoseconds(times: np.ndarray) -> np.ndarray:
    whole: np.ndarray = times.astype("datetime64[ns]").astype(np.int64)
    return whole


def _instants(nanoseconds: np.ndarray) -> np.ndarray:
    instants: np.ndarray = nanoseconds.astype("datetime64[ns]")
    return instants

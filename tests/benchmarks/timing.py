"""Sides of a comparison timed in turn, so that a busy machine slows all alike."""

import time
from collections.abc import Callable
from statistics import median


def seconds(work: Callable[[], object]) -> float:
    """Processor time of a piece of work [s]."""
    began = time.process_time()
    work()
    return time.process_time() - began


def alternated(sides: dict[str, Callable[[], object]], repeats: int) -> dict[str, list[float]]:
    """Processor times [s] of every side, which take turns; each was called before, so that it is compiled."""
    times: dict[str, list[float]] = {name: [] for name in sides}
    for _ in range(repeats):
        for name, work in sides.items():
            times[name].append(seconds(work))
    return times


def show(what: str, times: list[float], over: float) -> None:
    """One row: median and spread [s], and the ratio of the median to another."""
    low, high = min(times), max(times)
    print(f"{what:<58}{median(times):9.4f} s  {low:.4f} to {high:.4f}  {median(times) / over:8.2f} x")

"""What writing the file takes of a run."""

import sys
import time
from pathlib import Path
from statistics import median
from typing import Any
from unittest.mock import patch

from tests.benchmarks.growth import busy_days
from tests.benchmarks.timing import seconds
from tests.canals import scenario_of, standard_day

from toeline import simulate
from toeline.results.netcdf_writer import NetcdfSink
from toeline.scenario import Scenario

REPEATS = 7


class TimedSink(NetcdfSink):
    """Adds up the processor time [s] that it takes."""

    taken = 0.0

    def __init__(self, *given: Any, **named: Any):
        self._timed(lambda: NetcdfSink.__init__(self, *given, **named))

    def write(self, block: Any) -> None:
        self._timed(lambda: NetcdfSink.write(self, block))

    def close(self, *given: Any) -> None:
        self._timed(lambda: NetcdfSink.close(self, *given))

    @staticmethod
    def _timed(work: Any) -> None:
        began = time.process_time()
        work()
        TimedSink.taken += time.process_time() - began


def time_the_writer(folder: Path) -> None:
    print("writer: processor time inside it, of a run from the scenario to the file")
    for what, scenario in (
        ("standard day", scenario_of(folder, *standard_day())),
        ("ten days", scenario_of(folder, *busy_days(10, 10), name="ten_days")),
    ):
        written = folder / "written.nc"
        shares, rates = zip(*(share_and_rate(scenario, written) for _ in range(REPEATS)), strict=True)
        size = written.stat().st_size / 1e6
        print(
            f"{what:<30}{median(shares):7.1%} ({min(shares):.1%} to {max(shares):.1%}), {size:.2f} MB at "
            f"{median(rates):.1f} MB/s ({min(rates):.1f} to {max(rates):.1f})"
        )


def share_and_rate(scenario: Scenario, path: Path) -> tuple[float, float]:
    """Share of the run that is writing, and MB of the file a second of writing."""
    TimedSink.taken = 0.0
    with patch.object(sys.modules["toeline.simulate"], "NetcdfSink", TimedSink):
        whole = seconds(lambda: simulate(scenario, path, overwrite=True).close())
    return TimedSink.taken / whole, path.stat().st_size / 1e6 / TimedSink.taken

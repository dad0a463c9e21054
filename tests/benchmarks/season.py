"""A season in one process, its page at the end: seconds and peak memory of 30, 90 and 180 days, each in its own.

python -m tests.benchmarks.season
"""

import json
import resource
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from tests.canals import scenario_of
from tests.seasons import season

from toeline import simulate
from toeline.report.run_summary import run_summary

DAYS = (30, 90, 180)
ONE_DAY = 1
"""Run before, so that nothing is compiled while the clock runs."""


def run_season(days: int, folder: Path) -> dict[str, float]:
    """Step a season and write its page; seconds of wall and processor time, peak memory and size of the file [MB]."""
    began, worked = time.perf_counter(), time.process_time()
    scenario = scenario_of(folder, *season(days))
    with simulate(scenario, folder / "season.nc", overwrite=True) as run:
        stepped, stepped_peak = time.perf_counter() - began, _peak()
        run_summary(run, scenario.display)
        rows = run.sizes["time"]
    return {
        "stepped": stepped,
        "whole": time.perf_counter() - began,
        "processor": time.process_time() - worked,
        "stepped_peak": stepped_peak,
        "peak": _peak(),
        "rows": rows,
        "file": (folder / "season.nc").stat().st_size / 1e6,
    }


def _peak() -> float:
    """Peak memory of this process [MB]; Linux counts it in kB."""
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1e3


def _in_a_process(days: int, folder: Path) -> dict[str, float]:
    command = [sys.executable, "-m", "tests.benchmarks.season", str(days), str(folder)]
    found: dict[str, float] = json.loads(subprocess.run(command, check=True, capture_output=True, text=True).stdout)
    return found


def time_the_pages(folder: Path) -> None:
    """Print the table."""
    _in_a_process(ONE_DAY, folder)
    print("season of 20 pools, thinned but around events: wall time of stepping, and with the page; processor time;")
    print("peak memory before and with the page")
    print(f"{'days':>6}{'stepped':>10}{'page':>10}{'processor':>12}{'peak':>10}{'page':>9}{'rows':>9}{'file':>10}")
    for days in DAYS:
        one = _in_a_process(days, folder)
        print(
            f"{days:>6}{one['stepped']:>8.1f} s{one['whole']:>8.1f} s{one['processor']:>10.1f} s"
            f"{one['stepped_peak']:>7.0f} MB{one['peak']:>6.0f} MB{one['rows']:>9.0f}{one['file']:>7.0f} MB"
        )


def main() -> None:
    """The table alone."""
    with tempfile.TemporaryDirectory() as folder:
        time_the_pages(Path(folder))


if __name__ == "__main__":
    if len(sys.argv) > 1:
        print(json.dumps(run_season(int(sys.argv[1]), Path(sys.argv[2]))))
    else:
        main()

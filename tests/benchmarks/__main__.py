"""Speed, measured as ratios in one run: `python -m tests.benchmarks`, or with the names of some benchmarks."""

import sys
import tempfile
from collections.abc import Callable
from pathlib import Path

from tests.benchmarks.command import tell_imports, time_the_command
from tests.benchmarks.growth import tell_memory, time_growth, time_the_season
from tests.benchmarks.page import time_the_page
from tests.benchmarks.rules import time_the_rules
from tests.benchmarks.season import time_the_pages, time_the_reading
from tests.benchmarks.standard_day import time_the_day, time_the_full_equations, time_the_integrator
from tests.benchmarks.writer import time_the_writer

BENCHMARKS: dict[str, Callable[[Path], None]] = {
    "day": time_the_day,
    "integrator": time_the_integrator,
    "full": time_the_full_equations,
    "growth": time_growth,
    "memory": tell_memory,
    "season": time_the_season,
    "season page": time_the_pages,
    "season commands": time_the_reading,
    "writer": time_the_writer,
    "rules": time_the_rules,
    "command": time_the_command,
    "imports": tell_imports,
    "page": time_the_page,
}


def main(names: list[str]) -> None:
    unknown = set(names) - set(BENCHMARKS)
    if unknown:
        sys.exit(f"no benchmark {', '.join(sorted(unknown))}; there are {', '.join(BENCHMARKS)}")
    for name in names or BENCHMARKS:
        with tempfile.TemporaryDirectory() as folder:
            BENCHMARKS[name](Path(folder))
        print(flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])

"""The command from the shell, and what it imports."""

import os
import subprocess
import sys
import time
from collections import Counter
from pathlib import Path
from statistics import median

from tests.benchmarks.timing import show

DEMO = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"
SHOWN = 8
"""Packages named, those that take longest."""


def time_the_command(folder: Path) -> None:
    run_it = ("run", str(DEMO), "--plan", "early", "--overwrite", "-o", str(folder / "demo.nc"))
    first = wall(*run_it, environment=os.environ | {"TOELINE_CACHE_DIR": str(folder / "cache")})
    wall(*run_it)
    help_times, run_times = [wall("--help") for _ in range(7)], [wall(*run_it) for _ in range(5)]
    compare_times = [wall("compare", str(DEMO)) for _ in range(5)]
    verify_times = [wall("verify", str(DEMO), "--plan", "early") for _ in range(5)]
    print("command, wall time")
    show("toeline --help", help_times, median(run_times))
    show("toeline run of the demo day", run_times, median(run_times))
    show("toeline compare of its two plans", compare_times, median(run_times))
    show("toeline verify of the demo day", verify_times, median(run_times))
    show("the run, first ever (compiles)", [first], median(run_times))


def wall(*command: str, environment: dict[str, str] | None = None) -> float:
    """Wall time of a command [s]."""
    began = time.perf_counter()
    subprocess.run([sys.executable, "-m", "toeline", *command], check=True, capture_output=True, env=environment)
    return time.perf_counter() - began


def tell_imports(folder: Path) -> None:
    """Time that imports take, by package; the interpreter counts slower than it imports."""
    run_it = ("run", str(DEMO), "--plan", "early", "--overwrite", "-o", str(folder / "demo.nc"))
    wall(*run_it)
    print("imports, time inside the modules of each package")
    for what, command in (("toeline --help", ("--help",)), ("toeline run of the demo day", run_it)):
        taken = import_times(*command)
        rows = ", ".join(f"{name} {1000.0 * spent:.0f} ms" for name, spent in taken.most_common(SHOWN))
        print(f"{what}: {1000.0 * sum(taken.values()):.0f} ms: {rows}")


def import_times(*command: str) -> Counter[str]:
    """Seconds spent in importing the modules of each package, without what they import."""
    full = [sys.executable, "-X", "importtime", "-m", "toeline", *command]
    lines = subprocess.run(full, check=True, capture_output=True, text=True).stderr.splitlines()
    taken: Counter[str] = Counter()
    for line in lines:
        cells = line.removeprefix("import time:").split("|")
        if len(cells) == 3 and cells[0].strip().isdigit():
            taken[cells[2].strip().split(".")[0]] += int(cells[0]) / 1e6
    return taken

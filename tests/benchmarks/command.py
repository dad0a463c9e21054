"""The command from the shell, and what it imports."""

import os
import resource
import subprocess
import sys
import time
from collections import Counter
from pathlib import Path
from statistics import median

from tests.benchmarks.timing import show

DEMO = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"
REPEATS = 5
SHOWN = 8
"""Packages named, those that take longest."""


def time_the_command(folder: Path) -> None:
    """Wall time of commands, and the processor time in it: what they would take on a machine of their own."""
    run_it = ("run", str(DEMO), "--plan", "early", "--overwrite", "-o", str(folder / "demo.nc"))
    first = took(*run_it, environment=os.environ | {"TOELINE_CACHE_DIR": str(folder / "cache")})
    took(*run_it)
    commands = {
        "toeline --help": ("--help",),
        "toeline run of the demo day": run_it,
        "toeline compare of its two plans": ("compare", str(DEMO)),
        "toeline verify of the demo day": ("verify", str(DEMO), "--plan", "early"),
    }
    times = {what: [took(*command) for _ in range(REPEATS)] for what, command in commands.items()}
    times["the run, first ever (compiles)"] = [first]
    over = median(wall for wall, _ in times["toeline run of the demo day"])
    print("command, wall time, and processor time below")
    for what, pairs in times.items():
        walls, processors = (list(column) for column in zip(*pairs, strict=True))
        show(what, walls, over)
        show("", processors, over)


def took(*command: str, environment: dict[str, str] | None = None) -> tuple[float, float]:
    """Wall and processor time of a command [s]."""
    began, before = time.perf_counter(), resource.getrusage(resource.RUSAGE_CHILDREN)
    subprocess.run([sys.executable, "-m", "toeline", *command], check=True, capture_output=True, env=environment)
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    processor = after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime
    return time.perf_counter() - began, processor


def tell_imports(folder: Path) -> None:
    """Time that imports take, by package; the interpreter counts slower than it imports."""
    run_it = ("run", str(DEMO), "--plan", "early", "--overwrite", "-o", str(folder / "demo.nc"))
    took(*run_it)
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

"""Standard day against a stripped kernel and under rules, the command from the shell, the page; medians, spreads."""

import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Sequence
from pathlib import Path
from statistics import median

from tests.benchmarks.page import time_the_page
from tests.benchmarks.stripped_kernel import prepared, solve_many
from tests.canals import scenario_of, standard_day

from toeline.engine.run import Run
from toeline.network.build import network_of
from toeline.network.start import starting_state
from toeline.network.timetable import timetable_of

REPEATS = 15
DEMO = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"


class NoSink:
    """Takes output and forgets it."""

    def write(self, block) -> None:
        pass


class Day:
    """The standard day, ready to be stepped again and again; `quiet` leaves all output but the last row out, `rules`
    stand beside its orders.
    """

    def __init__(self, folder: Path, quiet: bool, rules: Sequence[dict] = ()):
        canal, day = standard_day()
        day["plans"]["only"]["rules"] = list(rules)
        day["output"] = {"every": "24 h", "profiles_every": "24 h"} if quiet else day["output"]
        scenario = scenario_of(folder, canal, day)
        self.network = network_of(scenario.canal, scenario.day.period.spacing)
        self.timetable = timetable_of(scenario, self.network)
        self.start = starting_state(scenario, self.network, self.timetable)

    def step(self) -> Run:
        run = Run(self.network, self.timetable, NoSink(), self.start)
        run.go()
        return run


def seconds(work: Callable[[], object]) -> float:
    began = time.process_time()
    work()
    return time.process_time() - began


def wall(*command: str) -> float:
    began = time.perf_counter()
    subprocess.run([sys.executable, "-m", "toeline", *command], check=True, capture_output=True)
    return time.perf_counter() - began


def show(what: str, times: list[float], over: float) -> None:
    low, high = min(times), max(times)
    print(f"{what:<52}{median(times):9.4f} s  {low:.4f} to {high:.4f}  {median(times) / over:7.2f} x")


def time_the_day(folder: Path) -> None:
    loud, quiet = Day(folder, quiet=False), Day(folder, quiet=True)
    run = loud.step()
    quiet.step()
    solves = int(run.pace.solves[0])
    kernel = prepared(loud.network, loud.start.level)
    solve_many(*kernel, 1)
    times: dict[str, list[float]] = {"kernel": [], "quiet": [], "loud": []}
    for _ in range(REPEATS):
        times["kernel"].append(seconds(lambda: solve_many(*kernel, solves)))
        times["quiet"].append(seconds(quiet.step))
        times["loud"].append(seconds(loud.step))
    over = median(times["kernel"])
    print(
        f"standard day: {run.network.node_count} nodes, {int(run.pace.steps[0])} steps, {solves} solves; processor time"
    )
    show("stripped kernel, as many solves", times["kernel"], over)
    show("day without output", times["quiet"], over)
    show("day with output every minute and near-gate pass", times["loud"], over)


def time_the_rules(folder: Path) -> None:
    print("rules on ten gates every 5 min: processor time inside them, over that of the whole day")
    kinds: dict[str, dict] = {"hold upstream level": {}, "hold discharge": {"target": 8.0}}
    for kind, keys in kinds.items():
        day = Day(folder, False, [{"kind": kind, "gate": f"G{k}", "every": "5 min", **keys} for k in range(10)])
        shares = [share_of_rules(day) for _ in range(REPEATS + 1)][1:]
        print(f"{kind:<52}{median(shares):9.1%}    {min(shares):.1%} to {max(shares):.1%}")


def share_of_rules(day: Day) -> float:
    """Time that deciding and moving the gates takes of a run; in one run, so that a busy machine slows both."""
    run = Run(day.network, day.timetable, NoSink(), day.start)
    decide, inside = run.operations.decisions.act, []
    run.operations.decisions.act = lambda *given: inside.append(seconds(lambda: decide(*given)))
    whole = seconds(run.go)
    return sum(inside) / whole


def time_the_command(folder: Path) -> None:
    run_it = ("run", str(DEMO), "--plan", "early", "--overwrite", "-o", str(folder / "demo.nc"))
    fresh = os.environ | {"TOELINE_CACHE_DIR": str(folder / "cache")}
    began = time.perf_counter()
    subprocess.run([sys.executable, "-m", "toeline", *run_it], check=True, capture_output=True, env=fresh)
    first = time.perf_counter() - began
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


def main() -> None:
    with tempfile.TemporaryDirectory() as folder:
        time_the_day(Path(folder))
        time_the_rules(Path(folder))
        time_the_command(Path(folder))
        time_the_page(Path(folder))


if __name__ == "__main__":
    main()

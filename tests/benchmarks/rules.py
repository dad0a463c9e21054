"""What rules take of a day."""

from pathlib import Path
from statistics import median

from tests.benchmarks.canal_day import CanalDay, NoSink, standard
from tests.benchmarks.timing import seconds

from toeline.engine.run import Run

REPEATS = 15
KINDS: dict[str, dict[str, float]] = {"hold upstream level": {}, "hold discharge": {"target": 8.0}}


def time_the_rules(folder: Path) -> None:
    print("rules on ten gates every 5 min: processor time inside them, over that of the whole day")
    for kind, keys in KINDS.items():
        rules = [{"kind": kind, "gate": f"G{k}", "every": "5 min", **keys} for k in range(10)]
        day = standard(folder, rules=rules)
        shares = [share_of_rules(day) for _ in range(REPEATS + 1)][1:]
        print(f"{kind:<58}{median(shares):9.1%}    {min(shares):.1%} to {max(shares):.1%}")


def share_of_rules(day: CanalDay) -> float:
    """Time that deciding and moving the gates takes of a run; in one run, so that a busy machine slows both."""
    run = Run(day.network, day.timetable, NoSink(), day.start)
    decide, inside = run.operations.decisions.act, []
    run.operations.decisions.act = lambda *given: inside.append(seconds(lambda: decide(*given)))
    whole = seconds(run.go)
    return sum(inside) / whole

"""A day in which everything moves that a checkpoint has to keep; run as a program it steps it, telling how far it is.

python stopped_days.py FOLDER
"""

import itertools
import sys
from pathlib import Path

from tests.canals import Table, day, order, scenario_of, stepped_canal

from toeline import simulate
from toeline.results.netcdf_writer import NetcdfSink
from toeline.scenario import Scenario

RULES = [
    {"kind": "hold downstream level", "gate": "G0", "feedforward": "volume"},
    {"kind": "hold upstream level", "gate": "G1", "every": "7 min"},
]
ORDERS = [
    order("02:30", "G2", by=0.10),
    {"at": "05:58", "gate": "G2", "bay": 2, "by": 0.20},
    order("06:01", "G2", by=-0.10),  # replaces the one before
    order("09:15", "G2", opening=0.30),
]
TAKES = [
    {"name": "T0", "pool": "P1", "chainage": 700.0, "kind": "orifice", "sill_level": 1.2, "width": 0.5, "opening": 0.3},
    {"name": "T1", "pool": "P1", "chainage": 1400.0, "kind": "demand"},
]
CANAL: Table = {
    "offtakes": TAKES,
    "escapes": [{"name": "E0", "pool": "P0", "chainage": 1400.0, "crest_level": 3.35, "length": 10.0}],
    "losses": {"seepage": "300 mm/day", "evaporation": "8 mm/day"},
    "roughness_calendar": [{"from": "05-01", "factor": 1.3}, {"from": "05-05", "factor": 1.1}],
}


def full_day(folder: Path, *, local_inertia: bool = False, **output: str) -> Scenario:
    """30 h over a midnight at which the roughness changes, with rules beside orders, a ramp, escapes and losses."""
    keys = day(
        {"shape": "lines", "values": [["+0 h", 8.0], ["+5 h", 8.0], ["+7 h", 11.0], ["+20 h", 7.0]]},
        length="30 h", period={"local_inertia": local_inertia}, output=output,
        deliveries={"T1": [["+0 h", 0.2], ["+8 h", 0.5]]},
        plans={"only": {"rules": RULES, "orders": ORDERS}},
    )  # fmt: skip
    gate = {"moves_per_hour": 3, "separate_bays": True}
    return scenario_of(folder, stepped_canal(3, 1500.0, gate=gate, **CANAL), keys)


def copies_by_count(stops: int = 25) -> property:
    """Stands for `NetcdfSink.is_copy_due`: a checkpoint at every so many stops, however fast the machine."""
    calls = itertools.count()
    return property(lambda sink: next(calls) % stops == 0)


if __name__ == "__main__":
    NetcdfSink.is_copy_due = copies_by_count()  # type: ignore[method-assign]
    folder = Path(sys.argv[1])
    simulate(
        full_day(folder, every="10 min", events_every="1 min"), folder / "day.nc", resume=True,
        progress=lambda fraction: print(fraction, flush=True),
    ).close()  # fmt: skip

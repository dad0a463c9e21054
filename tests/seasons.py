"""An invented irrigation season: as long as is asked, orders every day, deliveries in turn, weeds that grow."""

import numpy as np
from tests.canals import Table, day, stepped_canal

POOLS = 20
SPARING = {"every": "15 min", "events_every": "1 min", "events_within": "15 min", "profiles_every": "1 h"}
"""Output of a season: every quarter of an hour, and every minute around events."""
EVERY_MINUTE = {"every": "1 min"}
"""What makes it a season without thinning."""


def season(days: int, move: float = 0.04, **output: str) -> tuple[Table, Table]:
    """Twenty pools of 4 km over so many days, their gates moved by so much [m]: canal and day file."""
    takes = [{"name": f"T{k}", "pool": f"P{k}", "chainage": 3000.0, "kind": "demand"} for k in range(POOLS)]
    escapes = [
        {"name": f"E{k}", "pool": f"P{k}", "chainage": 3900.0, "crest_level": _bed_at_end(k) + 2.7, "length": 8.0}
        for k in range(0, POOLS, 5)
    ]
    calendar = [{"from": f"{5 + k // 2:02d}-{1 + 15 * (k % 2):02d}", "factor": 1.0 + 0.03 * k} for k in range(10)]
    limits = [
        {"kind": "fall", "pools": "all", "limit": 0.3, "window": "1 h", "source": "standing orders"},
        {"kind": "above", "pools": "all", "limit": 2.6, "measured_from": "bed", "source": "standing orders"},
    ]
    canal = stepped_canal(
        POOLS, 4000.0, offtakes=takes, escapes=escapes, roughness_calendar=calendar, limits=limits
    )  # fmt: skip
    keys = day(
        {"shape": "steps", "values": [[f"+{d} d", round(9.0 + 1.5 * np.sin(d / 20.0), 2)] for d in range(days)]},
        length=f"{days} d", orders=_orders(days, move), output=SPARING | output, deliveries=_turns(days),
    )  # fmt: skip
    return canal, keys


def _bed_at_end(pool: int) -> float:
    """Level of the bed at the lower end of a pool of `stepped_canal` [m]."""
    fall = 1e-4 * (4000.0 - 30.0)
    return (POOLS - pool) * (fall + 0.3) - fall


def _orders(days: int, move: float) -> list[Table]:
    """Four moves a day, opened in the morning and closed by as much in the evening, so that nothing drifts away."""
    orders: list[Table] = []
    for d in range(days):
        for hour, k in ((6, 2 * d), (8, 2 * d + 7)):
            orders.append({"at": f"+{24 * d + hour} h", "gate": f"G{k % POOLS}", "by": move})
            orders.append({"at": f"+{24 * d + hour + 10} h", "gate": f"G{k % POOLS}", "by": -move})
    return orders


def _turns(days: int) -> dict[str, list]:
    """Every offtake takes water every fifth day."""
    return {
        f"T{k}": [["+0 h", 0.0]] + [[f"+{24 * d + hour} h", q] for d in range(k % 5, days, 5) for hour, q in _TURN]
        for k in range(POOLS)
    }


_TURN = ((5, 0.35), (17, 0.0))

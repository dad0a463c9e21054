"""The orders of a run, of its plan and of its rules, and what became of each."""

import numpy as np
import xarray as xr

from toeline.findings.series import meanings
from toeline.report.order_words import order_words
from toeline.report.page.table import Table
from toeline.report.run_clock import RunClock
from toeline.units import Display


def order_table(run: xr.Dataset, clock: RunClock, display: Display) -> Table:
    """Every order: what was asked, by whom, what came of it, and why where that was not the same."""
    return Table(
        "Orders",
        ("time", "gate", "order", "by", "done", "opening before", "after", "leaf stood"),
        tuple(_row(run, place, clock, display) for place in range(run.sizes["order"])),
        words=5,
    )


def _row(run: xr.Dataset, place: int, clock: RunClock, display: Display) -> tuple[str, ...]:
    order = {name: run[name].values[place] for name in run.data_vars if run[name].dims == ("order",)}
    kind = meanings(run["order_kind"])[int(order["order_kind"])]
    status = meanings(run["order_status"])[int(order["order_status"])]
    bay = f", bay {int(order['order_bay'])}" if order["order_bay"] else ""
    completed = order["order_completed"]
    return (
        clock.at(order["order_time"]),
        f"{order['order_gate']}{bay}",
        order_words(kind, float(order["order_value"]), display),
        str(order["order_source"]),
        f"{status}: {order['order_reason']}" if order["order_reason"] else status,
        display.opening(float(order["order_opening_before"])),
        display.opening(float(order["order_opening_after"])),
        "-" if np.isnat(completed) else clock.at(completed),
    )

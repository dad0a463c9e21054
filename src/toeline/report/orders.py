"""Orders of the plan in words: what was asked, and what was not done as asked."""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.moves import SCHEDULE
from toeline.findings.series import meanings
from toeline.report.layout import INDENT, counted, paragraph
from toeline.report.order_words import order_words, reason_words
from toeline.report.run_clock import RunClock
from toeline.units import Display


def order_lines(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """How many orders were carried out as given, then each of the others with its reason."""
    scheduled = np.flatnonzero(run["order_source"].values == SCHEDULE)
    total = scheduled.size
    if not total:
        yield paragraph("No orders were given.", width)
        return
    departures = [place for place in scheduled if run["order_reason"].values[place]]
    yield paragraph(f"{counted(total, 'order')}, {total - len(departures)} carried out as given.", width)
    for place in departures:
        when = clock.at(run["order_time"].values[place])
        yield paragraph(f"{when} {_departure(run.isel(order=place), display)}", width, hanging=INDENT * 2)


def _departure(order: xr.Dataset, display: Display) -> str:
    asked = order_words(_word(order["order_kind"]), float(order["order_value"]), display)
    status = _word(order["order_status"])
    if status == "trimmed":
        status += f" to {display.opening(float(order['order_opening_after']))}"
    bay = f", bay {int(order['order_bay'])}" if order["order_bay"] else ""
    reason = reason_words(order["order_reason"].item(), display)
    return f"{order['order_gate'].item()}{bay}, {asked}: {status}: {reason}"


def _word(flag: xr.DataArray) -> str:
    return meanings(flag)[int(flag)]

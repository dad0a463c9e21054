"""Orders in words: what was asked, and what was not done as asked."""

from collections.abc import Iterator

import xarray as xr

from toeline.findings.series import meanings
from toeline.report.layout import INDENT, counted, paragraph
from toeline.report.order_words import order_words
from toeline.report.run_clock import RunClock
from toeline.units import Display


def order_lines(run: xr.Dataset, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    """How many orders were carried out as given, then each of the others with its reason."""
    orders = [run.isel(order=place) for place in range(run.sizes["order"])]
    if not orders:
        yield paragraph("No orders were given.", width)
        return
    departures = [order for order in orders if order["order_reason"].item()]
    yield paragraph(f"{counted(len(orders), 'order')}, {len(orders) - len(departures)} carried out as given.", width)
    for order in departures:
        yield paragraph(_departure(order, clock, display), width, hanging=INDENT * 2)


def _departure(order: xr.Dataset, clock: RunClock, display: Display) -> str:
    asked = order_words(_word(order["order_kind"]), float(order["order_value"]), display)
    status = _word(order["order_status"])
    if status == "trimmed":
        status += f" to {display.opening(float(order['order_opening_after']))}"
    place = f"{clock.at(order['order_time'].values)} {order['order_gate'].item()}"
    return f"{place}, {asked}: {status}: {order['order_reason'].item()}"


def _word(flag: xr.DataArray) -> str:
    return meanings(flag)[int(flag)]

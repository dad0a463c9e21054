"""Orders in words: what was asked, and what was not done as asked."""

from collections.abc import Iterator
from typing import TYPE_CHECKING

from toeline.report.layout import INDENT, counted, paragraph
from toeline.units import Display

if TYPE_CHECKING:
    import xarray as xr

    from toeline.report.run_clock import RunClock


def order_words(kind: str, value: float, display: Display) -> str:
    """What an order asks for; `kind` is opening [m], by [m] or discharge [m³/s]."""
    if kind == "discharge":
        return f"pass {display.discharge(value)}"
    if kind == "opening":
        return f"open to {display.opening(value)}" if value > 0.0 else "close"
    return f"{'open' if value > 0.0 else 'close'} by {display.opening(abs(value))}"


def order_lines(run: "xr.Dataset", clock: "RunClock", display: Display, width: int) -> Iterator[str]:
    """How many orders were carried out as given, then each of the others with its reason."""
    orders = [run.isel(order=place) for place in range(run.sizes["order"])]
    departures = [order for order in orders if _word(order["order_status"]) != "accepted"]
    if not orders:
        yield paragraph("No orders were given.", width)
        return
    yield paragraph(f"{counted(len(orders), 'order')}, {len(orders) - len(departures)} carried out as given.", width)
    for order in departures:
        yield paragraph(_departure(order, clock, display), width, hanging=INDENT * 2)


def _departure(order: "xr.Dataset", clock: "RunClock", display: Display) -> str:
    asked = order_words(_word(order["order_kind"]), float(order["order_value"]), display)
    status = _word(order["order_status"])
    if status != "refused":
        status += f" to {display.opening(float(order['order_opening_after']))}"
    place = f"{clock.at(order['order_time'].values)} {order['order_gate'].item()}"
    return f"{place}, {asked}: {status}, because {order['order_reason'].item()}"


def _word(flag: "xr.DataArray") -> str:
    """The meaning of one flag value, as the file gives it."""
    words: list[str] = flag.attrs["flag_meanings"].split()
    return words[int(flag)]

"""Order sheets as CSV: one row an order, numbers in the units of the sheet, which the header names."""

import csv
import io
from collections.abc import Sequence

import numpy as np
import xarray as xr

from toeline.constants import CAUTION
from toeline.findings.gate_orders import GateOrder, Side
from toeline.report.order_sheet import Sheet, SheetOrder
from toeline.results.dataset import local_time
from toeline.units import FILE_UNITS, UnitSystem, file_factor

DECIMALS = 4
HOW_MANY = 2


def sheet_csv(sheet: Sheet, run: xr.Dataset) -> str:
    """The orders of a sheet, the header row alone where there are none; empty where there is no value.

    Times are ISO 8601 with the offset from UTC that holds there then.
    """
    system = UnitSystem(run.attrs["units_for_display"])
    writer = _Writer(run, system)
    page = io.StringIO(newline="")
    rows = csv.writer(page)
    rows.writerow(COLUMNS[system])
    rows.writerows(writer.row(sheet, order) for order in sheet.orders)
    return page.getvalue()


class _Writer:
    def __init__(self, run: xr.Dataset, system: UnitSystem):
        self._run, self._factor = run, file_factor("length", system)

    def row(self, sheet: Sheet, line: SheetOrder) -> list[str]:
        order = line.order
        sides = {side.side: side for side in order.sides}
        return [
            sheet.whose,
            str(line.number),
            order.gate,
            str(order.bay) if order.bay else "",
            str(order.number),
            order.status,
            line.move,
            self._time(order.time),
            "" if order.status == "replaced" else self._time(order.completed),
            self._length(order.before),
            self._length(order.after),
            _share(order, order.turn),
            _share(order, order.scale_mark),
            self._time(order.read_after) if sides else "",
            *(cell for name in ("upstream", "downstream") for cell in self._side(sides.get(name))),
            self._length(order.protection_end),
            line.warning,
            "; ".join((*line.stop, *sheet.always)),
            sheet.canal,
            sheet.title,
            sheet.about,
            sheet.version,
            sheet.call,
            CAUTION,
        ]

    def _side(self, side: Side | None) -> list[str]:
        if side is None:
            return [""] * len(_SIDE)
        lengths = [
            value
            for reading in (side.before, side.after)
            for value in (reading.value, reading.value - reading.band, reading.value + reading.band)
        ]
        return [side.gauge or "level above datum", *(self._length(value) for value in (*lengths, side.surge))]

    def _length(self, value: float) -> str:
        return "" if np.isnan(value) else f"{value / self._factor:.{DECIMALS}f}"

    def _time(self, instant: np.datetime64) -> str:
        return "" if np.isnat(instant) else local_time(self._run, instant).isoformat(timespec="seconds")


def _share(order: GateOrder, size: float) -> str:
    """The move in turns or marks, opening positive."""
    return "" if np.isnan(size) or order.is_refused else f"{(order.after - order.before) / size:.{HOW_MANY}f}"


_SIDE = (
    "gauge",
    "before [{length}]",
    "before_low [{length}]",
    "before_high [{length}]",
    "after [{length}]",
    "after_low [{length}]",
    "after_high [{length}]",
    "wave_bound [{length}]",
)
_COLUMNS: Sequence[str] = (
    "sheet",
    "line",
    "gate",
    "bay",
    "order_of_gate",
    "status",
    "move",
    "begin",
    "leaf_stands",
    "opening_from [{length}]",
    "opening_to [{length}]",
    "turns",
    "scale_marks",
    "read_after",
    *(f"{side}_{column}" for side in ("upstream", "downstream") for column in _SIDE),
    "protected_floor_end [{length}]",
    "warning",
    "stop_and_call_if",
    "canal",
    "day",
    "about",
    "version",
    "call",
    "caution",
)
COLUMNS: dict[UnitSystem, list[str]] = {
    system: [column.format(length=FILE_UNITS["length"][system]) for column in _COLUMNS] for system in UnitSystem
}
"""The header row by unit system."""

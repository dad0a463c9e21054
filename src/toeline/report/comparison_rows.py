"""A comparison as rows for spreadsheets and scripts: CSV and JSON, with the same names, all values in SI."""

import csv
import io
import json
import math
from collections.abc import Iterable, Iterator
from dataclasses import asdict, dataclass, fields
from typing import Any

import numpy as np

from toeline.findings.comparison import Comparison, Contrast, IncidentRow, IndicatorRow
from toeline.findings.input_differences import InputDifference
from toeline.findings.schedule_differences import OrderDifference
from toeline.report.run_clock import RunClock
from toeline.report.schedule_words import order_difference_words
from toeline.results.dataset import local_time
from toeline.units import Display


@dataclass(frozen=True)
class ComparisonRow:
    """One finding of one run beside that of the first; what has no meaning in its `part` is None.

    part        input, plan, order, rule, result, incident or indicator
    run         name of the run or plan
    name        which indicator, kind of incident, quantity, what became of an order, rule, or key of a file
    where       gate, pool or offtake; empty for the whole canal
    value       of the run, in `unit`; the worst of an incident; of a result the value when it differs most
    first_value of the first run; for a result at that same time
    difference  value less first_value
    unit        in SI, 1 for counts and ratios
    best        whether it is the best value of an indicator
    count       number of incidents of that kind at that place
    duration_s  how long they lasted in all [s]
    time        when a result differs most, an incident is worst, an order is given: ISO 8601, local, with offset
    first_time  when the first run gives the order
    note        remarks; an order in words
    """

    part: str
    run: str
    name: str
    where: str
    value: float | str | None = None
    first_value: float | str | None = None
    difference: float | None = None
    unit: str | None = None
    best: bool | None = None
    count: int | None = None
    duration_s: float | None = None
    time: str | None = None
    first_time: str | None = None
    note: str | None = None


COLUMNS = tuple(field.name for field in fields(ComparisonRow))


def comparison_csv(comparison: Comparison, clock: RunClock, display: Display) -> str:
    """All rows below a header line, empty where there is no value."""
    sheet = io.StringIO(newline="")
    writer = csv.DictWriter(sheet, COLUMNS, lineterminator="\n")
    writer.writeheader()
    for row in comparison_rows(comparison, clock, display):
        writer.writerow({name: _cell(value) for name, value in asdict(row).items()})
    return sheet.getvalue().removesuffix("\n")


def comparison_json(comparison: Comparison, clock: RunClock, display: Display) -> str:
    """What was compared, then all rows, null where there is no value."""
    about = {
        "canal": comparison.canal,
        "first": comparison.runs[0].name,
        "runs": [asdict(run) for run in comparison.runs],
        "start": _instant(comparison.start, clock),
        "end": _instant(comparison.end, clock),
        "common_steps": comparison.steps,
        "is_by_elapsed_time": comparison.is_by_elapsed_time,
        "same_inputs": comparison.have_same_inputs,
        "alike": comparison.are_alike,
        "graver_than_first": comparison.is_any_graver,
        "rows": [asdict(row) for row in comparison_rows(comparison, clock, display)],
        "caution": clock.run.attrs["comment"],
    }
    return json.dumps(about, ensure_ascii=False, allow_nan=False, indent=1)


def comparison_rows(comparison: Comparison, clock: RunClock, display: Display) -> Iterator[ComparisonRow]:
    """What differs first, as on the page; incidents and indicators of all runs, also where they are alike."""
    for contrast in comparison.contrasts:
        yield from _setting_rows("input", contrast, contrast.inputs)
        yield from _setting_rows("plan", contrast, contrast.schedule.beside_orders)
        yield from (_order_row(contrast, order, clock, display) for order in contrast.schedule.orders)
        yield from _rule_rows(contrast)
        yield from _result_rows(contrast, clock)
    for incident in comparison.incidents:
        yield from _incident_rows(incident, comparison, clock)
    for indicator in comparison.indicators:
        yield from _indicator_rows(indicator, comparison)


def _setting_rows(part: str, contrast: Contrast, differences: Iterable[InputDifference]) -> Iterator[ComparisonRow]:
    for one in differences:
        yield ComparisonRow(part, contrast.run.name, ".".join(one.path), "", _setting(one.other), _setting(one.first))


def _setting(value: Any) -> float | str:
    """A number as it is, in SI and ms; anything else as JSON."""
    is_number = isinstance(value, (int, float)) and not isinstance(value, bool)
    return float(value) if is_number else json.dumps(value, ensure_ascii=False)


def _order_row(contrast: Contrast, order: OrderDifference, clock: RunClock, display: Display) -> ComparisonRow:
    first, other = order.first, order.other
    asked = other or first
    return ComparisonRow(
        "order", contrast.run.name, "added" if first is None else "dropped" if other is None else "changed", order.gate,
        value=other.value if other else None, first_value=first.value if first else None,
        unit="m3 s-1" if asked and asked.kind == "discharge" else "m",
        time=_instant(other.time, clock) if other else None, first_time=_instant(first.time, clock) if first else None,
        note=order_difference_words(contrast.run.letter, order, clock, display),
    )  # fmt: skip


def _rule_rows(contrast: Contrast) -> Iterator[ComparisonRow]:
    for moves in contrast.schedule.rule_moves:
        difference = float(moves.other - moves.first)
        yield ComparisonRow(
            "rule", contrast.run.name, moves.rule, moves.gate, moves.other, moves.first, difference, "1", note="moves"
        )


def _result_rows(contrast: Contrast, clock: RunClock) -> Iterator[ComparisonRow]:
    for one in contrast.results:
        yield ComparisonRow(
            "result", contrast.run.name, one.quantity, one.where, one.other, one.first, one.difference, one.unit,
            time=_instant(one.time, clock), note=f"differs from {_instant(one.begins, clock)} on",
        )  # fmt: skip


def _incident_rows(row: IncidentRow, comparison: Comparison, clock: RunClock) -> Iterator[ComparisonRow]:
    first = _number(row.sums[0].worst.worst) if row.sums[0] else None
    for run, one in zip(comparison.runs, row.sums, strict=True):
        if one is None:
            yield ComparisonRow("incident", run.name, row.what, row.where, first_value=first, count=0, duration_s=0.0)
            continue
        worst = _number(one.worst.worst)
        yield ComparisonRow(
            "incident", run.name, row.what, row.where, worst, first, _less(worst, first), one.worst.unit,
            count=one.count, duration_s=one.seconds, time=_instant(one.worst.worst_time, clock), note=one.worst.source,
        )  # fmt: skip


def _indicator_rows(row: IndicatorRow, comparison: Comparison) -> Iterator[ComparisonRow]:
    first = _number(row.values[0])
    for run, value, is_best in zip(comparison.runs, map(_number, row.values), row.best, strict=True):
        yield ComparisonRow(
            "indicator", run.name, row.name, row.where, value, first, _less(value, first), row.unit, is_best,
            note=row.note,
        )  # fmt: skip


def _number(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None


def _less(value: float | None, first: float | None) -> float | None:
    return None if value is None or first is None else value - first


def _instant(instant: np.datetime64, clock: RunClock) -> str | None:
    return None if np.isnat(instant) else local_time(clock.run, instant).isoformat(timespec="seconds")


def _cell(value: Any) -> Any:
    return str(value).lower() if isinstance(value, bool) else f"{value:.10g}" if isinstance(value, float) else value

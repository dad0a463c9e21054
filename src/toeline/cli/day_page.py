"""A day in words: one line for `check`, one page for `describe`."""

from collections.abc import Callable, Sequence
from datetime import datetime
from typing import TYPE_CHECKING

from toeline.cli.rule_words import lead_time_lines, rule_words
from toeline.report.clock import clock_text, duration_text, later, span_text
from toeline.report.layout import INDENT, counted, heading, paragraph, table
from toeline.report.order_words import order_words
from toeline.scenario.series import constant

if TYPE_CHECKING:
    from toeline.scenario import Order, Scenario, Series, Stuck


def day_line(plans: Sequence["Scenario"]) -> str:
    day, period = plans[0].day, plans[0].day.period
    contents = "; ".join(f"{_plan_name(plan)}, {_plan_words(plan)}" for plan in plans)
    length = duration_text(period.length_ms / 1000)
    line = f"day {day.title} on {plans[0].canal.name}, {length} from {period.start:%Y-%m-%d %H:%M}: {contents}"
    files = {rule.found.file for plan in plans for rule in plan.rules if rule.found.file}
    return f"{line}; rules of your own were run from {', '.join(sorted(files))}" if files else line


def _plan_name(plan: "Scenario") -> str:
    return f"plan {plan.plan}" if plan.plan else "no plan"


def _plan_words(plan: "Scenario") -> str:
    orders = counted(len(plan.orders), "order")
    return f"{orders}, {counted(len(plan.rules), 'rule')}" if plan.rules else orders


def day_page(plans: Sequence["Scenario"], width: int) -> str:
    """What flows in, what is asked, the orders and rules of every plan, and the lead times of the pools."""
    first = plans[0]
    start = first.day.period.start
    end = later(start, first.day.period.length_ms / 1000)
    lines = [
        paragraph(f"{first.day.title}, on {first.canal.name} ({first.canal_path})", width, indent=""),
        paragraph(f"{start:%A %Y-%m-%d}, {span_text(start, end, start)}; the start: {_start_words(first)}", width),
    ]
    if water := _water_rows(first):
        lines += ["", heading("Water"), table(("", "at the start", "least", "greatest"), water, width)]
    for plan in plans:
        lines += ["", f"{heading('Orders')} of {_plan_name(plan)}: {len(plan.orders)}"]
        if plan.orders:
            lines.append(table(("time", "gate", "order"), [_order_row(order, first) for order in plan.orders], width))
        if plan.rules:
            lines += ["", f"{heading('Rules')} of {_plan_name(plan)}: {len(plan.rules)}"]
            lines += [paragraph(rule_words(rule, first), width, hanging=INDENT * 2) for rule in plan.rules]
        lines += [paragraph(_stuck_words(stuck, start), width) for stuck in plan.stuck]
    lines += ["", heading("Lead times of the pools"), *lead_time_lines(first, width)]
    return "\n".join(lines)


def _start_words(scenario: "Scenario") -> str:
    start = scenario.day.start
    if start.file is not None:
        return f"the end of {start.file}"
    return f"{start.state}, openings {start.openings}" if isinstance(start.openings, str) else f"{start.state}"


def _water_rows(scenario: "Scenario") -> list[tuple[str, ...]]:
    day, display = scenario.day, scenario.display
    discharges = {"inflow": day.inflow} | {f"asked at {name}": series for name, series in day.deliveries.items()}
    levels = {"level of the reservoir": day.head, "level at the tail": day.tail}
    seepage = {f"seepage, {pool}": constant(rate) for pool, rate in day.losses.seepage.items()}
    losses = seepage | {"evaporation": day.losses.evaporation, "rain": day.losses.rain}
    return [
        *(_water_row(name, series, display.discharge) for name, series in discharges.items() if series is not None),
        *(_water_row(name, series, display.level) for name, series in levels.items() if series is not None),
        *(_water_row(name, series, display.rate_of_loss) for name, series in losses.items() if series is not None),
    ]


def _water_row(name: str, series: "Series", write: Callable[[float], str]) -> tuple[str, ...]:
    return (name, write(series.at(0)), write(float(series.values.min())), write(float(series.values.max())))


def _stuck_words(stuck: "Stuck", start: datetime) -> str:
    begin, end = (later(start, moment / 1000) for moment in (stuck.begin, stuck.end))
    return f"{stuck.place} is stuck from {clock_text(begin, start)} to {clock_text(end, start)}."


def _order_row(order: "Order", scenario: "Scenario") -> tuple[str, ...]:
    start = scenario.day.period.start
    words = order_words(order.kind, order.value, scenario.display)
    place = f"{order.gate}, bay {order.bay}" if order.bay else order.gate
    return (clock_text(later(start, order.at / 1000), start), place, words)

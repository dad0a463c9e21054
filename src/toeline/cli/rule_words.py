"""Rules and lead times in words, for `describe`."""

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from toeline.errors import UsageError
from toeline.report.clock import duration_text
from toeline.report.layout import paragraph, table
from toeline.units import quantity_text

if TYPE_CHECKING:
    from toeline.rules.setting import Setting
    from toeline.scenario import RuleChoice, Scenario


def rule_words(rule: "RuleChoice", scenario: "Scenario") -> str:
    """A rule with all its settings, defaults included; those that are left out and have none are not named."""
    settings = rule.found.rule.settings
    words = [
        f"{key} {_value(settings[key], value, scenario)}"
        for key, value in vars(rule.given).items()
        if value is not None
    ]
    own = f" (your own, from {rule.found.file})" if rule.found.file else ""
    return f"{rule.kind}{own}: {'; '.join(words)}"


def _value(setting: "Setting", value: Any, scenario: "Scenario") -> str:
    match setting.takes:
        case "number" if setting.dimension is not None:
            return quantity_text(value, setting.dimension, scenario.display.system)
        case "duration":
            return quantity_text(value, "duration", scenario.display.system)
        case "series" if setting.dimension is not None:
            least, most = (
                quantity_text(float(limit), setting.dimension, scenario.display.system)
                for limit in (value.values.min(), value.values.max())
            )
            return least if least == most else f"{least} to {most} during the day"
        case "hours":
            return f"{value[0]:%H:%M} to {value[1]:%H:%M}"
        case "times of day":
            return ", ".join(f"{moment:%H:%M}" for moment in value)
        case "lead times" if isinstance(value, dict):
            leads = {pool: lead if isinstance(lead, str) else duration_text(lead) for pool, lead in value.items()}
            return ", ".join(f"{pool} {lead}" for pool, lead in leads.items())
    return str(value)


def lead_time_lines(scenario: "Scenario", width: int) -> Iterator[str]:
    """How long a change of flow needs through each pool, by both measures; why not, where the day has no start."""
    from toeline.network.build import network_of
    from toeline.network.lead_times import pool_times
    from toeline.network.timetable import timetable_of
    from toeline.simulate import levels_and_discharges, start_of

    network = network_of(scenario.canal, scenario.day.period.spacing)
    try:
        start = start_of(scenario, network, timetable_of(scenario, network))
    except UsageError as error:
        yield paragraph(f"None: {error}", width)
        return
    times = pool_times(network, *levels_and_discharges(start))
    rows = [
        (pool, *("-" if seconds != seconds else duration_text(seconds) for seconds in pair))
        for pool, *pair in zip(network.names.pools, times.wave, times.volume, strict=True)
    ]
    yield table(("", "by wave", "by volume"), rows, width)
    yield paragraph(
        "By wave: how long a change of flow travels down the pool. By volume: how long the change of flow itself needs "
        "to fill the pool to its new steady surface at the target level. Both at the flow of the start.",
        width,
    )

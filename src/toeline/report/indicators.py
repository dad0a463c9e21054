"""The indicators of a run as tables, place by place."""

from collections.abc import Iterator, Mapping, Sequence

from toeline.findings.indicator import Indicator
from toeline.report.layout import paragraph, table
from toeline.report.values import value_text
from toeline.units import Display

_CANAL = {
    "adequacy": "adequacy",
    "efficiency": "efficiency",
    "dependability": "dependability",
    "equity": "equity",
}
_OFFTAKES = {
    "delivery performance ratio": "given of asked",
    "volume not delivered": "not delivered",
    "tail-end supply ratio": "in full at the tail end",
}
_POOLS = {
    "maximum absolute level error": "maximum error",
    "integrated absolute level error": "integrated error",
    "steady-state level error": "steady-state error",
}
_GATES = {
    "integrated absolute gate movement": "integrated movement",
    "integrated absolute discharge change": "integrated flow change",
}
_STATES = {
    "modular-limit crossings": "modular limit crossed",
    "hours at avoided openings": "at avoided openings",
}
"""Names of indicators and the headings of their columns. Moves and travel, hours near the modular limit and what was
used of the limits stand in sections of their own.
"""

_NOTHING = ("-", "0")
"""What the cells of a column are that is left out."""

_DELIVERY_NOTE = (
    "Adequacy, efficiency: 1 where all was given and nothing too much. Dependability, equity: variation over time and "
    "over offtakes, 0 where there is none; standard deviation of the population (Molden & Gates 1990)."
)
_LEVEL_NOTE = (
    "Level errors are parts of the target depth at the lower end of the pool; steady-state: of the last 2 hours. "
    "Every output step is one sample."
)
_GATE_NOTE = (
    "Integrated: what openings and discharges changed beyond the way from their first to their last value. Near "
    "the modular limit the discharge of a gate is poorly known. Crossings and hours that no gate had are left out."
)


def indicator_lines(found: Sequence[Indicator], display: Display, width: int) -> Iterator[str]:
    """Deliveries, levels and gates; what there is nothing to count for is left out."""
    for subject, columns, note in (
        ("deliveries", _CANAL, ""),
        ("deliveries", _OFFTAKES, f"{_DELIVERY_NOTE} {_sampling(found)}"),
        ("levels", _POOLS, _LEVEL_NOTE),
        ("gates", _GATES, ""),
        ("gates", _STATES, _GATE_NOTE),
    ):
        if text := _pivoted(found, subject, columns, display, width):
            yield text
        if note and any(indicator.name in columns for indicator in found):
            yield paragraph(note, width)
    if not any(indicator.name in _CANAL for indicator in found):
        yield paragraph("Nothing was asked of an offtake: there are no indicators of deliveries.", width)


def _sampling(found: Sequence[Indicator]) -> str:
    """How many samples the measures of deliveries count, and what they leave out."""
    words = next((indicator.note for indicator in found if indicator.name == "adequacy"), "")
    return f"{words[:1].upper()}{words[1:]}."


def _pivoted(found: Sequence[Indicator], subject: str, columns: Mapping[str, str], display: Display, width: int) -> str:
    """One row a place, one column an indicator; empty where there is nothing to count."""
    cells = {
        (indicator.where, indicator.name): value_text(indicator.value, indicator.unit, display)
        for indicator in found
        if indicator.name in columns
    }
    told = {name for (_, name), cell in cells.items() if cell not in _NOTHING}
    used = [name for name in columns if name in told]
    places = dict.fromkeys(place for place, _ in cells)
    rows = [(place or "whole canal", *(cells.get((place, name), "-") for name in used)) for place in places]
    return table((subject, *(columns[name] for name in used)), rows, width) if used else ""

"""Which inputs of two runs differ, in words."""

from collections.abc import Iterator
from typing import Any, cast

from toeline.findings.comparison import Comparison, Contrast
from toeline.findings.input_differences import InputDifference, largest_of_series
from toeline.report.clock import clock_text, later
from toeline.report.run_clock import RunClock
from toeline.results.provenance import START_DIGEST
from toeline.units import Dimension, Display, quantity_text

MOST_TOLD = 20


def input_words(contrast: Contrast, clock: RunClock, display: Display) -> Iterator[str]:
    """One line a setting that differs from the first run; of many, the first ones and how many more."""
    for difference in contrast.inputs[:MOST_TOLD]:
        yield difference_words(difference, clock, display)
    if len(contrast.inputs) > MOST_TOLD:
        yield f"and {len(contrast.inputs) - MOST_TOLD} more; --format json lists every one"
    if not contrast.inputs:
        yield "no setting differs, but the digests of the inputs do: the runs were made by different versions"


def difference_words(difference: InputDifference, clock: RunClock, display: Display) -> str:
    """The key as it stands in its file, the value of the run, and that of the first."""
    file, *path = difference.path
    if file == START_DIGEST:
        return "the state that the run starts from: another file, or the same file with other contents"
    return f"{file} file, {'.'.join(path).removesuffix('_ms')}: {change_words(difference, clock, display)}"


def change_words(difference: InputDifference, clock: RunClock, display: Display) -> str:
    """The value of the run and that of the first, of a series where they differ most."""
    if (largest := largest_of_series(difference.first, difference.other)) is None:
        other, first = (_value(value, difference, display) for value in (difference.other, difference.first))
        return f"{other} instead of {first}" if other != first else "other values"
    at, before, after = largest
    words = f"{_value(after, difference, display)} instead of {_value(before, difference, display)}"
    if at <= 0:
        return words
    return f"{words} at {clock_text(later(clock.start, at / 1000), clock.start)}, where they differ most"


def _value(value: Any, difference: InputDifference, display: Display) -> str:
    if value is None:
        return "not given"
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, (int, float)):
        seconds = value / 1000 if difference.path[-1].endswith("_ms") else value
        return _number(seconds, difference.dimension, display)
    return value if isinstance(value, str) else "other values" if isinstance(value, list) else "given"


def _number(value: float, dimension: str | None, display: Display) -> str:
    if dimension is None:
        return f"{value:g}"
    return quantity_text(value, cast(Dimension, dimension), display.system)


def refusal_words(comparison: Comparison, clock: RunClock, display: Display) -> str:
    """Why runs of different inputs are not compared, and what differs."""
    first = comparison.runs[0]
    lines = ["the runs differ in more than their plans, so that what is found may not come from the plans."]
    for contrast in comparison.contrasts:
        if not contrast.has_same_inputs:
            lines.append(f"{contrast.run.name}, against {first.name}:")
            lines += [f"  {words}" for words in input_words(contrast, clock, display)]
    return "\n".join([*lines, "Compare them all the same with --different-inputs."])

"""Runs side by side on a page: what differs first, then incidents and indicators of each."""

from collections.abc import Container, Iterable, Iterator, Sequence
from itertools import groupby

from toeline.constants import CAUTION
from toeline.findings.comparison import Comparison, Contrast, IncidentRow, IncidentSum, IndicatorRow
from toeline.findings.result_differences import ResultDifference
from toeline.report.clock import duration_text
from toeline.report.incidents import gravity, worst_text, worst_words
from toeline.report.input_words import input_words
from toeline.report.layout import INDENT, counted, heading, paragraph
from toeline.report.run_clock import RunClock
from toeline.report.schedule_words import schedule_words
from toeline.report.side_by_side import Group, side_by_side
from toeline.report.values import value_text
from toeline.units import Display

MOST_PLACES = 3
"""So many places of a quantity are listed, those that differ most."""

MOST_INCIDENTS = 8
"""So many differences of incidents are told in short."""

BEST, NOT_BEST = "*", " "
WHOLE_CANAL = "whole canal"


def comparison_page(comparison: Comparison, clock: RunClock, display: Display, *, width: int = 80) -> str:
    """The page of `toeline compare`; `clock` is that of the first run."""
    sections: list[tuple[str, Iterable[str]]] = [
        ("Inputs", _input_lines(comparison, clock, display, width)),
        ("In short", _short_lines(comparison, clock, display, width)),
        ("Schedules", _schedule_lines(comparison, clock, display, width)),
        ("Largest differences", _result_lines(comparison, clock, display, width)),
        ("Incidents", _incident_lines(comparison, display, width)),
        ("Indicators", _indicator_lines(comparison, display, width)),
        ("Caution", [paragraph(CAUTION, width)]),
    ]
    return "\n\n".join(
        [_title(comparison, clock, width), *("\n".join([heading(title), *lines]) for title, lines in sections)]
    )


def _title(comparison: Comparison, clock: RunClock, width: int) -> str:
    titles = {run.title for run in comparison.runs}
    first = comparison.runs[0]
    lines = [
        paragraph(f"{comparison.canal}: {first.title}" if len(titles) == 1 else comparison.canal, width, indent="")
    ]
    for run in comparison.runs:
        title = "" if len(titles) == 1 else f": {run.title}"
        role = "; the others are compared with it" if run is first else ""
        outcome = "" if run.outcome == "complete" else f"; {run.outcome}"
        lines.append(paragraph(f"{run.letter}  {run.name}{title}{role}{outcome}", width, hanging=INDENT * 2 + " "))
    span = clock.span(comparison.start, comparison.end)
    cut = ", the time that all of them cover" if comparison.is_cut else ""
    lines.append(paragraph(f"{clock.start:%A %Y-%m-%d}, {span}{cut}", width))
    return "\n".join(lines)


def _input_lines(comparison: Comparison, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    if comparison.have_same_inputs:
        yield paragraph("The same canal and day in all; only the plans differ.", width)
    for contrast in comparison.contrasts:
        if not contrast.has_same_inputs:
            yield paragraph(f"{_against(contrast, comparison)}: what is found need not come from the plans", width)
            yield from _listed(input_words(contrast, clock, display), width)
    versions = {run.version for run in comparison.runs}
    if len(versions) > 1:
        told = ", ".join(f"{run.letter} by {run.version}" for run in comparison.runs)
        yield paragraph(f"Made by different versions, which may compute differently: {told}.", width)
    if comparison.is_by_elapsed_time:
        yield paragraph(
            "The runs are of different times: each is counted from its own start, and told by the clock of "
            f"{comparison.runs[0].letter}.", width,
        )  # fmt: skip
    if len({*comparison.own_steps, comparison.steps}) > 1:
        own = ", ".join(
            f"{run.letter} {steps}" for run, steps in zip(comparison.runs, comparison.own_steps, strict=True)
        )
        yield paragraph(
            f"Levels, discharges, deliveries and jumps are compared at the {counted(comparison.steps, 'output time')} "
            f"that all runs have ({own}); incidents and indicators are those of all times of each.", width,
        )  # fmt: skip


def _short_lines(comparison: Comparison, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    for place, contrast in enumerate(comparison.contrasts, start=1):
        yield paragraph(_against(contrast, comparison), width)
        yield from _listed(_incidents_in_short(comparison, place, display), width)
        yield from _listed([_start_words(contrast, comparison, clock)], width)


def _incidents_in_short(comparison: Comparison, place: int, display: Display) -> list[str]:
    """How the incidents of one run differ from those of the first: what is new or graver before what is less."""
    if not any(row.sums[0] or row.sums[place] for row in comparison.incidents):
        return ["no incident in either"]
    rows = sorted(comparison.incidents, key=lambda row: gravity(row.what))
    graver = [row for row in rows if _is_graver(row, place, 0)]
    less = [row for row in rows if row not in graver and _is_graver(row, 0, place)]
    told = [_incident_words(row, place, comparison, display) for row in (*graver, *less)]
    if len(told) > MOST_INCIDENTS:
        more = counted(len(told) - MOST_INCIDENTS, "more difference")
        told[MOST_INCIDENTS:] = [f"and {more} of incidents, see below"]
    return told or ["the same incidents"]


def _is_graver(row: IncidentRow, one: int, other: int) -> bool:
    incident = row.sums[one]
    return incident is not None and incident.is_graver_than(row.sums[other])


def _start_words(contrast: Contrast, comparison: Comparison, clock: RunClock) -> str:
    first = contrast.first_seen
    if first is None:
        return f"no difference of levels, discharges, deliveries or jumps from {comparison.runs[0].letter}"
    return f"different from {clock.at(first.begins)} on; seen first in the {first.quantity} of {first.where}"


def _incident_words(row: IncidentRow, place: int, comparison: Comparison, display: Display) -> str:
    """How an incident of one run differs from that of the first."""
    first, other = row.sums[0], row.sums[place]
    subject = f"{row.where}: {row.what}"
    lasting = [_lasting(one) for one in (other, first)]
    if not any(one is not None and one.seconds for one in (first, other)):
        letter = comparison.runs[0].letter
        return f"{subject}, not so in {letter}" if first is None else f"{subject} in {letter}, not so here"
    words = f"{subject}, {lasting[0]}"
    if lasting[0] != lasting[1]:
        words += f" instead of {lasting[1]}"
    if first is None or other is None:
        return words
    worst = [worst_words(one.worst, display) for one in (other, first)]
    return words if worst[0] == worst[1] else f"{words}; worst {worst[0]} instead of {worst[1]}"


def _lasting(incident: IncidentSum | None) -> str:
    return "none" if incident is None else duration_text(incident.seconds)


def _schedule_lines(comparison: Comparison, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    for contrast in comparison.contrasts:
        schedule = contrast.schedule
        differing = len(schedule.orders)
        count = f"{differing} of {differing + schedule.alike} orders differ" if differing else "the same orders"
        yield paragraph(f"{_against(contrast, comparison)}: {count}", width)
        yield from _listed(schedule_words(contrast.run.letter, schedule, clock, display), width)


def _result_lines(comparison: Comparison, clock: RunClock, display: Display, width: int) -> Iterator[str]:
    differences = {contrast.run.letter: contrast.results for contrast in comparison.contrasts}
    if not any(differences.values()):
        yield paragraph("None: levels, discharges, deliveries and jumps are the same at all common times.", width)
        return
    letter = comparison.runs[0].letter
    yield paragraph(f"How much more (+) or less (-) than in {letter}, at the time when it is most.", width)
    places = {letter: {(one.quantity, one.where): one for one in found} for letter, found in differences.items()}
    keys = dict.fromkeys(key for found in places.values() for key in found)
    groups, left_out = [], 0
    for quantity, group in groupby(sorted(keys, key=lambda key: _rank(key[0], keys)), key=lambda key: key[0]):
        ranked = sorted(group, key=lambda key: -max(_size(found.get(key)) for found in places.values()))
        rows = [
            (key[1], tuple(_difference_cell(found.get(key), clock, display) for found in places.values()))
            for key in ranked[:MOST_PLACES]
        ]
        left_out += max(len(ranked) - MOST_PLACES, 0)
        groups.append(Group(quantity, tuple(rows)))
    yield from side_by_side(groups, list(places), width)
    if left_out:
        yield paragraph(f"{counted(left_out, 'smaller difference')} left out; --format csv lists every one.", width)


def _rank(quantity: str, keys: Iterable[tuple[str, str]]) -> int:
    return list(dict.fromkeys(name for name, _ in keys)).index(quantity)


def _size(difference: ResultDifference | None) -> float:
    return abs(difference.difference) if difference else 0.0


def _difference_cell(difference: ResultDifference | None, clock: RunClock, display: Display) -> str:
    if difference is None:
        return "-"
    sign = "+" if difference.difference > 0.0 else "-"
    return f"{sign}{_size_words(difference, display)} {clock.at(difference.time)}"


def _size_words(difference: ResultDifference, display: Display) -> str:
    size = abs(difference.difference)
    if "jump" in difference.quantity:
        return display.distance(size)
    is_level = "level" in difference.quantity or difference.quantity == "opening"
    return display.level_change(size) if is_level else value_text(size, difference.unit, display)


def _incident_lines(comparison: Comparison, display: Display, width: int) -> Iterator[str]:
    if not comparison.incidents:
        yield paragraph("None in any run. That nothing was found makes no place safe.", width)
        return
    yield paragraph(
        "For how long in all, and the worst value: how high the water is above an edge, how much tailwater is missing.",
        width,
    )
    rows = sorted(comparison.incidents, key=lambda row: (gravity(row.what), row.what, not row.differs))
    groups = [
        Group(what, tuple((row.where, tuple(_incident_cell(one, display) for one in row.sums)) for row in group))
        for what, group in groupby(rows, key=lambda row: row.what)
    ]
    yield from side_by_side(groups, _letters(comparison), width, keep=1)


def _incident_cell(incident: IncidentSum | None, display: Display) -> str:
    if incident is None:
        return "none"
    worst = worst_text(incident.worst, display)
    parts = [duration_text(incident.seconds) if incident.seconds else "", "" if worst == "-" else worst]
    return ", ".join(part for part in parts if part) or "yes"


def _indicator_lines(comparison: Comparison, display: Display, width: int) -> Iterator[str]:
    told = [(row, [_indicator_text(value, row.unit, display) for value in row.values]) for row in comparison.indicators]
    differing = [(row, cells) for row, cells in told if row.differs and len(set(cells)) > 1]
    alike = [row for row, cells in told if not (row.differs and len(set(cells)) > 1)]
    if differing:
        groups = [
            Group(name, tuple((row.where or WHOLE_CANAL, _marked(row, cells)) for row, cells in group))
            for name, group in groupby(differing, key=lambda pair: pair[0].name)
        ]
        yield from side_by_side(groups, _letters(comparison), width, keep=1)
        yield paragraph(f"{BEST} the best value of its row. Best is not safe.", width)
        yield from _note_lines([row for row, _ in differing], width)
    if alike:
        split = {row.name for row, _ in differing}
        yield paragraph(f"The same in all runs: {_places(alike, split)}.", width)


def _indicator_text(value: float, unit: str, display: Display) -> str:
    """A value, and no time as such, for "-" stands for a run that has no value."""
    return "0 min" if unit == "h" and value == 0.0 else value_text(value, unit, display)


def _marked(row: IndicatorRow, cells: Sequence[str]) -> tuple[str, ...]:
    return tuple(f"{cell}{BEST if is_best else NOT_BEST}" for cell, is_best in zip(cells, row.best, strict=True))


def _note_lines(rows: Sequence[IndicatorRow], width: int) -> Iterator[str]:
    """What the indicators that are shown mean; where the notes differ from place to place, that of the first."""
    for name, group in groupby(rows, key=lambda row: row.name):
        notes = [(row.note, row.where) for row in group if row.note]
        if notes:
            place = f", {notes[0][1]}" if len({note for note, _ in notes}) > 1 else ""
            yield paragraph(f"{name}{place}: {notes[0][0]}", width, hanging=INDENT * 2)


def _places(rows: Sequence[IndicatorRow], split: Container[str]) -> str:
    """The indicators by name, with the number of their places; those of `split` are not the same at all places."""
    counts = {name: len(list(group)) for name, group in groupby(rows, key=lambda row: row.name)}
    return "; ".join(
        f"{name} at {count} more" if name in split else name if count == 1 else f"{name} at {count} places"
        for name, count in counts.items()
    )


def _against(contrast: Contrast, comparison: Comparison) -> str:
    return f"{contrast.run.letter} against {comparison.runs[0].letter}"


def _letters(comparison: Comparison) -> list[str]:
    return [run.letter for run in comparison.runs]


def _listed(sentences: Iterable[str], width: int) -> Iterator[str]:
    return (paragraph(words, width, indent=INDENT * 2, hanging=INDENT * 3) for words in sentences)


def contrast_words(comparison: Comparison, place: int, clock: RunClock, display: Display) -> list[str]:
    """In sentences how the run at a place, from 1 on, differs from the first: incidents, since when, orders, inputs."""
    contrast = comparison.contrasts[place - 1]
    return [
        *_incidents_in_short(comparison, place, display),
        _start_words(contrast, comparison, clock),
        *schedule_words(contrast.run.letter, contrast.schedule, clock, display),
        *([] if contrast.has_same_inputs else ["what is found need not come from the plans"]),
        *([] if contrast.has_same_inputs else input_words(contrast, clock, display)),
    ]

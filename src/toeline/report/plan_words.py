"""How plans differ beside their orders, in words: rules, what their settings are, and leaves that are stuck."""

from collections.abc import Iterable, Iterator

from toeline.findings.input_differences import InputDifference
from toeline.report.clock import clock_text, later
from toeline.report.input_words import change_words
from toeline.report.run_clock import RunClock
from toeline.results.provenance import STUCK
from toeline.units import Display


def plan_words(letter: str, differences: Iterable[InputDifference], clock: RunClock, display: Display) -> Iterator[str]:
    """One sentence a difference, gates that share it together; `letter` is that of the run told from the first."""
    gates_of_change: dict[tuple[str, str], list[str]] = {}
    for difference in differences:
        name, kind, *inside = difference.path
        if name == STUCK:
            yield _stuck_words(letter, difference, clock)
        elif len(inside) < len(("gate", "key")):
            yield _rule_words(letter, difference)
        else:
            change = f"{inside[1]} {change_words(difference, clock, display)}"
            gates_of_change.setdefault((kind, change), []).append(inside[0])
    for (kind, change), gates in gates_of_change.items():
        yield f"{letter}: rule {kind}{_at(gates)}: {change}"


def _rule_words(letter: str, difference: InputDifference) -> str:
    """A rule, or all rules of a kind, that only one of the plans has."""
    _, kind, *gates = difference.path
    told = difference.first if difference.other is None else difference.other
    follows = "does not follow" if difference.other is None else "follows"
    return f"{letter} {follows} the rule {kind}{_at(gates or list(told))}"


def _at(gates: list[str]) -> str:
    named = [gate for gate in gates if gate]
    return f" at {' and '.join(filter(None, [', '.join(named[:-1]), named[-1]]))}" if named else ""


def _stuck_words(letter: str, difference: InputDifference, clock: RunClock) -> str:
    gate = difference.path[1]
    if difference.other is None:
        return f"{letter}: the leaf of {gate} is not stuck"
    moments = [[clock_text(later(clock.start, ms / 1000), clock.start) for ms in spell] for spell in difference.other]
    return f"{letter}: the leaf of {gate} is stuck {' and '.join(f'from {begin} to {end}' for begin, end in moments)}"

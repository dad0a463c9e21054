"""What is said before a run that will be large: a unit mistyped in the day file shows before it has cost an hour."""

from collections.abc import Sequence
from typing import TYPE_CHECKING

from toeline.cli.terminal import note

if TYPE_CHECKING:
    from toeline.scenario import Scenario

LARGE = 1e9
"""Bytes of values, before they are compressed, from which a run is announced."""


def tell_of_large_runs(scenarios: Sequence["Scenario"], where: str) -> None:
    """Say of runs that will be large how many rows they have and what these take; `where` they go, as in a sentence."""
    from toeline.results.size import size_before_compression

    sizes, rows = sizes_of_run(scenarios[0]), rows_of_run(scenarios[0])
    size = size_before_compression(sizes, rows)
    if size < LARGE:
        return
    runs = "A large run" if len(scenarios) == 1 else f"{len(scenarios)} large runs, each"
    note(
        f"{runs}: up to {rows['time']:,} rows of values and {rows['profile_time']:,} long profiles of some "
        f"{sizes['node']:,} points, {size / 1e9:,.1f} GB {where}. Ctrl-C stops it; [output] in the day file says how "
        "often values are written."
    )


def is_long_run(scenario: "Scenario") -> bool:
    """Whether a run may become so long that nobody should hold all of it in memory."""
    from toeline.results.dataset import LONG_RUN
    from toeline.results.size import size_before_compression

    return size_before_compression(sizes_of_run(scenario), rows_of_run(scenario)) >= LONG_RUN


def sizes_of_run(scenario: "Scenario") -> dict[str, int]:
    """How many there are of each labelled thing; of nodes about."""
    canal = scenario.canal
    return {
        **{name: len(getattr(canal, f"{name}s")) for name in ("gate", "pool", "offtake", "escape", "gauge")},
        "bay": sum(gate.bays for gate in canal.gates if gate.separate_bays),
        "node": round(sum(pool.length for pool in canal.pools) / scenario.day.period.spacing) + len(canal.pools),
    }


def rows_of_run(scenario: "Scenario") -> dict[str, int]:
    """Rows along time, before any are left out, and along profile_time."""
    period, output = scenario.day.period, scenario.day.output
    return {
        "time": period.length_ms // output.finest_ms + 1,
        "profile_time": period.length_ms // output.profiles_every_ms + 1,
    }

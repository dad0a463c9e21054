"""Where a run is written, and what must not be lost by it."""

import re
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from toeline.errors import UsageError

if TYPE_CHECKING:
    from toeline.scenario import Scenario


def choose_outputs(scenarios: Sequence["Scenario"], output: Path | None) -> list[Path]:
    """The file of each plan: DAY.nc in the working directory unless given.

    Of a day with several plans each goes to its own file, DAY.PLAN.nc, whether all are run or one was picked.
    """
    day = scenarios[0]
    wanted = output or Path(f"{day.day_path.stem}.nc")
    if len(day.day.plans) < 2:
        return [wanted]
    return [wanted.with_name(f"{wanted.stem}.{_as_file_name(scenario.plan or '')}{wanted.suffix}") for scenario in scenarios]


def _as_file_name(plan: str) -> str:
    return re.sub(r"[^\w.-]+", "_", plan)


def refuse_outputs(outputs: Sequence[Path], scenarios: Sequence["Scenario"], overwrite: bool) -> None:
    """Raise UsageError, before any work is done, where writing an output would fail or lose something."""
    if len(set(outputs)) < len(outputs):
        raise UsageError(f"two plans would go to one file, {outputs[0]}: rename a plan, or run one at a time with --plan.")
    inputs = {path.resolve() for s in scenarios for path in (s.day_path, s.canal_path, s.start_file) if path}
    for output in outputs:
        if output.resolve() in inputs:
            raise UsageError(f"{output} is an input of this run and would be lost: name another file with -o.")
        if not output.parent.is_dir():
            raise UsageError(f"there is no directory {output.parent} to write {output.name} in.")
        if output.exists() and not overwrite:
            raise UsageError(f"{output} exists: name another file with -o, or replace it with --overwrite.")

"""Where a run is written, and what must not be lost by it."""

import os
import re
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from toeline.cli.terminal import note, show, shown_path
from toeline.errors import UsageError
from toeline.results.run_file import RunFile

if TYPE_CHECKING:
    from toeline.scenario import Scenario


def choose_outputs(scenarios: Sequence["Scenario"], output: Path | None) -> list[Path]:
    """The file of each plan: DAY.nc in the working directory unless given.

    Of a day with several plans each goes to its own file, DAY.PLAN.nc, whether all are run or one was picked. A name
    given for one picked plan is taken as it is.
    """
    day = scenarios[0]
    wanted = output or Path(f"{day.day_path.stem}.nc")
    if len(day.day.plans) < 2 or (output is not None and len(scenarios) == 1):
        return [wanted]
    plans = (re.sub(r"[^\w.-]+", "_", scenario.plan or "") for scenario in scenarios)
    return [wanted.with_name(f"{wanted.stem}.{plan}{wanted.suffix}") for plan in plans]


def refuse_outputs(outputs: Sequence[Path], scenarios: Sequence["Scenario"], overwrite: bool) -> None:
    """Raise UsageError, before any work is done, where writing an output would fail or lose something."""
    if len(set(outputs)) < len(outputs):
        raise UsageError("two plans would go to one file: rename a plan, or run one at a time with --plan.")
    inputs = input_files(scenarios)
    for output in outputs:
        file = RunFile(output, overwrite)
        if file.path in inputs:
            raise UsageError(f"{output} is an input of this run and would be lost: name another file with -o.")
        if not output.parent.is_dir():
            raise UsageError(f"there is no directory {output.parent} to write {output.name} in.")
        for standing in (output, shown_path(file.partial_path)):
            if standing.exists() and not overwrite:
                raise UsageError(f"{standing} exists: name another file with -o, or replace it with --overwrite.")


def refuse_page(output: Path, inputs: Iterable[Path], overwrite: bool) -> None:
    """Raise UsageError, before any work is done, where writing a page would fail or lose something."""
    if output.resolve() in {path.resolve() for path in inputs}:
        raise UsageError(f"{output} is an input and would be lost: name another file with -o.")
    if not output.parent.is_dir():
        raise UsageError(f"there is no directory {output.parent} to write {output.name} in.")
    if output.exists() and not overwrite:
        raise UsageError(f"{output} exists: name another file with -o, or replace it with --overwrite.")


def show_or_write(text: str, output: Path | None) -> None:
    """Show a page, or write it to the file that was asked for and say so."""
    if output is None:
        show(text)
        return
    write_page(output, text)
    note(f"Written: {output}")


def write_page(output: Path, text: str) -> None:
    """Write a page whole or not at all."""
    half = output.with_name(f".{output.name}.{os.getpid()}.partial")
    try:
        half.write_text(f"{text}\n", encoding="utf-8")
        half.replace(output)
    finally:
        half.unlink(missing_ok=True)


def input_files(scenarios: Iterable["Scenario"]) -> set[Path]:
    """All files that scenarios are read from."""
    return {path.resolve() for s in scenarios for path in (s.day_path, s.canal_path, s.start_file) if path}

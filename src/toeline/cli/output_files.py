"""Where a run or its sheets are written, and what must not be lost by it."""

import os
import re
from collections.abc import Iterable, Mapping, Sequence
from contextlib import suppress
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
    plans = (file_name(scenario.plan or "") for scenario in scenarios)
    return [wanted.with_name(f"{wanted.stem}.{plan}{wanted.suffix}") for plan in plans]


def file_name(name: str) -> str:
    """A name as part of the name of a file: what is no letter, digit, point or hyphen becomes one underscore."""
    return re.sub(r"[^\w.-]+", "_", name)


def refuse_outputs(
    outputs: Sequence[Path], scenarios: Sequence["Scenario"], overwrite: bool, resume: bool = False
) -> None:
    """Raise UsageError, before any work is done, where writing an output would fail or lose something."""
    if len(set(outputs)) < len(outputs):
        raise UsageError("two plans would go to one file: rename a plan, or run one at a time with --plan.")
    inputs = input_files(scenarios)
    for output in outputs:
        file = RunFile(output, overwrite)
        if file.path in inputs:
            raise UsageError(f"{output} is an input of this run and would be lost: name another file with -o.")
        refuse_folder(output.parent, output.name)
        if resume or overwrite:
            continue
        if output.exists():
            raise UsageError(f"{output} exists: name another file with -o, or replace it with --overwrite.")
        if file.partial_path.exists():
            raise UsageError(
                f"{shown_path(file.partial_path)} exists: go on with it with --resume, name another file with -o, or "
                "replace it with --overwrite."
            )


def refuse_page(output: Path, inputs: Iterable[Path], overwrite: bool) -> None:
    """Raise UsageError, before any work is done, where writing a page would fail or lose something."""
    try:
        resolved = output.resolve()
    except (OSError, RuntimeError, ValueError) as error:  # RuntimeError: links in a circle
        raise UsageError(f"{output} cannot be a file name: {error}") from error
    if resolved in {path.resolve() for path in inputs}:
        raise UsageError(f"{output} is an input and would be lost: name another file with -o.")
    refuse_folder(output.parent, output.name)
    if output.exists() and not output.is_file():
        raise UsageError(f"{output} is a pipe or device and would be replaced: name a file with -o.")
    if output.exists() and not overwrite:
        raise UsageError(f"{output} exists: name another file with -o, or replace it with --overwrite.")


def refuse_folder(folder: Path, what: str) -> None:
    """Raise UsageError where there is no such folder to write something in, or nothing can be written in it."""
    if not folder.is_dir():
        raise UsageError(f"there is no directory {folder} to write {what} in.")
    if not os.access(folder, os.W_OK | os.X_OK):
        raise UsageError(f"{what} cannot be written: no permission in {folder.resolve()}, or its disk is read-only.")


def show_or_write(text: str, output: Path | None) -> None:
    """Show a page, or write it to the file that was asked for and say so."""
    if output is None:
        show(text)
        return
    write_together({output.resolve(): f"{text}\n".encode()})
    note(f"Written: {output}")


def input_files(scenarios: Iterable["Scenario"]) -> set[Path]:
    """All files that scenarios are read from."""
    return {path.resolve() for s in scenarios for path in (s.day_path, s.canal_path, s.start_file) if path}


def write_together(files: Mapping[Path, bytes]) -> None:
    """Write several files so that a failure leaves each as it was before: none is under its name until all are on disk.

    OSError where one cannot be written.
    """
    working = {path: path.with_name(path.name + ".writing") for path in files}
    try:
        for path, content in files.items():
            working[path].write_bytes(content)
        for path in files:
            working[path].replace(path)
    except OSError as error:
        raise OSError(error.errno, error.strerror, str(path)) from error
    finally:
        for left in working.values():
            with suppress(OSError):
                left.unlink(missing_ok=True)

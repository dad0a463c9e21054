"""The files that commands are given: which kind one is, what is refused, and a day loaded for each of its plans."""

import tomllib
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import click

from toeline.cli.terminal import command_line
from toeline.errors import UsageError

if TYPE_CHECKING:
    from toeline.scenario import Scenario

INPUT_FILE = click.Path(exists=True, dir_okay=False, path_type=Path)

_HDF5_SIGNATURE = b"\x89HDF\r\n\x1a\n"
_CANAL_TABLES = {"sections", "surfaces", "pools", "gates"}


def is_run(path: Path) -> bool:
    """Whether the file is a finished or stopped run (NetCDF-4, by its signature)."""
    with path.open("rb") as file:
        return file.read(len(_HDF5_SIGNATURE)) == _HDF5_SIGNATURE


def refuse_other_than_run(path: Path) -> None:
    """Raise UsageError where a file is not that of a run."""
    if not is_run(path):
        raise UsageError(f"{path} is no file of results: run its day first, then name what `toeline run` wrote.")


def refuse_twice(given: Sequence[tuple[Path, str | None]]) -> None:
    """Raise UsageError where one file, or one plan of a day, is named more than once."""
    seen: set[tuple[Path, str | None]] = set()
    for path, plan in given:
        if (path.resolve(), plan) in seen:
            raise UsageError(f"{path}{f', plan {plan},' if plan else ''} is named twice: name every run or plan once.")
        seen.add((path.resolve(), plan))


def is_canal(path: Path) -> bool:
    """Whether a TOML file describes a canal."""
    return not _CANAL_TABLES.isdisjoint(_top_keys(path))


def is_day(path: Path) -> bool:
    """Whether a TOML file describes a day."""
    return "canal" in _top_keys(path)


def _top_keys(path: Path) -> set[str]:
    """Keys at the top of a TOML file; none where it cannot be read, which its loader explains."""
    from toeline.scenario.text_file import UnreadableFileError, read_text

    try:
        return set(tomllib.loads(read_text(path)))
    except (tomllib.TOMLDecodeError, UnreadableFileError):
        return set()


def load_plans(day: Path, plan: str | None = None, overrides: Sequence[str] = ()) -> list["Scenario"]:
    """The day once for every plan in it (once where it has none), or for the one that was picked.

    Raises ScenarioError with all faults, UsageError where there is no such plan or the file is a canal.
    """
    from toeline.scenario import load_scenario, plan_names

    if is_run(day):
        see = command_line("describe", day)
        raise UsageError(f"{day} is a file of results: name the day file, or see it with: {see}")
    if is_canal(day):
        raise UsageError(f"{day} is a canal file: name a day file, which says what happens on it.")
    names: Sequence[str | None] = (plan,) if plan is not None else plan_names(day) or (None,)
    return [load_scenario(day, plan=name, overrides=overrides) for name in names]

"""`toeline warm-up`: everything compiled before the first day is run, and where it is kept."""

import time
from collections.abc import Sequence
from importlib.resources import as_file, files
from typing import TYPE_CHECKING

import click

from toeline.cli.run import tell_of_compiling
from toeline.cli.terminal import note, progress_bar, show

if TYPE_CHECKING:
    from toeline.hydraulics.compiled_code import CodeFolder

MEGABYTE = 1e6


@click.command(short_help="Compile the equations now, and tell where they are kept.")
@click.option("--remove-others", is_flag=True, help="Remove what other versions have compiled and not used for a day.")
def command(remove_others: bool) -> None:
    """Compile the equations for this machine, so that the first run starts at once, and tell where they are kept.

    Every version of Toeline keeps its own. What no version has used for 30 days goes when a new version compiles.
    TOELINE_CACHE_DIR moves the place; where users may read but not write it, they use what is there.
    """
    from toeline.hydraulics.compiled_code import AT_WORK_WITHIN, described, others_beside, remove
    from toeline.hydraulics.kernel import FOLDER

    tell_of_compiling()
    began = time.monotonic()
    compile_everything()
    note(f"Everything is compiled, in {time.monotonic() - began:.1f} s.")
    if FOLDER is None:
        show("Nothing can be kept: no folder can be written. Every run compiles anew; set TOELINE_CACHE_DIR.")
        return
    show(f"Compiled code: {FOLDER}, {megabytes([described(FOLDER)])}")
    others = others_beside(FOLDER)
    idle = [other for other in others if other.is_unused_for(AT_WORK_WITHIN)]
    if remove_others:
        remove(idle)
        show(f"Of other versions removed: {amount(idle)}")
        others = others_beside(FOLDER)
    for line in other_lines(others, may_remove=bool(idle) and not remove_others):
        show(line)


def compile_everything() -> None:
    """Put the starter day through everything that calls compiled code."""
    from toeline.network.rating import default_rating_levels, rating_table
    from toeline.scenario import load_canal, load_scenario, starter
    from toeline.studies.verify import verify

    with as_file(files(starter)) as folder, progress_bar("compiling") as progress:
        canal = load_canal(folder / "canal.toml")
        gate = canal.canal.gates[0].name
        headwaters, tailwaters, openings = (levels.tolist() for levels in default_rating_levels(canal, gate))
        rating_table(canal, gate, headwaters, tailwaters, openings)
        verify(load_scenario(folder / "day.toml"), progress=progress)


def other_lines(others: Sequence["CodeFolder"], *, may_remove: bool) -> list[str]:
    """What other versions have left in the same place, and how to be rid of it."""
    if not others:
        return []
    last = time.strftime("%Y-%m-%d", time.localtime(others[0].last_used))
    lines = [f"Of other versions beside it: {amount(others)}, last used {last}"]
    if may_remove:
        lines.append("To remove what was not used for a day: toeline warm-up --remove-others")
    return lines


def amount(folders: Sequence["CodeFolder"]) -> str:
    if not folders:
        return "none"
    return f"{len(folders)} {'folder' if len(folders) == 1 else 'folders'}, {megabytes(folders)}"


def megabytes(folders: Sequence["CodeFolder"]) -> str:
    return f"{sum(folder.size for folder in folders) / MEGABYTE:.1f} MB"

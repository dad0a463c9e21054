"""`toeline figures`: a run as figures for reports."""

from collections.abc import Iterator, Sequence
from contextlib import ExitStack
from pathlib import Path
from typing import TYPE_CHECKING

import click

from toeline.cli.input_files import INPUT_FILE, refuse_other_than_run
from toeline.cli.terminal import show
from toeline.errors import UsageError

if TYPE_CHECKING:
    import numpy as np
    import xarray as xr

    from toeline.report.figures.picture import Picture

FORMATS = ("png", "svg", "pdf")


@click.command(short_help="Draw a run: jumps, levels, gates, deliveries, water; with the numbers as CSV.")
@click.argument("runs", nargs=-1, required=True, type=INPUT_FILE, metavar="RUN.nc...")
@click.option(
    "--to",
    "folder",
    required=True,
    type=click.Path(file_okay=False, path_type=Path),
    metavar="DIR",
    help="Where the files go; made if it does not exist.",
)
@click.option("--format", "formats", multiple=True, type=click.Choice(FORMATS), help="png unless given; repeatable.")
@click.option(
    "--figure",
    "wanted",
    multiple=True,
    metavar="NAME",
    help="Draw this figure alone: long_profile, jump_strip, tailwater, gate_openings, levels, deliveries, ledger or "
    "plans (of several runs). Repeatable; all unless given.",
)
@click.option(
    "--at",
    metavar="TIME",
    help="Time of the long profile, such as 06:30, '+30 h' or 2031-05-05T06:30; that of the least protection margin "
    "unless given.",
)
@click.option("--overwrite", is_flag=True, help="Replace files that exist.")
def command(
    runs: tuple[Path, ...],
    folder: Path,
    formats: tuple[str, ...],
    wanted: tuple[str, ...],
    at: str | None,
    overwrite: bool,
) -> None:
    """Draw the figures of one or more runs into files, and write the numbers of each beside it as CSV.

    The names of the files begin with that of the run. Of several runs of one day a figure compares the plans. All files
    are written, or none. A figure is drawn in the units of the run's day, and its times are local.
    """
    from toeline.report.figures.files import write_pictures
    from toeline.results.dataset import damage_told

    for path in runs:
        refuse_other_than_run(path)
    check_names(wanted, len(runs))
    check_folder(folder)
    with damage_told(" or ".join(map(str, runs))), ExitStack() as stack:
        pictures = drawn([(path.stem, opened(path, stack)) for path in runs], wanted, at)
        folder.mkdir(parents=True, exist_ok=True)
        written = write_pictures(pictures, folder, formats or ("png",), overwrite=overwrite)
    show("\n".join(str(path) for path in written))


def check_folder(folder: Path) -> None:
    """UsageError where nothing can be written in the folder, or in that in which it is to be made."""
    from toeline.cli.output_files import refuse_folder

    refuse_folder(next(each for each in (folder, *folder.parents) if each.exists()), str(folder))


def check_names(wanted: Sequence[str], runs: int) -> None:
    from toeline.report.figures.catalogue import NAMES, PLANS
    from toeline.scenario.misfits import nearest

    for name in wanted:
        if name not in NAMES:
            raise UsageError(f'--figure: there is no figure "{name}"; {nearest(name, NAMES)}')
    if tuple(wanted) == (PLANS,) and runs < 2:
        raise UsageError(f"--figure {PLANS}: compares two runs or more; name their files")


def opened(path: Path, stack: ExitStack) -> "xr.Dataset":
    """A run with at least one output step, its values in memory unless it is long."""
    from toeline.results.dataset import read_run

    run = stack.enter_context(read_run(path))
    if not run.sizes["time"]:
        raise UsageError(f"{path}: the run was stopped before anything reached the disk; there is nothing to draw")
    return run


def drawn(
    runs: Sequence[tuple[str, "xr.Dataset"]], wanted: Sequence[str], at: str | None
) -> Iterator[tuple[str, "Picture"]]:
    """All wanted figures, each with the name of its files."""
    from toeline.report.figures.catalogue import NAMES, PLANS, run_pictures
    from toeline.report.figures.plans import check_alike, pictures
    from toeline.units import Display, UnitSystem

    chosen = wanted or NAMES
    datasets = [run for _, run in runs]
    display = Display(UnitSystem(datasets[0].attrs["units_for_display"]))
    compares = PLANS in chosen and len(runs) > 1
    if compares:
        check_alike(datasets)
    moments = [None if at is None else instant(at, run) for run in datasets]

    def build() -> Iterator[tuple[str, "Picture"]]:
        for (stem, run), moment in zip(runs, moments, strict=True):
            own = Display(UnitSystem(run.attrs["units_for_display"]))
            yield from ((f"{stem}.{picture.name}", picture) for picture in run_pictures(run, own, chosen, moment))
        if compares:
            day = common_stem([stem for stem, _ in runs])
            yield from ((f"{day}.{picture.name}", picture) for picture in pictures(datasets, display))

    return build()


def common_stem(stems: Sequence[str]) -> str:
    """What the names of several runs begin with: DAY of DAY.PLAN; else that of the first."""
    days = {stem.partition(".")[0] for stem in stems}
    return days.pop() if len(days) == 1 else stems[0]


def instant(at: str, run: "xr.Dataset") -> "np.datetime64":
    """A time as planners write it, as an instant of the run."""
    import numpy as np

    from toeline.report.run_clock import RunClock
    from toeline.scenario.times import Clock

    times, clock = run["time"].values, RunClock(run)
    length = int((times[-1] - times[0]) / np.timedelta64(1, "ms"))
    try:
        since = Clock(clock.start, length).milliseconds(at)
    except ValueError as error:
        raise UsageError(f"--at: {error}") from error
    return times[0] + np.timedelta64(since, "ms")

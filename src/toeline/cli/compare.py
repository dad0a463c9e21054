"""`toeline compare`: plans of a day, or runs, side by side."""

from collections.abc import Iterator, Sequence
from contextlib import ExitStack, contextmanager
from dataclasses import dataclass
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import TYPE_CHECKING

import click

from toeline.cli.exit_status import ExitStatus
from toeline.cli.input_files import INPUT_FILE, is_run, load_plans, refuse_twice
from toeline.cli.run import tell_of_compiling
from toeline.cli.run_size import is_long_run, tell_of_large_runs
from toeline.cli.terminal import WIDEST_PAGE, page_width, progress_bar
from toeline.errors import RunError, UsageError

if TYPE_CHECKING:
    import xarray as xr

    from toeline.findings.comparison import Comparison
    from toeline.report.run_clock import RunClock
    from toeline.scenario import Scenario
    from toeline.units import Display

FORMATS = ("text", "csv", "json")


@click.command(short_help="Lay plans of a day, or runs, side by side: what differs, and which goes better.")
@click.argument("files", type=INPUT_FILE, nargs=-1, required=True, metavar="FILE...")
@click.option(
    "--plan", "plans", multiple=True, metavar="NAME", help="Of a day, compare this plan. Repeat it; the first counts."
)
@click.option(
    "--set",
    "overrides",
    multiple=True,
    metavar="KEY=VALUE",
    help="Change a value of the day files for this comparison. May be repeated.",
)
@click.option(
    "--different-inputs",
    is_flag=True,
    help="Compare although the runs differ in more than their plans, and tell in what.",
)
@click.option("--format", "form", type=click.Choice(FORMATS), default="text", show_default=True, help="How it is told.")
@click.option(
    "-o",
    "--output",
    type=click.Path(dir_okay=False, path_type=Path),
    metavar="FILE",
    help="Write to FILE in place of the terminal.",
)
@click.option("--overwrite", is_flag=True, help="Replace an output file that exists.")
@click.option(
    "--strict",
    is_flag=True,
    help="Exit with status 3 if a run has an incident that is new or graver than in the first.",
)
@click.option(
    "--alike", is_flag=True, help="Exit with status 4 if results, incidents or indicators of the runs differ."
)
@click.pass_context
def command(
    ctx: click.Context,
    files: tuple[Path, ...],
    plans: tuple[str, ...],
    overrides: tuple[str, ...],
    different_inputs: bool,
    form: str,
    output: Path | None,
    overwrite: bool,
    strict: bool,
    alike: bool,
) -> None:
    """Compare all plans of a day file, or run files, with the first of them.

    FILE is a day file, each of whose plans is run without leaving a file of results, or a file of results; any number
    of both may be given. First comes what differs: orders in words; levels, discharges, deliveries and jumps, with
    place and time. Then the incidents and the indicators of each stand side by side. Runs that differ in more than
    their plans are refused unless told otherwise.
    """
    from toeline.cli.output_files import input_files, refuse_page, show_or_write
    from toeline.findings.comparison import compare
    from toeline.report.input_words import refusal_words
    from toeline.report.run_clock import RunClock
    from toeline.units import Display, UnitSystem

    sources = sources_of(files, plans, overrides)
    if output is not None:
        read = input_files([source.scenario for source in sources if source.scenario])
        refuse_page(output, {*files, *read}, overwrite)
    with opened_runs(sources) as runs:
        comparison = compare(runs)
        first = next(iter(runs.values()))
        clock, display = RunClock(first), Display(UnitSystem(first.attrs["units_for_display"]))
        if not (comparison.have_same_inputs or different_inputs):
            raise UsageError(refusal_words(comparison, clock, display))
        width = WIDEST_PAGE if output else page_width()
        show_or_write(told_as(form, comparison, clock, display, width), output)
    ctx.exit(exit_status(comparison, strict, alike))


@dataclass(frozen=True)
class Source:
    """Where one of the runs comes from: a file of results, or a plan of a day, which is still to be run."""

    path: Path
    scenario: "Scenario | None" = None

    @property
    def plan(self) -> str | None:
        """The plan of a day; None for a file of results, which knows its own."""
        return self.scenario.plan if self.scenario else None

    @contextmanager
    def opened(self) -> Iterator["xr.Dataset"]:
        """The run: in memory, or in a file where it is long, of a plan in one that nobody sees."""
        if self.scenario is None:
            from toeline.results.dataset import read_run

            with read_run(self.path) as run:
                yield run
            return
        if is_long_run(self.scenario):
            with TemporaryDirectory(prefix="toeline-") as folder, self._stepped(self.scenario, Path(folder)) as run:
                yield run
        else:
            yield self._stepped(self.scenario)

    def _stepped(self, scenario: "Scenario", folder: Path | None = None) -> "xr.Dataset":
        from toeline import simulate

        label = scenario.plan or self.path.stem
        output = None if folder is None else folder / f"{self.path.stem}.nc"
        try:
            with progress_bar(label) as progress:
                return simulate(scenario, output=output, progress=progress)
        except RunError as error:
            raise RunError(f"{label} of {self.path} cannot be compared: {error}") from error


def sources_of(files: Sequence[Path], plans: Sequence[str], overrides: Sequence[str]) -> list[Source]:
    """All that is to be compared. Raises UsageError where that is less than two, or one of it is named twice, before
    any work is done.
    """
    sources = [source for file in files for source in _sources_in(file, plans, overrides)]
    if len(sources) < 2:
        found = "a day with one plan" if sources[0].scenario else "one run"
        raise UsageError(f"found {found} to compare; allowed: a day with several plans, or several runs.")
    refuse_twice([(source.path, source.plan) for source in sources])
    return sources


def _sources_in(file: Path, plans: Sequence[str], overrides: Sequence[str]) -> list[Source]:
    if is_run(file):
        return [Source(file)]
    return [Source(file, scenario) for plan in plans or (None,) for scenario in load_plans(file, plan, overrides)]


@contextmanager
def opened_runs(sources: Sequence[Source]) -> Iterator[dict[str, "xr.Dataset"]]:
    """All runs by name: files opened, plans run in memory."""
    from toeline.results.dataset import damage_told

    scenarios = [source.scenario for source in sources if source.scenario]
    if scenarios:
        tell_of_large_runs(scenarios, "before they are compressed, in a file that is removed at the end")
        tell_of_compiling()
    with damage_told(" or ".join(str(source.path) for source in sources)), ExitStack() as stack:
        runs = [stack.enter_context(source.opened()) for source in sources]
        places = [(source.path, run.attrs["plan"]) for source, run in zip(sources, runs, strict=True)]
        yield dict(zip(run_names(places), runs, strict=True))


def run_names(places: Sequence[tuple[Path, str]]) -> list[str]:
    """Names that tell the runs apart, by file and plan: the plan, the file, or both."""
    full = [f"{path}, {plan}" for path, plan in places]
    shorter = (
        [plan or path.stem for path, plan in places],
        [path.stem for path, _ in places],
        [f"{path.stem}, {plan}" for path, plan in places],
    )
    return next((names for names in shorter if len(set(names)) == len(names)), full)


def told_as(form: str, comparison: "Comparison", clock: "RunClock", display: "Display", width: int) -> str:
    from toeline.report.comparison import comparison_page
    from toeline.report.comparison_rows import comparison_csv, comparison_json

    if form == "text":
        return comparison_page(comparison, clock, display, width=width)
    return (comparison_csv if form == "csv" else comparison_json)(comparison, clock, display)


def exit_status(comparison: "Comparison", strict: bool, alike: bool) -> ExitStatus:
    """Graver than the first weighs more than merely different."""
    if strict and comparison.is_any_graver:
        return ExitStatus.INCIDENT_FOUND
    return ExitStatus.RUNS_DIFFER if alike and not comparison.are_alike else ExitStatus.DONE

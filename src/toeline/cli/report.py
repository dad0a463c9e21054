"""`toeline report`: a page to look at runs with."""

from contextlib import ExitStack
from pathlib import Path

import click

from toeline.cli.input_files import INPUT_FILE, is_run
from toeline.cli.terminal import show
from toeline.errors import UsageError


@click.command(short_help="Make one page of HTML from a run, or from several side by side.")
@click.argument("runs", type=INPUT_FILE, nargs=-1, required=True, metavar="RUN...")
@click.option(
    "-o",
    "--output",
    type=click.Path(dir_okay=False, path_type=Path),
    metavar="PAGE",
    help="The page; RUN.html in the working directory unless given.",
)
@click.option("--overwrite", is_flag=True, help="Replace a page that exists.")
def command(runs: tuple[Path, ...], output: Path | None, overwrite: bool) -> None:
    """Make one page of HTML from the file of a run: what goes wrong, the canal moment by moment, and all numbers.

    Of several runs of one canal, such as two plans of a day, the page lays them side by side. It holds all it needs:
    any browser opens it, without a network.
    """
    page = output or Path(f"{runs[0].name.removesuffix('.partial').removesuffix('.nc')}.html")
    refuse(runs, page, overwrite)
    from toeline.report.page.document import report_page
    from toeline.results.dataset import open_run

    with ExitStack() as stack:
        opened = {str(run): stack.enter_context(open_run(run)) for run in runs}
        text = report_page(opened)
    write_page(page, text)
    show(f"Page: {page}")


def refuse(runs: tuple[Path, ...], page: Path, overwrite: bool) -> None:
    """Raise UsageError where a file is no run, or writing the page would fail or lose something."""
    for run in runs:
        if not is_run(run):
            raise UsageError(f"{run} is no file of results: name what `toeline run` wrote, such as DAY.nc.")
    if len({run.resolve() for run in runs}) < len(runs):
        raise UsageError("a run is named twice: name each run once.")
    if not page.parent.is_dir():
        raise UsageError(f"there is no directory {page.parent} to write {page.name} in.")
    if page.resolve() in {run.resolve() for run in runs}:
        raise UsageError(f"{page} is a run to be shown and would be lost: name another file with -o.")
    if page.exists() and not overwrite:
        raise UsageError(f"{page} exists: name another file with -o, or replace it with --overwrite.")


def write_page(page: Path, text: str) -> None:
    """Write the page whole: nothing half-written stands under its name."""
    unfinished = page.with_name(page.name + ".writing")
    try:
        unfinished.write_text(text, encoding="utf-8")
        unfinished.replace(page)
    finally:
        unfinished.unlink(missing_ok=True)

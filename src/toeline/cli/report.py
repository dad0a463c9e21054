"""`toeline report`: a page to look at runs with."""

from contextlib import ExitStack
from pathlib import Path

import click

from toeline.cli.input_files import INPUT_FILE, refuse_other_than_run, refuse_twice


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
    from toeline.cli.compare import run_names
    from toeline.cli.output_files import refuse_page, show_or_write
    from toeline.report.page.document import report_page
    from toeline.results.dataset import damage_told, read_run

    for run in runs:
        refuse_other_than_run(run)
    refuse_twice([(run, None) for run in runs])
    page = output or Path(f"{runs[0].name.removesuffix('.partial').removesuffix('.nc')}.html")
    refuse_page(page, runs, overwrite)
    with damage_told(" or ".join(map(str, runs))), ExitStack() as stack:
        opened = [stack.enter_context(read_run(run)) for run in runs]
        names = run_names([(file, run.attrs["plan"]) for file, run in zip(runs, opened, strict=True)])
        text = report_page(dict(zip(names, opened, strict=True)))
    show_or_write(text, page)

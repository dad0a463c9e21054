"""`toeline verify`: how far the answer of a day moves when it is computed in other ways."""

from pathlib import Path
from typing import TYPE_CHECKING

import click

from toeline.cli.exit_status import ExitStatus
from toeline.cli.input_files import INPUT_FILE, load_plans
from toeline.cli.terminal import WIDEST_PAGE, note, page_width, progress_bar
from toeline.errors import RunError

if TYPE_CHECKING:
    from toeline.findings.verification import Verification
    from toeline.scenario import Scenario


@click.command(short_help="Tell how far the answer of a day moves when it is computed in other ways.")
@click.argument("day", type=INPUT_FILE)
@click.option("--plan", metavar="NAME", help="Take this plan alone. Of several plans each has its page.")
@click.option(
    "--set",
    "overrides",
    multiple=True,
    metavar="KEY=VALUE",
    help="Change a value of the day file, such as period.spacing='\"50 m\"'. May be repeated.",
)
@click.option("--format", "form", type=click.Choice(["text", "json"]), default="text", help="Page, or numbers in SI.")
@click.option(
    "-o", "--output", type=click.Path(dir_okay=False, path_type=Path), metavar="FILE", help="Write it to FILE instead."
)
@click.option("--overwrite", is_flag=True, help="Replace a FILE that exists.")
@click.option(
    "--strict", is_flag=True, help="Exit with status 3 if the mass or the ramp test is outside its tolerance."
)
@click.pass_context
def command(
    ctx: click.Context,
    day: Path,
    plan: str | None,
    overrides: tuple[str, ...],
    form: str,
    output: Path | None,
    overwrite: bool,
    strict: bool,
) -> None:
    """Run the file DAY again with local inertia, with half the step and with half the spacing, and tell how far
    levels, discharges and jumps move from the day as it is, settled and settling.

    A mass test and a ramp test tell whether the computing loses water. This is how to see whether the quasi-steady
    answer is good enough for this canal; it makes no place safe. No file of results is written.
    """
    from toeline.cli.output_files import input_files, refuse_page, show_or_write
    from toeline.cli.run import tell_of_compiling
    from toeline.cli.run_size import tell_of_large_runs

    scenarios = load_plans(day, plan, overrides)
    if output is not None:
        refuse_page(output, input_files(scenarios), overwrite)
    tell_of_large_runs(scenarios, "in memory, several times over")
    tell_of_compiling()
    found = [(scenario, verification) for scenario in scenarios if (verification := verification_of(scenario))]
    if found:
        show_or_write(told(found, form, WIDEST_PAGE if output else page_width()), output)
    if len(found) < len(scenarios) or any(verification.has_failed for _, verification in found):
        ctx.exit(ExitStatus.RUN_FAILED)
    if strict and not all(verification.is_within_tolerance for _, verification in found):
        ctx.exit(ExitStatus.TEST_NOT_PASSED)


def verification_of(scenario: "Scenario") -> "Verification | None":
    """Verify one plan; nothing but a note where the day as it is cannot be run to its end."""
    from toeline.studies.verify import verify

    name = scenario.plan or scenario.day_path.stem
    try:
        with progress_bar(name) as progress:
            return verify(scenario, progress)
    except RunError as error:
        note(f"Error: {name}: {error}")
        return None


def told(found: "list[tuple[Scenario, Verification]]", form: str, width: int) -> str:
    """All pages, one after another, or a JSON list."""
    from toeline.report.verification import verification_page
    from toeline.report.verification_json import verification_json

    if form == "json":
        return verification_json([verification for _, verification in found])
    pages = (verification_page(verification, scenario.display, width=width) for scenario, verification in found)
    return "\n\n\n".join(pages)

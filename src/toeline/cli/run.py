"""`toeline run`: step the canal through the day."""

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, NamedTuple

import click
from click.exceptions import Exit

from toeline.cli.exit_status import ExitStatus
from toeline.cli.input_files import INPUT_FILE, load_plans
from toeline.cli.terminal import command_line, heeding_ctrl_c, note, page_width, progress_bar, show, shown_path
from toeline.errors import RunError, UsageError

if TYPE_CHECKING:
    from xarray import Dataset

    from toeline.scenario import Scenario


@click.command(short_help="Run a day and write the results to a file.")
@click.argument("day", type=INPUT_FILE)
@click.option(
    "-o",
    "--output",
    type=click.Path(dir_okay=False, path_type=Path),
    metavar="FILE",
    help="The file of results; DAY.nc in the working directory unless given. Where several plans run, the "
    "name of the plan goes before its ending: DAY.PLAN.nc.",
)
@click.option("--plan", metavar="NAME", help="Run this plan alone. Of several plans each runs, to its own file.")
@click.option(
    "--set",
    "overrides",
    multiple=True,
    metavar="KEY=VALUE",
    help="Change a value of the day file for this run, such as period.length='\"6 h\"'. May be repeated.",
)
@click.option("--overwrite", is_flag=True, help="Replace a file of results that exists.")
@click.option(
    "--resume",
    is_flag=True,
    help="Go on with a run that was stopped or killed, from FILE.partial and FILE.checkpoint, to the same results as "
    "if it had not been. Plans that are complete are left as they are; those not yet begun begin.",
)
@click.option("--strict", is_flag=True, help="Exit with status 3 if there was an incident.")
@click.pass_context
def command(
    ctx: click.Context,
    day: Path,
    output: Path | None,
    plan: str | None,
    overrides: tuple[str, ...],
    overwrite: bool,
    resume: bool,
    strict: bool,
) -> None:
    """Step the canal of the file DAY through its schedule, and tell what goes wrong, where, when and by how much.

    While it goes on the results are written to FILE.partial, which becomes FILE when the run is complete. Stopped
    by Ctrl-C (exit status 130), what was done so far stays in FILE.partial and can be described like a whole run, or
    gone on with by --resume.
    """
    from toeline.cli.output_files import choose_outputs, refuse_outputs
    from toeline.cli.run_size import tell_of_large_runs

    if resume and overwrite:
        raise UsageError("--resume goes on with a run and --overwrite begins it anew: give one of them.")
    scenarios = load_plans(day, plan, overrides)
    outputs = choose_outputs(scenarios, output)
    refuse_outputs(outputs, scenarios, overwrite, resume)
    tell_of_large_runs(scenarios, "before they are compressed")
    tell_of_compiling()
    for line in caution_lines(scenarios):
        note(line)
    if resume:
        tell_of_lost_checkpoints(outputs)
    ends = [run_plan(*pair, overwrite, resume, strict) for pair in zip(scenarios, outputs, strict=True)]
    if len(ends) > 1:
        show(plans_page(day, [scenario.plan or "" for scenario in scenarios], ends))
    statuses = {end.status for end in ends}
    ctx.exit(ExitStatus.RUN_FAILED if ExitStatus.RUN_FAILED in statuses else max(statuses))


class PlanEnd(NamedTuple):
    """How the run of a plan ended: the exit status, and what went wrong in a sentence."""

    status: ExitStatus
    words: str


def plans_page(day: Path, plans: Sequence[str], ends: Sequence[PlanEnd]) -> str:
    """What went wrong under each of several plans, below all of their pages, and what to do next."""
    from toeline.report.layout import INDENT, heading, paragraph

    width = page_width()
    told = (paragraph(f"{plan}: {end.words}", width, hanging=INDENT * 2) for plan, end in zip(plans, ends, strict=True))
    next_step = paragraph(f"Side by side: {command_line('compare', day)}", width, hanging=INDENT * 2)
    return "\n".join([heading("All plans"), *told, next_step])


def tell_of_compiling(kernel_name: str = "engine.advance.advance") -> None:
    """Say why the first run on a machine is slow to start; `kernel_name` is the last that the command needs."""
    from toeline.hydraulics.kernel import is_compiled

    if not is_compiled(kernel_name):
        note(
            "Compiling the equations that are needed for the first time on this machine: up to a minute, once. toeline "
            "warm-up compiles all of them."
        )


def tell_of_lost_checkpoints(outputs: Iterable[Path]) -> None:
    """Say of which runs nothing can be gone on with, though something of them is there."""
    from toeline.results.run_file import RunFile

    for output in outputs:
        file = RunFile(output, overwrite=False, goes_on=True)
        if file.partial_path.exists() and not file.checkpoint_path.exists():
            note(f"{file.partial_path} has no {file.checkpoint_path.name} beside it: its run begins anew.")


def caution_lines(scenarios: Iterable["Scenario"]) -> list[str]:
    """The cautions of the plans of a day, each told once."""
    from toeline.simulate import cautions

    found = dict.fromkeys(caution for scenario in scenarios for caution in cautions(scenario))
    return [f"Caution: {caution}" for caution in found]


def run_plan(scenario: "Scenario", output: Path, overwrite: bool, resume: bool, strict: bool) -> PlanEnd:
    """Run one plan, show its page and return how it ended; a failed run tells why and what is left of it."""
    from toeline.findings.incidents import incidents
    from toeline.report.incidents import incident_words
    from toeline.report.run_summary import run_summary

    try:
        is_there = resume and output.exists()
        dataset = finished_run(scenario, output) if is_there else stepped(scenario, output, overwrite, resume)
    except KeyboardInterrupt:
        note(f"Stopped by Ctrl-C. {what_is_left(output)}")
        raise Exit(ExitStatus.INTERRUPTED) from None
    except RunError as error:
        note(f"Error: {error}\n{what_is_left(output)}")
        return PlanEnd(ExitStatus.RUN_FAILED, "the run failed")
    with dataset:
        found = incidents(dataset)
        show(run_summary(dataset, scenario.display, width=page_width(), found=found))
        show(f"\nResults: {output}\n")
        return PlanEnd(ExitStatus.INCIDENT_FOUND if strict and found else ExitStatus.DONE, incident_words(found))


def stepped(scenario: "Scenario", output: Path, overwrite: bool, resume: bool) -> "Dataset":
    """Step a plan, with a bar that tells how far it is."""
    from toeline import simulate

    with progress_bar(scenario.plan or scenario.day_path.stem) as bar, heeding_ctrl_c(bar) as progress:
        return simulate(scenario, output, overwrite=overwrite, resume=resume, progress=progress)


def finished_run(scenario: "Scenario", output: Path) -> "Dataset":
    """The run of a plan that needs not go on, because it is complete. UsageError where the file is of another run."""
    from toeline.results.dataset import open_run
    from toeline.results.unfinished import check_same_run
    from toeline.simulate import attributes

    run = open_run(output)
    check_same_run(run.attrs, output, attributes(scenario))
    note(f"{output} is complete.")
    return run


def what_is_left(output: Path) -> str:
    from toeline.results.run_file import RunFile

    file = RunFile(output, overwrite=False)
    partial = shown_path(file.partial_path)
    if not partial.exists():
        return "Nothing was written."
    go_on = "; go on with it with: --resume" if file.checkpoint_path.exists() else ""
    return f"What was done so far is in {partial}; see it with: {command_line('describe', partial)}{go_on}"

"""`toeline check`: is this file fit to run?"""

from pathlib import Path

import click

from toeline.cli.input_files import INPUT_FILE, is_canal, load_plans
from toeline.cli.terminal import show


@click.command(short_help="Check a canal or day file and list every fault.")
@click.argument("file", type=INPUT_FILE)
def command(file: Path) -> None:
    """Read FILE, a canal or a day with its canal, and tell in one line what it holds.

    Every fault is listed with its file, line and key, what was found and what is allowed; exit status 2. The state
    that a day starts from is tried, too. What can be run, but may come out other than it was meant, is told as a
    caution. Nothing is stepped in time and nothing is written. But rules of your own that a plan names are loaded,
    which runs their code: check files that you trust.
    """
    from toeline.cli.canal_page import canal_line
    from toeline.scenario import load_canal

    line, *cautions = [canal_line(load_canal(file))] if is_canal(file) else checked_day(file)
    show("\n".join([f"{file}: {line}. No faults found.", *cautions]))


def checked_day(file: Path) -> list[str]:
    """What a day holds, in one line, then its cautions. Raises ScenarioError for all faults, or where it cannot start
    as asked.
    """
    from toeline.cli.day_page import day_line
    from toeline.cli.run import caution_lines, tell_of_compiling
    from toeline.simulate import ready

    plans = load_plans(file)
    tell_of_compiling()
    for plan in plans:
        ready(plan)
    return [day_line(plans), *caution_lines(plans)]

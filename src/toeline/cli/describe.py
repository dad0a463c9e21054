"""`toeline describe`: a canal, a day or a run in a page of text."""

from pathlib import Path

import click

from toeline.cli.input_files import INPUT_FILE, is_canal, is_run, load_plans
from toeline.cli.terminal import page_width, show


@click.command(short_help="Tell what is in a canal, a day or a run, in a page of text.")
@click.argument("file", type=INPUT_FILE)
def command(file: Path) -> None:
    """Tell what is in FILE: a canal, a day with its plans, or a run (complete, or stopped and still .partial)."""
    describe = describe_run if is_run(file) else describe_canal if is_canal(file) else describe_day
    show(describe(file, page_width()))


def describe_run(file: Path, width: int) -> str:
    from toeline.report.describe import run_page
    from toeline.results.dataset import damage_told, open_run

    with open_run(file) as dataset, damage_told(file):
        return run_page(dataset, width=width)


def describe_canal(file: Path, width: int) -> str:
    from toeline.cli.canal_page import canal_page
    from toeline.scenario import load_canal

    return canal_page(load_canal(file), width)


def describe_day(file: Path, width: int) -> str:
    from toeline.cli.day_page import day_page
    from toeline.cli.run import tell_of_compiling

    tell_of_compiling()
    return day_page(load_plans(file), width)

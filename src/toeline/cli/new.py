"""`toeline new`: a canal and a day to start from."""

from pathlib import Path

import click

from toeline.cli.terminal import show


@click.command(short_help="Write a small canal and a day to start from.")
@click.argument("directory", type=click.Path(file_okay=False, path_type=Path), metavar="DIR")
def command(directory: Path) -> None:
    """Write an invented canal and one day of it to DIR, ready to run and to be replaced by yours.

    DIR is made if it does not exist. A file that is already there is never replaced.
    """
    from toeline.scenario.starter import write_starter

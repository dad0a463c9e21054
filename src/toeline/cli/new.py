"""`toeline new`: a canal and a day to start from."""

from pathlib import Path

import click

from toeline.cli.terminal import command_line, show


@click.command(short_help="Write a small canal and a day to start from.")
@click.argument("directory", type=click.Path(file_okay=False, path_type=Path), metavar="DIR")
def command(directory: Path) -> None:
    """Write an invented canal and one day of it to DIR, ready to run and to be replaced by yours.

    DIR is made if it does not exist. No file that is already there is replaced.
    """
    from toeline.scenario import write_starter

    paths = [str(path) for path in write_starter(directory)]
    show(f"Wrote {' and '.join(paths)}; all in them is invented. Try: {command_line('run', paths[-1])}")

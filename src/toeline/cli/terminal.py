"""What the commands say, and where: pages on standard output, everything else on the error stream."""

import os
import shlex
import shutil
import signal
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path

import click

WIDEST_PAGE = 80


def show(page: str) -> None:
    """Print a page. A reader who has closed the pipe has seen enough: the command goes on, and its status stands."""
    try:
        click.echo(page)
    except BrokenPipeError:
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, sys.stdout.fileno())


def note(line: str) -> None:
    """Tell the user something that is not the result."""
    click.echo(line, err=True)


def shown_path(path: Path) -> Path:
    """A path as people type it: from the working directory where it lies inside."""
    return path.relative_to(Path.cwd()) if path.is_relative_to(Path.cwd()) else path


def command_line(*words: object) -> str:
    """A call of toeline as it can be typed: what the shell would take apart is quoted."""
    return shlex.join(["toeline", *map(str, words)])


def page_width() -> int:
    """Columns for a page: those of the terminal, 80 at most; 80 where there is no terminal."""
    if not sys.stdout.isatty():
        return WIDEST_PAGE
    return min(WIDEST_PAGE, shutil.get_terminal_size().columns)


@contextmanager
def progress_bar(label: str) -> Iterator[Callable[[float], None] | None]:
    """Draw a bar on the error stream if that is a terminal, and yield what moves it (a fraction 0 to 1)."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TaskProgressColumn, TextColumn, TimeRemainingColumn

    columns = (TextColumn("{task.description}", markup=False), BarColumn(), TaskProgressColumn(), TimeRemainingColumn())
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task(label, total=1.0)
        yield lambda fraction: bar.update(task, completed=fraction)


@contextmanager
def heeding_ctrl_c(progress: Callable[[float], None] | None) -> Iterator[Callable[[float], None]]:
    """Yield what a run calls as it goes on: it raises KeyboardInterrupt once Ctrl-C was pressed.

    The exception that the signal itself raises is lost where it falls into code that cannot raise.
    """
    is_pressed = False

    def remember(number: int, frame: object) -> None:
        nonlocal is_pressed
        is_pressed = True
        raise KeyboardInterrupt

    def go_on(fraction: float) -> None:
        if is_pressed:
            raise KeyboardInterrupt
        if progress is not None:
            progress(fraction)

    before = signal.signal(signal.SIGINT, remember)
    try:
        yield go_on
    finally:
        signal.signal(signal.SIGINT, before)

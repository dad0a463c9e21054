"""The command `toeline`: a group that loads a command's file when it is called.

Nothing heavy is imported here or at the top of a command's file, so that `toeline --help` opens at once.
"""

import atexit
import gc
from importlib import import_module

import click
from click.exceptions import Exit

from toeline import __version__
from toeline.cli.exit_status import ExitStatus
from toeline.cli.terminal import note
from toeline.errors import ScenarioError, ToelineError, UsageError

OBJECTS_BETWEEN_COLLECTIONS = 100_000
"""The modules of libraries are no garbage. Python's default of some hundreds searches them at every import, and all of
them once more at the end (measured: 0.07 s and 0.24 s of a run of 1.4 s).
"""

COMMANDS = ("new", "check", "run", "describe", "report", "figures", "orders", "compare", "rating", "verify", "warm-up")


class LazyGroup(click.Group):
    """A group whose commands are found by the name of their file.

    An error that the user can act on ends in its message on the error stream and an exit status, without a traceback.
    """

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"toeline.cli.{cmd_name.replace('-', '_')}").command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        name = args[0]
        if name not in COMMANDS and not name.startswith("-") and not ctx.resilient_parsing:
            from toeline.scenario.misfits import nearest

            raise UsageError(f'there is no command "{name}"; {nearest(name, COMMANDS)}')
        return super().resolve_command(ctx, args)

    def invoke(self, ctx: click.Context) -> object:
        try:
            return super().invoke(ctx)
        except ToelineError as error:
            note(error_words(error))
            raise Exit(error.exit_status) from error
        except KeyboardInterrupt:
            note("Stopped.")
            raise Exit(ExitStatus.INTERRUPTED) from None
        except BrokenPipeError:
            raise
        except OSError as error:
            note(f"Error: {error.filename or 'output'}: {error.strerror or error}")
            raise Exit(ExitStatus.RUN_FAILED) from error


def error_words(error: ToelineError) -> str:
    """The message for the error stream: every fault on its own line, then how many."""
    if not isinstance(error, ScenarioError):
        return f"Error: {error}"
    count = len(error.faults)
    return f"{error}\nError: {count} {'fault' if count == 1 else 'faults'} in the input; nothing was run."


@click.group(
    cls=LazyGroup,
    context_settings={"help_option_names": ["-h", "--help"]},
    epilog="Exit status: 0 done; 1 the run failed; 2 wrong use or a fault in the input; "
    "3 there was an incident, or a test was not passed (with --strict); 4 runs differ (compare --alike); "
    "130 stopped by Ctrl-C.",
)
@click.version_option(__version__, prog_name="toeline")
def main() -> None:
    """Plan a day of an irrigation canal: step its pools and check gates through the schedule.

    Toeline tells the levels, the discharges, whether each gate flows free or drowned, and where the
    hydraulic jump below it stands against its apron. A planning aid: it commands nothing, a qualified
    engineer reviews its limits and results, and no state that it shows is safe to enter.
    """
    gc.set_threshold(OBJECTS_BETWEEN_COLLECTIONS)
    atexit.register(gc.freeze)

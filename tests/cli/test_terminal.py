"""What the commands say, and where."""

import os
import signal
import subprocess
import sys
from pathlib import Path

import pytest

from toeline.cli.terminal import command_line, heeding_ctrl_c, page_width, progress_bar


def test_a_page_for_a_pipe_is_80_columns_wide(capsys):
    assert page_width() == 80


def test_nothing_is_drawn_where_there_is_no_terminal(capsys):
    with progress_bar("proposed") as progress:
        assert progress is None
    captured = capsys.readouterr()
    assert (captured.out, captured.err) == ("", "")


def test_a_reader_who_closes_the_pipe_changes_nothing():
    program = (
        "import sys; from toeline.cli.terminal import show\n"
        "for line in range(50_000): show(f'line {line}')\n"
        "sys.exit(3)"
    )
    writer = subprocess.Popen([sys.executable, "-c", program], stdout=subprocess.PIPE, stderr=subprocess.PIPE)
    assert writer.stdout is not None
    assert writer.stderr is not None
    writer.stdout.readline()
    writer.stdout.close()
    complaint = writer.stderr.read()
    writer.stderr.close()
    assert (writer.wait(), complaint) == (3, b"")


class LosesCtrlC:
    """Pressed while this is thrown away, Ctrl-C raises where nothing can be raised."""

    def __del__(self):
        os.kill(os.getpid(), signal.SIGINT)
        sum(range(1000))  # the signal is handled between two steps of Python


@pytest.mark.filterwarnings("ignore::pytest.PytestUnraisableExceptionWarning")
def test_ctrl_c_whose_exception_was_lost_stops_at_the_next_step():
    before = signal.getsignal(signal.SIGINT)
    with heeding_ctrl_c(None) as progress:
        progress(0.1)
        thing = LosesCtrlC()
        del thing
        with pytest.raises(KeyboardInterrupt):
            progress(0.2)
    assert signal.getsignal(signal.SIGINT) is before


def test_a_call_that_is_told_can_be_typed():
    assert command_line("describe", Path("day.nc")) == "toeline describe day.nc"
    assert command_line("describe", Path("early plan.nc")) == "toeline describe 'early plan.nc'"

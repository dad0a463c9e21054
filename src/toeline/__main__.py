"""`python -m toeline` is the command `toeline`."""

from toeline.cli.main import main

main(prog_name="toeline")

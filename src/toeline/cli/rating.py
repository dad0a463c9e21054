"""`toeline rating`: what a gate passes."""

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import click

from toeline.cli.input_files import INPUT_FILE, is_day
from toeline.cli.option_values import lengths
from toeline.cli.output_files import refuse_folder
from toeline.cli.run import tell_of_compiling
from toeline.cli.terminal import note, page_width, show
from toeline.errors import UsageError

if TYPE_CHECKING:
    from toeline.scenario import CanalFile

QUANTITIES = "LEVEL[,LEVEL...]"
CHART_ENDINGS = (".png", ".svg", ".pdf")
CHART_TABLES = (".csv", ".discharge.csv")
LEAST_SHOWN = 1e-4
"""To this [m] a message writes a level: what it names is allowed."""


@click.command(short_help="Tabulate the discharge of a gate, its modular limit and where its jump leaves the floor.")
@click.argument("canal", type=INPUT_FILE)
@click.argument("gate")
@click.option("--headwater", metavar=QUANTITIES, help="Levels above the gate, such as 103.2,103.6 or '340 ft'.")
@click.option("--tailwater", metavar=QUANTITIES, help="Levels below the gate.")
@click.option("--opening", metavar="OPENING[,OPENING...]", help="Openings, lip above sill.")
@click.option(
    "--csv",
    "csv_file",
    type=click.Path(dir_okay=False, path_type=Path),
    metavar="FILE",
    help="Write the table to FILE as well, one row a value, in the units of the canal file.",
)
@click.option(
    "--chart",
    "chart_file",
    type=click.Path(dir_okay=False, path_type=Path),
    metavar="FILE",
    help="Draw the operating chart into FILE (.png, .svg or .pdf): what flow and jump do over tailwater and opening, "
    "at up to three headwaters, with the numbers as CSV beside it.",
)
@click.option("--overwrite", is_flag=True, help="Replace files that exist.")
def command(
    canal: Path,
    gate: str,
    headwater: str | None,
    tailwater: str | None,
    opening: str | None,
    csv_file: Path | None,
    chart_file: Path | None,
    overwrite: bool,
) -> None:
    """Tabulate the discharge of GATE of the file CANAL by headwater, tailwater and opening.

    For each headwater and opening it tells the modular limit, the tailwater above which the flow is drowned, and
    the tailwater below which the end of the jump leaves the protected floor. What is not given is chosen from the
    levels of the canal. Plain numbers are in the units of the canal file. Levels are above its datum: the headwater
    not below the sill, the tailwater not below the floor below the gate.
    """
    from toeline.cli.rating_page import rating_page, write_csv
    from toeline.network.rating import rating_table
    from toeline.scenario import load_canal
    from toeline.units import Display

    check_files(canal, csv_file, overwrite)
    check_chart(chart_file, csv_file, overwrite)
    canal_file = load_canal(canal)
    check_gate(canal_file, gate)
    chosen = chosen_values(canal_file, gate, headwater, tailwater, opening)
    tell_of_compiling("hydraulics.jump_location.protection_margin")
    rows = rating_table(canal_file, gate, *chosen)
    drawn: list[Path] = []
    if chart_file is not None:
        from toeline.cli.rating_chart import write_chart

        drawn = write_chart(chart_file, canal_file, gate, *chosen, overwrite=overwrite)
    if csv_file is not None:
        write_csv(csv_file, rows, canal_file.units)
    show(rating_page(rows, f"{gate}, {canal_file.canal.name}", Display(canal_file.units), page_width()))
    for path in drawn:
        note(f"Chart: {path}")


def check_files(canal: Path, csv_file: Path | None, overwrite: bool) -> None:
    if is_day(canal):
        raise UsageError(f"{canal} is a day file: name the file of its canal.")
    if csv_file is None:
        return
    refuse_folder(csv_file.parent, csv_file.name)
    if csv_file.exists():
        if csv_file.samefile(canal):
            raise UsageError(f"{csv_file} is the canal file and would be lost: name another file.")
        if not overwrite:
            raise UsageError(f"{csv_file} exists: name another file, or replace it with --overwrite.")


def check_chart(chart_file: Path | None, csv_file: Path | None, overwrite: bool) -> None:
    if chart_file is None:
        return
    if csv_file is not None and csv_file.resolve() in (chart_file.with_suffix(end).resolve() for end in CHART_TABLES):
        raise UsageError(f"--csv {csv_file}: the chart writes its own numbers there; name another file.")
    if chart_file.suffix.lower() not in CHART_ENDINGS:
        raise UsageError(f"--chart {chart_file}: the name must end in {', '.join(CHART_ENDINGS)}.")
    refuse_folder(chart_file.parent, chart_file.name)
    if chart_file.exists() and not overwrite:
        raise UsageError(f"{chart_file} exists: name another file, or replace it with --overwrite.")


def chosen_values(
    canal_file: "CanalFile", gate: str, headwater: str | None, tailwater: str | None, opening: str | None
) -> list[list[float]]:
    """Headwaters, tailwaters and openings in SI: those given, the others from the levels of the canal.

    UsageError for levels at which the gate cannot be rated, and for openings that it has not.
    """
    from toeline.network.rating import default_rating_levels

    given = [
        None if text is None else lengths(option, text, canal_file.units)
        for option, text in (("--headwater", headwater), ("--tailwater", tailwater), ("--opening", opening))
    ]
    check_levels(canal_file, gate, given[0], given[1])
    chosen = [
        list(default) if values is None else values
        for values, default in zip(given, default_rating_levels(canal_file, gate), strict=True)
    ]
    check_openings(canal_file, gate, chosen[2])
    return chosen


def check_levels(
    canal_file: "CanalFile", gate: str, headwaters: Sequence[float] | None, tailwaters: Sequence[float] | None
) -> None:
    from toeline.network.rating import ratable_levels
    from toeline.units import quantity_text

    above, below = ratable_levels(canal_file, gate)
    told = (
        ("--headwater", headwaters or (), above, f"the sill of {gate}"),
        ("--tailwater", tailwaters or (), below, f"the floor below {gate}"),
    )
    for option, levels, (least, most), base in told:
        outside = [level for level in levels if not least - LEAST_SHOWN <= level <= most + LEAST_SHOWN]
        if outside:
            found, first, last = (quantity_text(one, "length", canal_file.units) for one in (outside[0], least, most))
            raise UsageError(
                f"{option}: found {found}; allowed: levels above the datum, from {base}, {first}, to {last}"
            )


def check_openings(canal_file: "CanalFile", gate: str, openings: Sequence[float]) -> None:
    from toeline.units import quantity_text

    if min(openings) < 0.0:
        raise UsageError("--opening: openings count from the closed gate upward, from 0.")
    most = next(known.max_opening for known in canal_file.canal.gates if known.name == gate)
    if max(openings) > most:
        allowed = quantity_text(most, "length", canal_file.units)
        raise UsageError(f"--opening: {gate} opens to {allowed}, by max_opening of the canal file.")


def check_gate(canal_file: "CanalFile", gate: str) -> None:
    from toeline.scenario.misfits import nearest

    names = [known.name for known in canal_file.canal.gates]
    if gate not in names:
        raise UsageError(f'{canal_file.canal.name} has no gate "{gate}"; {nearest(gate, names)}')

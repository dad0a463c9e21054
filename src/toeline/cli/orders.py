"""`toeline orders`: order sheets of a run, to print, to read and to carry on a phone."""

from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import replace
from datetime import timedelta
from pathlib import Path
from typing import TYPE_CHECKING

import click

from toeline.cli.input_files import INPUT_FILE, refuse_other_than_run
from toeline.cli.option_values import lengths
from toeline.cli.output_files import file_name, refuse_folder, write_together
from toeline.cli.terminal import command_line, note, page_width, show
from toeline.errors import UsageError

if TYPE_CHECKING:
    import xarray as xr
    from icalendar import Calendar

    from toeline.report.order_sheet import By, Sheet
    from toeline.report.order_sheet_pdf import Paper

FORMATS = {"pdf": ".pdf", "text": ".txt", "csv": ".csv"}
CALENDAR = ".ics"
MOST_ALLOWED = 0.5
"""Widest allowance [m]: with more a band says nothing, and a number in the wrong unit is near (choice)."""


@click.command(short_help="Write the order sheets of a run: to print, as text, CSV and calendar.")
@click.argument("run", type=INPUT_FILE)
@click.option(
    "-o",
    "--output",
    type=click.Path(file_okay=False, path_type=Path),
    metavar="FOLDER",
    help="Where the sheets go; RUN.orders in the working directory unless given. It is made if it does not exist.",
)
@click.option(
    "--by",
    type=click.Choice(["gatekeeper", "gate"]),
    help="One sheet for each; gatekeeper unless given, where the canal file names any.",
)
@click.option(
    "--format",
    "formats",
    multiple=True,
    type=click.Choice(list(FORMATS)),
    help="Write this format; all unless given. May be repeated. A calendar, which keeps the revision, is always "
    "written.",
)
@click.option("--paper", type=click.Choice(["A4", "Letter"], case_sensitive=False), default="A4", show_default=True)
@click.option(
    "--allow",
    metavar="LENGTH",
    help="What a reading may be off for reading the gauge and for what the simulation does not know, such as "
    "'3 cm': it widens every band. 1 cm or 0.01 ft unless given.",
)
@click.option(
    "--alarm",
    type=click.IntRange(0, 1440),
    default=15,
    show_default=True,
    metavar="MINUTES",
    help="Alarm of the calendar before each order; 0 for none.",
)
@click.option("--overwrite", is_flag=True, help="Replace sheets that exist, as a revision of what was issued.")
def command(
    run: Path,
    output: Path | None,
    by: "By | None",
    formats: tuple[str, ...],
    paper: "Paper",
    allow: str | None,
    alarm: int,
    overwrite: bool,
) -> None:
    """Write the orders of the file RUN as sheets, one for each gatekeeper or gate.

    A sheet tells when to move which gate, from and to which opening, in how many turns, what the gauges should read
    before and after, and when to stop and call; it has blanks for what was read and who signs. With --overwrite, sheets
    of the same plan and day are revised: the revision rises where another run is issued, and calendars that took in the
    old file take in the new.
    """
    from toeline.report.order_calendar import issue
    from toeline.report.order_sheet import order_sheets
    from toeline.results.dataset import damage_told, read_run

    refuse_other_than_run(run)
    folder = output or Path(f"{run.stem}.orders")
    suffixes = [FORMATS[name] for name in formats or FORMATS]
    with damage_told(run), read_run(run) as dataset:
        if not dataset.sizes["time"]:
            raise UsageError(f"{run} was stopped before anything reached the disk: there are no orders to write.")
        if not dataset.sizes["gate"]:
            raise UsageError(f"{run} is of a canal without gates: there is nobody to write orders for.")
        sheets = order_sheets(dataset, by, allowance=allowance_of(allow, dataset))
        stems = sheet_files(sheets)
        refuse_files(folder, stems.values(), [*suffixes, CALENDAR], overwrite)
        issued = issue(dataset, sheets, earlier_calendars(folder, stems), timedelta(minutes=alarm) if alarm else None)
        sheets = [replace(sheet, revision=issued.revision) for sheet in sheets]
        contents = {
            stems[sheet.whose] + suffix: content
            for sheet in sheets
            for suffix, content in sheet_contents(sheet, dataset, suffixes, paper)
        }
        contents |= {stems[whose] + CALENDAR: calendar.to_ical() for whose, calendar in issued.calendars.items()}
        folder.mkdir(exist_ok=True)
        write_together({folder / name: content for name, content in contents.items()})
        show(issue_page(run, folder, sheets, stems, [*suffixes, CALENDAR]))
        tell_what_to_look_at(run, dataset)
        tell_of_left_overs(folder, stems.values())


def allowance_of(text: str | None, run: "xr.Dataset") -> float | None:
    """The length of the option in m; a plain number is in the units of the sheets."""
    from toeline.units import UnitSystem

    if text is None:
        return None
    given = lengths("--allow", text, UnitSystem(run.attrs["units_for_display"]))
    if len(given) > 1 or not 0.0 <= given[0] <= MOST_ALLOWED:
        raise UsageError(f"--allow: found {text}; allowed: one length, from 0 to {MOST_ALLOWED:.2f} m, such as '3 cm'")
    return given[0]


def sheet_files(sheets: Sequence["Sheet"]) -> dict[str, str]:
    """The name of the files of each sheet, without ending, by whose it is."""
    stems = {sheet.whose: file_name(sheet.whose) for sheet in sheets}
    if len({stem.casefold() for stem in stems.values()}) < len(stems):
        raise UsageError("two sheets would go to one file: rename a gatekeeper or a gate in the canal file.")
    return stems


def refuse_files(folder: Path, stems: Collection[str], suffixes: Sequence[str], overwrite: bool) -> None:
    """Raise UsageError where writing a sheet would fail or lose something."""
    refuse_folder(folder if folder.is_dir() else folder.parent, folder.name)
    for path in (folder / (stem + suffix) for stem in stems for suffix in suffixes):
        if path.is_dir():
            raise UsageError(f"{path} is a directory and in the way: name another folder with -o.")
        if path.exists() and not overwrite:
            raise UsageError(f"{path} exists: name another folder with -o, or issue a revision with --overwrite.")


def earlier_calendars(folder: Path, stems: Mapping[str, str]) -> dict[str, "Calendar"]:
    """The calendars that an earlier issue left in the folder, by whose they are, or by their file if nobody's now.

    UsageError for one that is to be revised and cannot be read.
    """
    from icalendar import Calendar

    whose = {stem + CALENDAR: name for name, stem in stems.items()}
    found = {}
    for path in sorted(folder.glob(f"*{CALENDAR}")):
        try:
            found[whose.get(path.name, path.name)] = Calendar.from_ical(path.read_bytes())
        except ValueError as error:
            if path.name in whose:
                raise UsageError(f"{path} is no calendar that can be revised; move it away: {error}") from error
    return found


def sheet_contents(
    sheet: "Sheet", run: "xr.Dataset", suffixes: Sequence[str], paper: "Paper"
) -> Iterator[tuple[str, bytes]]:
    """The sheet in each of the formats, by ending."""
    from toeline.report.order_calendar import made
    from toeline.report.order_sheet_csv import sheet_csv
    from toeline.report.order_sheet_text import sheet_text

    for suffix in suffixes:
        if suffix == FORMATS["pdf"]:
            from toeline.report.order_sheet_pdf import sheet_pdf

            yield suffix, sheet_pdf(sheet, paper, made(run))
        else:
            text = sheet_text(sheet) if suffix == FORMATS["text"] else sheet_csv(sheet, run)
            yield suffix, text.encode()


def issue_page(
    run: Path, folder: Path, sheets: Sequence["Sheet"], stems: Mapping[str, str], suffixes: Sequence[str]
) -> str:
    """What was written: a line for each sheet."""
    from toeline.report.layout import paragraph, table

    width = page_width()
    rows = [(sheet.whose, contents(sheet), stems[sheet.whose]) for sheet in sheets]
    title = paragraph(f"Order sheets of {run}: {sheets[0].plan}, revision {sheets[0].revision}", width, indent="")
    where = paragraph(f"In {folder}, each as {', '.join(suffixes)}", width, indent="")
    return "\n".join([title, table(("", "", "file"), rows, width), where])


def contents(sheet: "Sheet") -> str:
    """What a sheet asks for, in numbers."""
    from toeline.report.layout import counted

    visits = sum(form.count for form in sheet.rounds)
    orders = counted(len(sheet.orders), "order")
    return f"{orders}, {counted(visits, 'visit')}" if visits else orders


def tell_what_to_look_at(run: Path, dataset: "xr.Dataset") -> None:
    """Say what the planner should have seen before the sheets go out."""
    from toeline.findings.incidents import incidents
    from toeline.report.layout import counted

    changed = sum(bool(reason) for reason in dataset["order_reason"].values)
    found = {"incident": len(incidents(dataset)), "order": changed}
    words = [counted(count, noun) for noun, count in found.items() if count]
    if words:
        given = " not carried out as given" if changed else ""
        note(f"In the run: {', '.join(words)}{given}. Look before the sheets go out: {command_line('describe', run)}")


def tell_of_left_overs(folder: Path, stems: Collection[str]) -> None:
    """Name calendars that were not written now: nobody is told that their orders do not hold any more."""
    left = [path.name for path in sorted(folder.glob(f"*{CALENDAR}")) if path.stem not in stems]
    if left:
        note(f"From an earlier issue, and not written now: {', '.join(left)}. Tell who holds them, and remove them.")

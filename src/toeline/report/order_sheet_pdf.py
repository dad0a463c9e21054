"""An order sheet to print: A4 or Letter, black on white, nothing smaller than 11 pt, blanks large enough for a pen.

The letters are those of DejaVu Sans, which comes with matplotlib under its own free licence and may be embedded.
"""

from collections.abc import Callable, Iterator, Sequence
from datetime import datetime
from functools import partial
from pathlib import Path
from typing import Literal, cast

import matplotlib
from fpdf import FPDF
from fpdf.enums import Align, MethodReturnValue, XPos, YPos
from fpdf.fonts import TTFFont

from toeline.constants import FIELD_CAUTION
from toeline.errors import UsageError
from toeline.report.order_sheet import ReadingWords, Sheet, SheetOrder
from toeline.report.order_words import loud
from toeline.report.rounds import BLANKS, RoundsForm

Paper = Literal["A4", "Letter"]

FONT = "DejaVu Sans"
SMALL, MIDDLE, LARGE, LARGEST = 11.0, 12.0, 14.0, 18.0
"""Sizes of letters [pt]."""

MARGIN = 15.0
LINE = 1.25
"""Height of a line over the size of its letters."""
POINT = 25.4 / 72.0
GAP = 2.0
BLANK = 10.5
"""Height of a box to write in [mm]."""
THIN, THICK = 0.2, 0.6
"""Widths of rules [mm]."""
VISITS_TOGETHER = 6
"""Lines of visits that are not torn apart."""
FOOT = 3 * SMALL * POINT * LINE + 3.0
"""Height of the foot of a page: a rule and the caution [mm]."""

Part = Callable[["_Page"], None]
"""Draws itself on a page, from where the page is."""


def sheet_pdf(sheet: Sheet, paper: Paper, created: datetime) -> bytes:
    """The sheet as a PDF file. UsageError where a name has letters that the font lacks."""
    page, rehearsal = _Page(sheet, paper, created), _Page(sheet, paper, created)
    try:
        page.write_all(rehearsal)
        if unknown := {chr(code) for font in page.faces for code in font.missing_glyphs}:
            letters = " ".join(sorted(unknown))
            raise UsageError(f"the font of printed sheets lacks {letters}; choose other formats, such as --format text")
        return bytes(page.output())
    finally:
        for font in (*page.faces, *rehearsal.faces):
            font.close()


class _Page(FPDF):
    def __init__(self, sheet: Sheet, paper: Paper, created: datetime):
        super().__init__(format=paper.lower())
        self._sheet = sheet
        self._top = MARGIN
        self._add_faces()
        self.set_margin(MARGIN)
        self.set_auto_page_break(True, MARGIN - 3.0 + FOOT)
        self.set_title(f"Order sheet: {sheet.whose}, {sheet.canal}, {sheet.day}")
        self.set_creator(sheet.version)
        self.set_creation_date(created)
        self.set_lang("en")

    def _add_faces(self) -> None:
        folder = Path(matplotlib.get_data_path()) / "fonts" / "ttf"
        for style, file in (("", "DejaVuSans.ttf"), ("B", "DejaVuSans-Bold.ttf")):
            self.add_font(FONT, style, folder / file)

    @property
    def faces(self) -> list[TTFFont]:
        """The fonts of the page; their files are open until they are closed."""
        return [font for font in self.fonts.values() if isinstance(font, TTFFont)]

    def write_all(self, rehearsal: "_Page") -> None:
        """Write all pages; `rehearsal` is a page of the same kind on which parts are tried for their height."""
        rehearsal.set_auto_page_break(False)
        rehearsal.add_page()
        self.add_page()
        for part in self._parts():
            height = rehearsal.height_of(part)
            if self._top < self.get_y() and self.get_y() + height > self.page_break_trigger:
                self.add_page()
            part(self)

    def height_of(self, part: Part) -> float:
        """Height [mm] of a part, drawn here from the top of the page."""
        self.set_y(self._top + GAP)
        part(self)
        return self.get_y() - self._top - GAP

    def _parts(self) -> Iterator[Part]:
        """What is not to be torn, one after another."""
        sheet = self._sheet
        yield lambda page: page._boxed(f"Call: {sheet.call}", LARGE)
        for title, lines in sheet.lists_before:
            yield partial(_Page._list, title=title, lines=lines)
        if not sheet.orders:
            yield lambda page: page._text(sheet.orders_line, MIDDLE, bold=True)
        for order in sheet.orders:
            yield partial(_Page._order, order=order)
        for form in sheet.rounds:
            for first in range(0, len(form.visits), VISITS_TOGETHER):
                yield partial(_Page._rounds, form=form, first=first)
        for title, lines in sheet.lists_after:
            yield partial(_Page._list, title=title, lines=lines)
        yield lambda page: page._blanks(*sheet.blanks)

    def header(self) -> None:
        """What every page says: whose sheet, which day, plan and revision, units, and which page it is."""
        sheet = self._sheet
        self._font(SMALL)
        width = self.get_string_width("page 10 of 10") + 2 * self.c_margin
        self.set_xy(self.w - MARGIN - width, MARGIN)
        self.cell(width, LARGEST * POINT * LINE, f"page {self.page_no()} of {{nb}}")
        self.set_xy(MARGIN, MARGIN)
        self._text(sheet.whose, LARGEST, bold=True, width=self.epw - width)
        self._text(f"Orders of {sheet.canal}: {sheet.title}", SMALL, bold=True)
        self._text(sheet.day, SMALL)
        self._text(f"{sheet.about}; {sheet.version}; {sheet.units}", SMALL)
        self._rule(THICK)
        self._top = self.get_y()

    def footer(self) -> None:
        self.set_xy(MARGIN, self.h - MARGIN + 3.0 - FOOT)
        self._rule(THIN)
        self._text(FIELD_CAUTION, SMALL)

    def _order(self, order: SheetOrder) -> None:
        if order.number == 1:
            self._text(self._sheet.orders_line, MIDDLE, bold=True)
        if self.get_y() > self._top:
            self._rule(THICK)
        self._title(order)
        self._text(order.openings, MIDDLE)
        if order.warning:
            self._boxed(order.warning)
        if order.readings:
            self._readings(order)
        if order.notes:
            self._text(" ".join(order.notes), SMALL)
        if order.stop:
            self._labelled("Stop and call if", "; ".join(order.stop) + ".")
        self._blanks(*order.blanks)

    def _rounds(self, form: RoundsForm, first: int) -> None:
        """Lines to fill in, from visit number `first` on; the note below the last."""
        self._text(form.title, MIDDLE, bold=True)
        widths = [share * self.epw for share in (0.25, 0.17, 0.17, 0.17, 0.24)]
        self._row(widths, [(head, "") for head in ("Visit", *BLANKS)], 0.0)
        for visit in form.visits[first : first + VISITS_TOGETHER]:
            self._row(widths, [(visit, ""), *(("", "") for _ in BLANKS)], BLANK)
        if form.note and first + VISITS_TOGETHER >= len(form.visits):
            self._text(form.note, SMALL)
        self.set_y(self.get_y() + GAP)

    def _title(self, order: SheetOrder) -> None:
        top = self.get_y() + 1.0
        half = self.epw / 2
        self.set_xy(MARGIN, top)
        self._text(f"{order.number}.  {order.at}  {order.leaf}", LARGE, bold=True, width=half + 10.0)
        left = self.get_y()
        self.set_xy(MARGIN + half + 12.0, top)
        self._text(loud(order.move), LARGE, bold=True, width=half - 12.0)
        self.set_y(max(left, self.get_y()))

    def _readings(self, order: SheetOrder) -> None:
        widths = [share * self.epw for share in (0.23, 0.235, 0.15, 0.235, 0.15)]
        heads = ("Reading", f"before, {order.read_before}", "read", f"after, {order.read_after}", "read")
        self.set_y(self.get_y() + 1.0)
        self._row(widths, [(head, "") for head in heads], 0.0)
        for line in order.readings:
            self._row(widths, _cells(line), BLANK)
        self.set_y(self.get_y() + 1.0)

    def _row(self, widths: Sequence[float], cells: Sequence[tuple[str, str]], least: float) -> None:
        """Boxes side by side, each with a text and one below it, as high as the highest or the least [mm]."""
        lines = max(self._lines(texts, width) for width, texts in zip(widths, cells, strict=True))
        height = max(least, lines * SMALL * POINT * LINE + 1.0)
        top, left = self.get_y(), MARGIN
        self.set_line_width(THIN)
        for width, (first, second) in zip(widths, cells, strict=True):
            self.rect(left, top, width, height)
            self.set_xy(left, top + 0.5)
            if first:
                self._text(first, SMALL, bold=bool(second) and left > MARGIN, width=width)
            if second:
                self.set_x(left)
                self._text(second, SMALL, width=width)
            left += width
        self.set_xy(MARGIN, top + height)

    def _lines(self, texts: Sequence[str], width: float) -> int:
        """Lines that texts below one another take in a box."""
        self._font(SMALL)
        wrapped = [
            cast(list[str], self.multi_cell(width, text=text, dry_run=True, output=MethodReturnValue.LINES))
            for text in texts
            if text
        ]
        return sum(len(lines) for lines in wrapped)

    def _boxed(self, text: str, size: float = MIDDLE) -> None:
        top = self.get_y() + 1.0
        self.set_xy(MARGIN + 2.0, top + 1.0)
        self._text(text, size, bold=True, width=self.epw - 4.0)
        self.set_line_width(THICK)
        self.rect(MARGIN, top, self.epw, self.get_y() + 1.0 - top)
        self.set_y(self.get_y() + 2.0)

    def _labelled(self, label: str, text: str) -> None:
        self._text(label, SMALL, bold=True, width=36.0, stay=True)
        self.set_x(MARGIN + 36.0)
        self._text(text, SMALL, width=self.epw - 36.0)

    def _blanks(self, *names: str) -> None:
        """Boxes to write in, each with its name inside at the left."""
        top, width = self.get_y() + 1.0, self.epw / len(names)
        self.set_line_width(THIN)
        for place, name in enumerate(names):
            self.rect(MARGIN + place * width, top, width, BLANK)
            self.set_xy(MARGIN + place * width, top)
            self._text(name, SMALL, width=width)
        self.set_xy(MARGIN, top + BLANK + 2.0)

    def _list(self, title: str, lines: Sequence[str]) -> None:
        self._text(title, MIDDLE, bold=True)
        for line in lines:
            self._text("–", SMALL, width=5.0, stay=True)
            self.set_x(MARGIN + 5.0)
            self._text(line, SMALL, width=self.epw - 5.0)
        self.set_y(self.get_y() + GAP)

    def _text(self, text: str, size: float, *, bold: bool = False, width: float = 0.0, stay: bool = False) -> None:
        """Text wrapped to a width from here on (the rest of the line unless given); then to the line below, or not."""
        self._font(size, bold)
        below = YPos.TOP if stay else YPos.NEXT
        self.multi_cell(width, size * POINT * LINE, text, align=Align.L, new_x=XPos.LMARGIN, new_y=below)

    def _font(self, size: float, bold: bool = False) -> None:
        self.set_font(FONT, "B" if bold else "", size)

    def _rule(self, thickness: float) -> None:
        self.set_line_width(thickness)
        self.line(MARGIN, self.get_y(), self.w - MARGIN, self.get_y())
        self.set_y(self.get_y() + 1.0)


def _cells(line: ReadingWords) -> list[tuple[str, str]]:
    return [
        (line.place, line.instrument),
        (line.before, line.before_band),
        ("", ""),
        (line.after, line.after_band),
        ("", ""),
    ]

"""An order sheet as plain text, 80 columns."""

from collections.abc import Iterator, Sequence

from toeline.report.layout import INDENT, heading, paragraph, table
from toeline.report.order_sheet import Sheet, SheetOrder
from toeline.report.order_words import loud
from toeline.report.rounds import BLANKS, RoundsForm

WIDTH = 80
BLANK = "________"


def sheet_text(sheet: Sheet) -> str:
    """The whole sheet: heading, what always holds, orders with blanks to fill in, how to read it, the caution."""
    orders = heading("Orders") + "\n" + paragraph(sheet.orders_line, WIDTH)
    parts = [
        "\n".join(_heading(sheet)),
        *(_list(title, lines) for title, lines in sheet.lists_before),
        orders,
        *("\n".join(_order(order)) for order in sheet.orders),
        *("\n".join(_rounds(form)) for form in sheet.rounds),
        *(_list(title, lines) for title, lines in sheet.lists_after),
        "\n".join(_blanks(*sheet.blanks)),
    ]
    return "\n\n".join(parts) + "\n"


def _heading(sheet: Sheet) -> Iterator[str]:
    yield paragraph(f"ORDER SHEET: {sheet.whose}", WIDTH, indent="")
    for line in (
        f"{sheet.canal}: {sheet.title}",
        sheet.day,
        f"{sheet.about}; {sheet.version}",
        f"{sheet.units}",
        f"Call: {sheet.call}",
    ):
        yield paragraph(line, WIDTH)


def _list(title: str, lines: Sequence[str]) -> str:
    return "\n".join([heading(title), *(paragraph(f"- {line}", WIDTH, hanging=INDENT * 2) for line in lines)])


def _order(order: SheetOrder) -> Iterator[str]:
    yield paragraph(f"{order.number}. {order.at}  {order.leaf}: {loud(order.move)}", WIDTH, indent="", hanging=INDENT)
    yield paragraph(order.openings, WIDTH)
    if order.warning:
        yield paragraph(f"! {order.warning}", WIDTH, hanging=INDENT * 2)
    if order.readings:
        yield table(("", "before", "read", "after", "read"), list(_readings(order)), WIDTH)
        yield paragraph(_instruments(order), WIDTH)
    if order.notes:
        yield paragraph(" ".join(order.notes), WIDTH)
    if order.stop:
        yield paragraph(f"Stop and call if {'; '.join(order.stop)}.", WIDTH, hanging=INDENT * 2)
    yield from _blanks(*order.blanks)


def _rounds(form: RoundsForm) -> Iterator[str]:
    yield heading(form.title)
    yield table(("visit", *BLANKS), [(visit, *(BLANK for _ in BLANKS)) for visit in form.visits], WIDTH)
    if form.note:
        yield paragraph(form.note, WIDTH)


def _readings(order: SheetOrder) -> Iterator[tuple[str, ...]]:
    yield "at", order.read_before, "", order.read_after, ""
    for line in order.readings:
        yield line.place, line.before, BLANK, line.after, BLANK
        yield "", line.before_band, "", line.after_band, ""


def _instruments(order: SheetOrder) -> str:
    return "; ".join(f"{line.place}: {line.instrument}" for line in order.readings) + "."


def _blanks(*names: str) -> Iterator[str]:
    yield ""
    yield INDENT + "   ".join(f"{name} {BLANK}" for name in names)

"""The page about the figures and what every colour, dash and hatch stands for, written from the style.

python -m toeline.report.figures_page > docs/figures.md
"""

from importlib import import_module

from toeline.report import style
from toeline.report.figures.catalogue import NAMES
from toeline.report.figures.operating_chart import NAME as OPERATING_CHART
from toeline.report.style import Area, Line, Mark

_INTRODUCTION = """\
# Figures

Written from `report/style.py` and the files of `report/figures` by `python -m toeline.report.figures_page`; a
test holds it in step.

`toeline figures RUN.nc --to DIR` draws a run, complete or stopped, into PNG (so unless `--format` says
otherwise), SVG or PDF, and writes the numbers of each figure beside it as CSV, in the same units. Of several runs
of one day it adds a figure that compares the plans. Where gates, pools or offtakes are many a figure goes over
several files with numbers. Of more than 20,000 output steps a figure draws, and its CSV lists, those at which a
series is least or greatest, or a state is met first, in each of the 1,250 points across a panel: no extreme is lost,
and the line below the title says how many are drawn. All files are written, or none; nothing that stands is
replaced without `--overwrite`.
The same run gives the same bytes. `toeline rating CANAL.toml GATE --chart FILE` draws the operating chart of a
gate. [A guided day](guided_day.md) shows how to read them.

Every figure names canal, day, plan, period, zone of its clock times and version. No state in any figure is safe
to enter.
"""
_COLOURS = """\
## What stands for what

The colours are the eight of Okabe and Ito (Color Universal Design, 2008), which people with the common kinds of
colour blindness can tell apart. What each stands for is Toeline's own choice, the same in every figure. No
meaning hangs on colour alone: lines of one panel differ in their dashes, states in hatch or lightness, so that a
grey print says the same.
"""
_NAMES = {
    style.BLACK: "black", style.ORANGE: "orange", style.SKY_BLUE: "sky blue", style.BLUISH_GREEN: "bluish green",
    style.YELLOW: "yellow", style.BLUE: "blue", style.VERMILION: "vermilion", style.REDDISH_PURPLE: "reddish purple",
    style.INK: "ink", style.FAINT_INK: "grey ink", style.PAPER: "white",
}  # fmt: skip
_GROUPS: dict[str, tuple[Line | Area | Mark, ...]] = {
    "The jump": tuple(style.JUMP_STATES.values()),
    "The flow at a gate": tuple(style.FLOW_STATES.values()),
    "The two hazards": (style.HAZARD_FLOOR, style.HAZARD_PEOPLE),
    "Limits of the tailwater": (
        style.MODULAR_LIMIT, style.DROWNING_LIMIT, style.APRON_LIMIT, style.PROTECTION_LIMIT,
    ),
    "Water and its levels": (
        style.WATER, style.TAILWATER, style.WATER_BODY, style.DAY_RANGE, style.TARGET, style.LIMIT, style.OVER_EDGE,
        style.SETTLING,
    ),
    "Canal and gates": (
        style.BED, style.LINING, style.BANK, style.GROUND, style.APRON, style.PROTECTION, style.LEAF,
        style.OPENING, style.BAY_OPENING, style.AVOIDED, *style.ORDER_STATUSES.values(), style.RULE_MOVE,
    ),
    "Deliveries and ledger": (
        style.DEMAND, style.DELIVERY, style.SPILL, style.SHORTFALL, style.CAME_IN, style.WENT_OUT, style.KEPT,
    ),
}  # fmt: skip


def figures_page() -> str:
    """The page, in Markdown."""
    figures = "| figure | shows |\n|---|---|\n" + "".join(
        f"| `{name}` | {_first_sentence(name)} |\n" for name in (*NAMES, OPERATING_CHART)
    )
    groups = (f"### {title}\n\n{_table(things)}" for title, things in _GROUPS.items())
    return "\n".join([_INTRODUCTION, figures, _COLOURS, *groups])


def _first_sentence(name: str) -> str:
    text = import_module(f"toeline.report.figures.{name}").__doc__ or ""
    return " ".join(text.split("\n\n")[0].split()).removesuffix(".")


def _table(things: tuple[Line | Area | Mark, ...]) -> str:
    rows = (
        f"| {thing.word} | {_NAMES.get(thing.colour, 'grey')} `{thing.colour}` | {_look(thing)} |\n" for thing in things
    )
    return "| meaning | colour | look |\n|---|---|---|\n" + "".join(rows)


def _look(thing: Line | Area | Mark) -> str:
    if isinstance(thing, Line):
        return "line, dashes " + " ".join(f"{length:g}" for length in thing.dash) if thing.dash else "solid line"
    if isinstance(thing, Mark):
        return f"{thing.shape}{'' if thing.filled else ', hollow'}"
    hatch = f", hatched `{thing.hatch}`" if thing.hatch != "|" else ", hatched upright"
    return f"area{hatch if thing.hatch else ''}"


if __name__ == "__main__":
    print(figures_page(), end="")

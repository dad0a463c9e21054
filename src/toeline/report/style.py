"""How results look wherever they are drawn: colours, dashes, hatches and the words beside them, said once.

The colours are those of Okabe & Ito, "Color Universal Design" (2008), told apart with any common colour blindness. What
each stands for is Toeline's own choice and stays the same in every figure and page. No meaning hangs on colour alone:
lines differ by their dashes and areas by their hatches, so that a grey print says the same.
"""

from dataclasses import dataclass

from toeline.units import FILE_UNITS, Dimension, Display, file_factor

BLACK = "#000000"
ORANGE = "#E69F00"
SKY_BLUE = "#56B4E9"
BLUISH_GREEN = "#009E73"
YELLOW = "#F0E442"
BLUE = "#0072B2"
VERMILION = "#D55E00"
REDDISH_PURPLE = "#CC79A7"
PALETTE = (BLACK, ORANGE, SKY_BLUE, BLUISH_GREEN, YELLOW, BLUE, VERMILION, REDDISH_PURPLE)

PAPER = "#FFFFFF"
INK = "#222222"
FAINT_INK = "#5F5F5F"
"""Text beside the matter; its contrast on paper is 6.4 to 1."""
RULE = "#D5D5D5"
"""Grid lines and frames."""


@dataclass(frozen=True)
class Line:
    """A line: its word in a legend, colour, width in points, and dash as lengths on and off in points (() solid)."""

    word: str
    colour: str
    width: float = 1.4
    dash: tuple[float, ...] = ()


@dataclass(frozen=True)
class Area:
    """A filled area: its word in a legend, colour and opacity, and a hatch of one sign ("" for none), drawn in ink.

    The signs / \\ x - | + . o mean the same to matplotlib and bokeh.
    """

    word: str
    colour: str
    hatch: str = ""
    opacity: float = 1.0


@dataclass(frozen=True)
class Mark:
    """A mark at a point: its word in a legend, its colour, and whether it is filled.

    `shape` is one of circle, square, triangle, diamond, cross, plus.
    """

    word: str
    colour: str
    shape: str
    filled: bool = True


WATER = Line("water level", BLUISH_GREEN, 1.6)
TAILWATER = Line("tailwater", BLUISH_GREEN, 1.6)
HEADWATER = Line("headwater", BLUISH_GREEN, 1.2, (1.0, 1.5))
TARGET = Line("target level", REDDISH_PURPLE, 1.3, (6.0, 2.5))
LIMIT = Line("limit", BLACK, 1.2, (8.0, 2.0, 1.5, 2.0))
MODULAR_LIMIT = Line("modular limit: flow drowned above it", BLUE, 1.4, (5.0, 2.0))
DROWNING_LIMIT = Line("jump drowned above it", REDDISH_PURPLE, 1.6, (1.5, 1.5))
PROTECTION_LIMIT = Line("protection limit: jump beyond protection below it", BLACK, 1.4, (7.0, 2.0, 1.5, 2.0))
APRON_LIMIT = Line("apron limit: jump ends beyond the apron below it", ORANGE, 1.4, (3.0, 1.5))
FALL_USES = (
    Line("", BLUE, 1.3),
    Line("", ORANGE, 1.3, (5.0, 2.0)),
    Line("", BLACK, 1.3, (1.5, 1.5)),
    Line("", VERMILION, 1.3, (7.0, 2.0, 1.5, 2.0)),
)
"""Looks of how much of the limits on falls and rises was used; what each is about is said where they are drawn."""
BED = Line("bed", INK, 1.2)
LINING = Line("top of the lining", FAINT_INK, 1.0, (4.0, 2.0))
BANK = Line("top of the bank", FAINT_INK, 1.0, (1.0, 2.0))
OPENING = Line("opening", BLUE, 1.6)
BAY_OPENING = Line("opening of a bay moved apart", BLUE, 0.8, (3.0, 1.5))
SPILL = Line("spilled over an escape", ORANGE, 1.6, (7.0, 2.0, 1.5, 2.0))
DEMAND = Line("asked for", INK, 1.2, (5.0, 2.0))
DELIVERY = Line("delivered", BLUISH_GREEN, 1.6)
DISCHARGE = Line("discharge", BLUISH_GREEN, 1.4)

AVOIDED = Area("opening to be passed, not held", ORANGE, "/", 0.25)
WATER_BODY = Area("water", BLUISH_GREEN, opacity=0.22)
DAY_RANGE = Area("lowest to highest level of the run", BLUISH_GREEN, "|", 0.14)
GROUND = Area("ground", "#B5B5B5")
APRON = Area("apron", "#8C8C8C")
PROTECTION = Area("other protected floor", "#C4C4C4", ".")
UNPROTECTED = Area("beyond the protected floor", PAPER)
LEAF = Area("gate leaf", INK)
SHORTFALL = Area("not delivered", VERMILION, "\\", 0.8)
OVER_EDGE = Area("water above the edge", VERMILION, "\\")
SETTLING = Area("settling: waves of a change still travel, levels uncertain", FAINT_INK, "/", 0.25)

CAME_IN = Area("taken in", BLUISH_GREEN)
WENT_OUT = Area("delivered, spilled, lost or let out", SKY_BLUE, "/")
KEPT = Area("kept in a pool, or drawn from it (a step to the right)", ORANGE, "-")

HAZARD_FLOOR = Area("floor: jump beyond protection", VERMILION, "\\")
HAZARD_PEOPLE = Area("people: drowned roller", REDDISH_PURPLE, "x")

JUMP_STATES = {
    "none": Area("no jump", PAPER),
    "drowned": Area("drowned: a roller, deadly to people", HAZARD_PEOPLE.colour, HAZARD_PEOPLE.hatch),
    "on_apron": Area("jump on apron", SKY_BLUE),
    "on_protection": Area("jump on protection", YELLOW, "-"),
    "beyond_protection": Area("jump beyond protection", HAZARD_FLOOR.colour, HAZARD_FLOOR.hatch),
    "swept_out_of_pool": Area("jump swept out of the pool", BLACK),
}
FLOW_STATES = {
    "closed": Area("closed", FAINT_INK),
    "free": Area("free flow", PAPER),
    "near_modular_limit": Area("near the modular limit", YELLOW, "."),
    "drowned": Area("drowned flow", REDDISH_PURPLE, "+"),
    "clear_of_water": Area("clear of water", SKY_BLUE, "|"),
    "clear_and_drowned": Area("clear and drowned", REDDISH_PURPLE, "|"),
    "overtopped": Area("overtopped", ORANGE, "-"),
    "reverse": Area("reverse flow", BLUE, "o"),
}
"""By the flag meanings of the results. No state is drawn as the good one."""

ORDER_STATUSES = {
    "accepted": Mark("order carried out as given", INK, "circle"),
    "trimmed": Mark("order trimmed", ORANGE, "triangle"),
    "refused": Mark("order refused", VERMILION, "cross"),
    "replaced": Mark("order replaced by a later one", INK, "circle", filled=False),
}

RULE_MOVE = Mark("move by a rule", BLUE, "diamond")

_PLAN_LOOKS = (
    (BLUE, "circle", ()),
    (ORANGE, "square", (6.0, 2.0)),
    (BLACK, "triangle", (2.0, 1.5)),
    (REDDISH_PURPLE, "diamond", (7.0, 2.0, 1.5, 2.0)),
    (BLUISH_GREEN, "plus", (10.0, 2.0)),
    (VERMILION, "cross", (1.0, 2.5)),
)


def plan_line(position: int, name: str) -> Line:
    """The line of a plan among several, by its position; looks come round again after six."""
    colour, _, dash = _PLAN_LOOKS[position % len(_PLAN_LOOKS)]
    return Line(name, colour, 1.6, dash)


def plan_mark(position: int, name: str) -> Mark:
    """The mark of a plan among several, by its position, in the colour of its line."""
    colour, shape, _ = _PLAN_LOOKS[position % len(_PLAN_LOOKS)]
    return Mark(name, colour, shape)


_PRINTED_UNITS = {"m3/s": "m³/s", "ft3/s": "ft³/s", "m3": "m³", "m2": "m²", "ft2": "ft²"}


def unit_text(dimension: Dimension, display: Display) -> str:
    """The unit in which people are shown a quantity, as print writes it: "m³/s"."""
    unit = FILE_UNITS[dimension][display.system]
    return _PRINTED_UNITS.get(unit, unit)


def axis_text(name: str, dimension: Dimension, display: Display) -> str:
    """The title of an axis: "Opening, m"."""
    return f"{name[:1].upper()}{name[1:]}, {unit_text(dimension, display)}"


def shown_factor(dimension: Dimension, display: Display) -> float:
    """What SI values are divided by before they are drawn or listed."""
    return file_factor(dimension, display.system)

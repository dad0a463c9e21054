"""Legends as small drawings with their words, in the page rather than in the figures: they wrap and can be read out."""

from collections.abc import Iterable, Iterator

from markupsafe import Markup

from toeline.report.style import INK, PAPER, Area, Line, Mark

_HATCHES = {
    "/": "M0 8 8 0",
    "\\": "M0 0 8 8",
    "x": "M0 0 8 8M0 8 8 0",
    "-": "M0 4H8",
    "|": "M4 0V8",
    "+": "M0 4H8M4 0V8",
    ".": "M3.4 4h1.2",
    "o": "M2.5 4a1.5 1.5 0 1 0 3 0a1.5 1.5 0 1 0 -3 0",
}
_SHAPES = {
    "circle": "M10 7a5 5 0 1 0 10 0a5 5 0 1 0 -10 0",
    "square": "M10 2H20V12H10Z",
    "triangle": "M15 2 20.5 12H9.5Z",
    "diamond": "M15 1 20 7 15 13 10 7Z",
    "cross": "M10 2 20 12M20 2 10 12",
    "plus": "M15 1V13M9 7H21",
}
_NAMES = {"/": "rising", "\\": "falling", "x": "crossed", "-": "flat", "|": "upright", "+": "squared", ".": "dotted",
          "o": "ringed"}  # fmt: skip


def hatch_patterns() -> Markup:
    """Every hatch of the style once, to be put at the top of the page; `hatch_fill` refers to them."""
    tiles = (
        f'<pattern id="hatch-{_NAMES[sign]}" width="8" height="8" patternUnits="userSpaceOnUse">'
        f'<path d="{path}" fill="none" stroke="{INK}" stroke-opacity=".5"/></pattern>'
        for sign, path in _HATCHES.items()
    )
    return Markup(f'<svg class="patterns" aria-hidden="true" width="0" height="0"><defs>{"".join(tiles)}</defs></svg>')


def hatch_fill(area: Area) -> str:
    """What fills a shape with the hatch of an area."""
    return f"url(#hatch-{_NAMES[area.hatch]})" if area.hatch else "none"


def legend(entries: Iterable[Line | Area | Mark]) -> list[tuple[Markup, str]]:
    """Each entry as a drawing 30 by 14 pixels and its words."""
    return [(_swatch(entry), entry.word) for entry in entries]


def _swatch(entry: Line | Area | Mark) -> Markup:
    match entry:
        case Line():
            shapes = "".join(_line(entry))
        case Area():
            shapes = "".join(_area(entry))
        case Mark():
            shapes = _mark(entry)
    return Markup(f'<svg class="swatch" width="30" height="14" aria-hidden="true">{shapes}</svg>')


def _line(line: Line) -> Iterator[str]:
    dash = " ".join(f"{length * 4 / 3:.1f}" for length in line.dash)
    yield (
        f'<line x1="0" y1="7" x2="30" y2="7" stroke="{line.colour}" stroke-width="{line.width * 4 / 3:.1f}" '
        f'stroke-dasharray="{dash}"/>'
    )


def _mark(mark: Mark) -> str:
    fill = mark.colour if mark.filled else PAPER
    return f'<path d="{_SHAPES[mark.shape]}" fill="{fill}" stroke="{mark.colour}" stroke-width="1.4"/>'


def _area(area: Area) -> Iterator[str]:
    for fill, opacity in ((area.colour, area.opacity), (hatch_fill(area), 1.0)):
        yield (
            f'<rect x=".5" y=".5" width="29" height="13" fill="{fill}" fill-opacity="{opacity}" stroke="{INK}" '
            'stroke-width=".5"/>'
        )

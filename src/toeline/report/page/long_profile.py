"""The long profile at a moment: bed, edges and targets stand, water, gates and jumps move."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import xarray as xr
from bokeh.core.properties import value
from bokeh.models import ColumnDataSource, HoverTool, NumeralTickFormatter, Range1d
from bokeh.plotting import figure

from toeline.findings.series import names
from toeline.report.page.looks import FONT, area_look, empty_figure, line_look, source_of, state_look
from toeline.report.style import (
    BANK,
    BED,
    FAINT_INK,
    GROUND,
    INK,
    LEAF,
    LINING,
    PAPER,
    TARGET,
    WATER,
    WATER_BODY,
    Line,
    axis_text,
    shown_factor,
    unit_text,
)
from toeline.results.dataset import in_parts
from toeline.units import Display

HEIGHT = 430
ROOM_FOR_NAMES = 0.42
"""Part of the height of the canal that is kept free above it for the names of gates and the states of their jumps."""


@dataclass(frozen=True)
class MovingProfile:
    """The figure, and by run what moves in it.

    `water` are the levels at the nodes, from which the browser draws `surfaces`, with the jets and jumps below the
    gates, and the `bodies` of water under them; `rollers` are outlines, `gates` the leaves.
    """

    figure: figure
    water: list[ColumnDataSource]
    bodies: list[ColumnDataSource]
    surfaces: list[ColumnDataSource]
    rollers: list[ColumnDataSource]
    gates: list[ColumnDataSource]


def long_profile(runs: Sequence[xr.Dataset], lines: Sequence[Line], display: Display) -> MovingProfile:
    """The canal of the first run, with the water of every run in its line; the browser sets what moves."""
    factor = shown_factor("length", display)
    drawn = empty_figure(
        HEIGHT,
        "width",
        x_range=_chainages(runs, factor),
        y_range=_levels(runs, factor),
        x_axis_label=axis_text("chainage", "length", display),
        y_axis_label=axis_text("level", "length", display),
        name="long_profile",
    )
    drawn.xaxis.formatter = NumeralTickFormatter(format="0,0")
    profile = MovingProfile(
        drawn,
        water=[source_of(f"water_{place}", **_nodes(run, factor)) for place, run in enumerate(runs)],
        bodies=[source_of(xs=[], ys=[]) for _ in runs],
        surfaces=[source_of(x=[], y=[]) for _ in runs],
        rollers=[source_of(xs=[], ys=[], colour=[], hatch=[]) for _ in runs],
        gates=[source_of(**_gates(run, drawn.y_range.end, place, factor)) for place, run in enumerate(runs)],
    )
    drawn.patches("xs", "ys", source=profile.bodies[0], line_color=None, **area_look(WATER_BODY))
    for place, line in enumerate(lines):
        _draw_water(profile, place, line, display)
    _draw_canal(drawn, runs[0], profile.water[0], factor)
    _draw_gates(drawn, profile.gates)
    return profile


def _draw_water(profile: MovingProfile, place: int, line: Line, display: Display) -> None:
    drawn = profile.figure
    drawn.patches("xs", "ys", source=profile.rollers[place], line_color=None, **state_look())
    drawn.line("x", "y", source=profile.surfaces[place], **line_look(line))
    at_nodes = drawn.line("chainage", "water_level", source=profile.water[place], line_alpha=0.0)
    unit = unit_text("length", display)
    told = [
        (line.word, f"@water_level{{0.00}} {unit}"),
        ("above bed", f"@depth{{0.00}} {unit}"),
        ("chainage", f"@chainage{{0,0}} {unit}"),
    ]
    drawn.add_tools(HoverTool(renderers=[at_nodes], tooltips=told, mode="vline", line_policy="nearest"))


def _draw_canal(drawn: figure, run: xr.Dataset, water: ColumnDataSource, factor: float) -> None:
    drawn.varea("chainage", drawn.y_range.start, "bed", source=water, fill_color=GROUND.colour, level="underlay")
    drawn.line("chainage", "bed", source=water, **line_look(BED))
    drawn.line("chainage", "lining", source=water, **line_look(LINING))
    drawn.line("chainage", "bank", source=water, **line_look(BANK))
    ends = [run["chainage"].values[run["node_pool"].values == pool][-1] for pool in range(run.sizes["pool"])]
    lengths, levels = run["pool_length"].values, run["pool_target_level"].values
    targets = source_of(
        begin=(np.array(ends) - 0.2 * lengths) / factor, end=np.array(ends) / factor, level=levels / factor
    )
    drawn.segment("begin", "level", "end", "level", source=targets, **line_look(TARGET))


def _draw_gates(drawn: figure, gates: Sequence[ColumnDataSource]) -> None:
    first = gates[0]
    drawn.segment("chainage", "floor", "chainage", "sill", source=first, line_color=GROUND.colour, line_width=5)
    drawn.segment("chainage", "lip", "chainage", "top", source=first, line_color=LEAF.colour, line_width=5)
    for source in gates[1:]:
        drawn.scatter("chainage", "lip", marker="dash", size=16, source=source, line_color="plan", line_width=3)
    for source in gates:
        drawn.scatter(
            "chainage", "lane", marker="marker", size=13, source=source, fill_color="colour", line_color=INK,
            line_width=1.2,
        )  # fmt: skip
    drawn.text(
        "chainage",
        "names_at",
        "name",
        source=first,
        angle=0.9,
        x_offset=4,
        text_font=value(FONT),
        text_font_size="12px",
        text_color=INK,
    )
    drawn.segment(
        "chainage", "top", "chainage", "lane", source=first, line_color=FAINT_INK, line_width=0.6, line_dash="dotted"
    )


def _nodes(run: xr.Dataset, factor: float) -> dict[str, np.ndarray]:
    fixed = {"chainage": "chainage", "bed": "bed_level", "lining": "lining_level", "bank": "bank_level"}
    moving = {name: np.full(run.sizes["node"], np.nan, np.float32) for name in ("water_level", "depth")}
    return {name: run[variable].values / factor for name, variable in fixed.items()} | moving


def _gates(run: xr.Dataset, highest: float, place: int, factor: float) -> dict[str, object]:
    count = run.sizes["gate"]
    height = highest - float(np.nanmin(run["bed_level"].values)) / factor
    return {
        "name": names(run["gate"]),
        "chainage": run["gate_chainage"].values / factor,
        "floor": run["gate_floor_level"].values / factor,
        "sill": run["gate_sill_level"].values / factor,
        "lip": np.full(count, np.nan),
        "top": np.full(count, np.nan),
        "lane": np.full(count, highest - (0.24 + 0.05 * place) * height),
        "names_at": np.full(count, highest - 0.20 * height),
        "marker": ["dash"] * count,
        "colour": [PAPER] * count,
        "plan": [WATER.colour] * count,
    }


def _chainages(runs: Sequence[xr.Dataset], factor: float) -> Range1d:
    places = np.concatenate([run[name].values for run in runs for name in ("chainage", "gate_chainage")]) / factor
    room = 0.02 * max(float(np.ptp(places)), 1.0)
    return Range1d(float(places.min()) - room, float(places.max()) + 3.0 * room)


def _highest(run: xr.Dataset) -> float:
    """The highest level of all long profiles [m]; minus infinity where there is none."""
    return float(np.nanmax(run["water_level"].values, initial=-np.inf))


def _levels(runs: Sequence[xr.Dataset], factor: float) -> Range1d:
    edges, beds = ("bank_level", "lining_level", "pool_target_level"), ("bed_level", "gate_floor_level")
    tops = np.concatenate([run[name].values for run in runs for name in edges])
    waters = [_highest(part) for run in runs for part in in_parts(run, "profile_time", "water_level")]
    floors = np.concatenate([run[name].values for run in runs for name in beds])
    lowest, highest = float(np.nanmin(floors)) / factor, float(np.nanmax([*tops, *waters, *floors])) / factor
    height = max(highest - lowest, 1.0)
    return Range1d(lowest - 0.06 * height, highest + (ROOM_FOR_NAMES + 0.07 * (len(runs) - 1)) * height)

"""One gate seen from the side at one time: leaf, sill, floor, jet, jump or roller.

Heights and distances are those of the results, and surfaces straight lines between them. Heights are stretched.
"""

import numpy as np
import xarray as xr
from matplotlib.axes import Axes

from toeline.findings.series import meanings
from toeline.report.figures.draw import area_look, draw_line, empty_note
from toeline.report.figures.sheet import SMALL_SIZE, shortened
from toeline.report.style import (
    APRON,
    GROUND,
    INK,
    JUMP_STATES,
    LEAF,
    PROTECTION,
    WATER,
    WATER_BODY,
    shown_factor,
    unit_text,
)
from toeline.units import Display

AREAS = (WATER_BODY, APRON, PROTECTION, GROUND)
LONGEST_NAME = 18
"""Of gates side by side, in characters."""
UPSTREAM = 0.35
"""Room upstream of the gate, in lengths of the view downstream of it."""
BEYOND = 1.25
"""Room downstream of the gate, in lengths of the protected floor."""
LEAST_FLOOR, LEAST_HEIGHT = 5.0, 0.1


def draw_side_view(axes: Axes, gate: xr.Dataset, display: Display) -> None:
    """Draw one gate at one time (a dataset of one gate and one output step)."""
    factor = shown_factor("length", display)
    here = {name: float(gate[name]) / factor for name in _LENGTHS}
    state = meanings(gate["jump_state"])[int(gate["jump_state"])]
    reach = _reach(here)
    _ground(axes, here, reach)
    _water_above(axes, here, reach)
    if np.isfinite(here["gate_tailwater_level"]):
        _water_below(axes, here, reach, state)
    else:
        empty_note(axes, "no levels")
    _leaf(axes, here, reach)
    axes.set_ylim(*_heights(here))
    axes.set_title(
        shortened(str(gate["gate"].values), LONGEST_NAME), fontsize=SMALL_SIZE, weight="bold", loc="left", pad=3
    )
    axes.set_xlabel(f"from the gate, {unit_text('length', display)}", fontsize=SMALL_SIZE)
    axes.set_xlim(-UPSTREAM * reach, reach)
    axes.grid(visible=False)


_LENGTHS = (
    "gate_opening", "gate_sill_level", "gate_floor_level", "gate_max_opening", "gate_apron_end", "gate_protection_end",
    "gate_headwater_level", "gate_tailwater_level", "jet_depth", "roller_depth", "jump_toe_distance",
    "jump_end_distance",
)  # fmt: skip


def _reach(here: dict[str, float]) -> float:
    """How far downstream the view goes."""
    end = float(np.nan_to_num([here["jump_toe_distance"], here["jump_end_distance"]]).max())
    floor = BEYOND * here["gate_protection_end"]
    return max(floor, min(1.15 * end, 3.0 * floor), LEAST_FLOOR)


def _ground(axes: Axes, here: dict[str, float], reach: float) -> None:
    floor, sill = here["gate_floor_level"], here["gate_sill_level"]
    base = _heights(here)[0]
    ends = (0.0, here["gate_apron_end"], here["gate_protection_end"], reach)
    for area, start, end in zip((APRON, PROTECTION, GROUND), ends[:-1], ends[1:], strict=True):
        if end > start:
            axes.fill_between([start, end], floor, base, label=area.word, **area_look(area))
    axes.fill_between([-UPSTREAM * reach, 0.0], sill, base, label=GROUND.word, **area_look(GROUND))
    axes.plot([-UPSTREAM * reach, 0.0, 0.0, reach], [sill, sill, floor, floor], color=INK, linewidth=1.0)


def _heights(here: dict[str, float]) -> tuple[float, float]:
    """Lowest and highest level of the view: the ground below the floor, and above water and leaf."""
    floor, sill = here["gate_floor_level"], here["gate_sill_level"]
    levels = (here["gate_headwater_level"], here["gate_tailwater_level"], _leaf_top(here))
    top = float(np.nanmax([*levels, sill + here["gate_max_opening"], floor + LEAST_HEIGHT]))
    return floor - 0.2 * (top - floor), top + 0.08 * (top - floor)


def _water_above(axes: Axes, here: dict[str, float], reach: float) -> None:
    sill, headwater = here["gate_sill_level"], here["gate_headwater_level"]
    if headwater > sill:
        x = np.array([-UPSTREAM * reach, 0.0])
        axes.fill_between(x, sill, headwater, label=WATER_BODY.word, **area_look(WATER_BODY))
        draw_line(axes, WATER, x, np.full(2, headwater))


def surface_below(here: dict[str, float], reach: float, state: str) -> tuple[np.ndarray, np.ndarray]:
    """Distances from the gate and levels of the surface below it: jet, jump or roller, tailwater."""
    floor, tailwater = here["gate_floor_level"], here["gate_tailwater_level"]
    toe, end = here["jump_toe_distance"], here["jump_end_distance"]
    jet = floor + here["jet_depth"]
    if state == "drowned":
        start = floor + here["roller_depth"]
        return np.array([0.0, end if np.isfinite(end) else 0.0, reach]), np.array([start, tailwater, tailwater])
    lip = here["gate_sill_level"] + here["gate_opening"]
    if state == "swept_out_of_pool" or (np.isnan(toe) and np.isfinite(jet)):
        return np.array([0.0, here["gate_opening"], reach]), np.array([lip, jet, jet])
    if np.isnan(toe) or np.isnan(jet):
        return np.array([0.0, reach]), np.full(2, tailwater)
    end = end if np.isfinite(end) else toe
    x = np.array([0.0, min(here["gate_opening"], toe), toe, end, max(reach, end)])
    return x, np.array([lip, jet, jet, tailwater, tailwater])


def _water_below(axes: Axes, here: dict[str, float], reach: float, state: str) -> None:
    x, surface = surface_below(here, reach, state)
    floor = here["gate_floor_level"]
    if np.nanmax(surface) <= floor:
        return
    axes.fill_between(x, floor, surface, label=WATER_BODY.word, **area_look(WATER_BODY))
    if state not in ("none", "swept_out_of_pool"):
        _jump(axes, here, x, surface, state)
    draw_line(axes, WATER, x, surface)


def _jump(axes: Axes, here: dict[str, float], x: np.ndarray, surface: np.ndarray, state: str) -> None:
    """The body of the jump or roller: above the level of the jet, from toe to end."""
    start, end = (x[0], x[1]) if state == "drowned" else (x[2], x[3])
    across = np.linspace(start, end, 20)
    low = here["gate_floor_level"] + here["jet_depth"]
    high = np.interp(across, x, surface)
    area = JUMP_STATES[state]
    axes.fill_between(across, np.minimum(low, high), high, label=area.word, **area_look(area))


def _leaf(axes: Axes, here: dict[str, float], reach: float) -> None:
    lip = here["gate_sill_level"] + here["gate_opening"]
    axes.fill_between([-0.03 * reach, 0.0], lip, _leaf_top(here), label=LEAF.word, **area_look(LEAF))


def _leaf_top(here: dict[str, float]) -> float:
    """The height of the leaf is not in the results: it is drawn as high as its travel, and out of the water."""
    lip, headwater = here["gate_sill_level"] + here["gate_opening"], here["gate_headwater_level"]
    return max(lip + 0.5 * here["gate_max_opening"], np.nan_to_num(headwater, nan=lip) + 0.1 * here["gate_max_opening"])

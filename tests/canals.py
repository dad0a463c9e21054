"""Invented canals and days as tables of the two input files, and the files written from them."""

import json
from pathlib import Path
from typing import Any

import numpy as np

from toeline.scenario import Scenario, load_scenario

Table = dict[str, Any]

START = "2031-05-04T00:00:00Z"
SURFACES = {
    "apron": {"protected": True, "apron": True},
    "riprap": {"protected": True},
    "lining": {"protected": False},
}


def write_table(path: Path, table: Table) -> Path:
    """Write a table of tables as TOML."""
    path.write_text("\n".join(f"{key} = {_toml(value)}" for key, value in table.items()) + "\n", encoding="utf-8")
    return path


def _toml(value: Any) -> str:
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{json.dumps(key)} = {_toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(map(_toml, value)) + "]"
    return json.dumps(value.item() if isinstance(value, np.generic) else value)


def scenario_of(folder: Path, canal: Table, day: Table, *overrides: str, name: str = "day") -> Scenario:
    """Write `canal.toml` and a day file into a folder and load them."""
    write_table(folder / "canal.toml", canal)
    return load_scenario(write_table(folder / f"{name}.toml", day), overrides=overrides)


def rectangle(width: float, roughness: float = 0.016, **keys: Any) -> Table:
    return {"shape": "rectangle", "bottom_width": width, "roughness": roughness, **keys}


def trapezoid(width: float, side_slope: float, roughness: float = 0.016, **keys: Any) -> Table:
    return {"shape": "trapezoid", "bottom_width": width, "side_slope": side_slope, "roughness": roughness, **keys}


def prismatic_canal(section: Table, length: float, slope: float, tail: Table, **tables: Any) -> Table:
    """One pool of one section between an inflow and a tail, its bed at 0 at the lower end."""
    stretch = {"length": length, "section": "canal", "surface": "lining", "slope": slope}
    return {
        "name": "one pool",
        "units": "metric",
        "sections": {"canal": section},
        "surfaces": SURFACES,
        "pools": [{"name": "P0", "bed_level": slope * length, "stretches": [stretch]}],
        "head": {"kind": "inflow"},
        "tail": tail,
        **tables,
    }


def stepped_canal(
    pools: int, length: float, *, floor: list[Table] | None = None, slope: float = 1e-4, depth: float = 2.2,
    drop: float = 0.3, gate: Table | None = None, **tables: Any,
) -> Table:  # fmt: skip
    """Equal pools below an inflow, each closed by a gate on its bed, the floor below it lower by `drop`.

    `floor` are the stretches at the head of every pool, an apron and riprap unless given; the rest of its length is a
    trapezoid 6 m wide. Targets are `depth` above the bed. The level beyond the last gate is 1.5 m above its floor.
    """
    floor = APRON_AND_RIPRAP if floor is None else floor
    rest = length - sum(stretch["length"] for stretch in floor)
    stretches = [*floor, {"length": rest, "section": "canal", "surface": "lining", "slope": slope}]
    fall = slope * rest
    beds = [(pools - k) * (fall + drop) for k in range(pools)]
    names = [f"P{k}" for k in range(pools)]
    return {
        "name": "stepped canal",
        "units": "metric",
        "sections": {"basin": rectangle(5.0), "canal": trapezoid(6.0, 1.5)},
        "surfaces": SURFACES,
        "pools": [
            {"name": name, "bed_level": bed, "target_level": bed - fall + depth, "stretches": stretches}
            for name, bed in zip(names, beds, strict=True)
        ],
        "gates": [
            {
                "name": f"G{k}", "upstream": above, "downstream": below, "kind": "vertical", "bays": 2, "bay_width":
                2.5, "sill_level": bed - fall, "max_opening": 2.0, "smallest_move": 0.01, "hoist_speed": "0.1 m/min",
                **(gate or {}),
            }
            for k, (above, below, bed) in enumerate(zip(names, [*names[1:], "tail"], beds, strict=True))
        ],
        "head": {"kind": "inflow"},
        "tail": {"kind": "level", "level": 1.5, "floor_level": 0.0},
        **tables,
    }  # fmt: skip


APRON_AND_RIPRAP = [
    {"length": 18.0, "section": "basin", "surface": "apron"},
    {"length": 12.0, "section": "canal", "surface": "riprap", "transition": True},
]


def day(
    inflow: Any = None, *, length: str = "24 h", period: Table | None = None, output: Table | None = None,
    orders: list[Table] | None = None, start: Table | None = None, **tables: Any,
) -> Table:  # fmt: skip
    """A day file; `inflow` is a number or a series, the canal starts steady unless `start` says otherwise."""
    return {
        "canal": "canal.toml",
        "title": "a day",
        "period": {"start": START, "length": length, **(period or {})},
        "output": {"every": "1 min", "profiles_every": "10 min", **(output or {})},
        "start": start or {"state": "steady"},
        **({"inflow": inflow} if inflow is not None else {}),
        **({"plans": {"only": {"orders": orders}}} if orders else {}),
        **tables,
    }


def order(at: str, gate: str, **action: float) -> Table:
    return {"at": at, "gate": gate, **action}


def standard_day(**period: Any) -> tuple[Table, Table]:
    """Ten pools of 4 km for a day with 20 gate moves and 2 steps of inflow: what speed and accuracy are measured on."""
    rng = np.random.default_rng(1)
    moves = [rng.choice([-0.05, 0.05, 0.08]) for _ in range(20)]
    seconds = [(1 + k) * 3600 + int(rng.integers(0, 3000)) for k in range(20)]
    orders = [order(_clock(s), f"G{k % 10}", by=move) for k, (s, move) in enumerate(zip(seconds, moves, strict=True))]
    inflow = {"shape": "steps", "values": [["00:00", 8.0], ["06:00", 10.0], ["18:00", 8.0]]}
    return stepped_canal(10, 4000.0), day(inflow, orders=orders, period=period)


def _clock(seconds: int) -> str:
    return f"{seconds // 3600:02d}:{seconds // 60 % 60:02d}:{seconds % 60:02d}"

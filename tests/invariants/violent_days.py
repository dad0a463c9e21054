"""Random canals and random violent days on them, as scenario files."""

import json
from pathlib import Path
from typing import Any

import numpy as np

SURFACES = {
    "apron": {"protected": True, "apron": True},
    "riprap": {"protected": True},
    "lining": {"protected": False},
}


def write_day(folder: Path, seed: int, local_inertia: bool, start: str) -> Path:
    """Write a canal and a day drawn from `seed`; returns the day file."""
    rng = np.random.default_rng(seed)
    canal = _canal(rng)
    if seed % 3 == 0:
        canal |= _water_astray(np.random.default_rng([seed, 1]), canal["pools"])
    _write(folder / "canal.toml", canal)
    day = _day(rng, canal, local_inertia, start)
    if seed % 5 == 0:
        day["plans"]["only"] |= _silly_operation(np.random.default_rng([seed, 2]), canal["gates"])
    return _write(folder / "day.toml", day)


def _write(path: Path, tables: dict[str, Any]) -> Path:
    path.write_text("\n".join(f"{key} = {_toml(value)}" for key, value in tables.items()))
    return path


def _toml(value: Any) -> str:
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{json.dumps(key)} = {_toml(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(map(_toml, value)) + "]"
    return json.dumps(value.item() if isinstance(value, np.generic) else value)


def _canal(rng: np.random.Generator) -> dict[str, Any]:
    width = rng.uniform(3.0, 8.0)
    pools, ends = _pools(rng)
    gates = [_gate(rng, f"P{k}", f"P{k + 1}", ends[k], width) for k in range(len(pools) - 1)]
    has_reservoir, has_tail_gate = rng.random() < 0.4, rng.random() < 0.7
    if has_reservoir:
        gates.insert(0, _gate(rng, "head", "P0", pools[0]["bed_level"] + rng.choice([0.0, 0.2]), width))
    if has_tail_gate:
        gates.append(_gate(rng, f"P{len(pools) - 1}", "tail", ends[-1], width))
    return {
        "name": "random",
        "units": "metric",
        "sections": _sections(rng, width),
        "surfaces": SURFACES,
        "pools": pools,
        "gates": gates,
        "offtakes": _offtakes(rng, pools[0]["bed_level"]),
        "head": {"kind": "reservoir", "level": pools[0]["bed_level"] + 2.6} if has_reservoir else {"kind": "inflow"},
        "tail": _tail(rng, ends[-1]),
    }


def _sections(rng: np.random.Generator, width: float) -> dict[str, Any]:
    slope = rng.choice([0.0, 1.0, 1.5])
    canal = {"bottom_width": width, "side_slope": slope} if slope else {"bottom_width": width}
    return {
        "basin": {
            "shape": "rectangle",
            "bottom_width": width * rng.uniform(0.8, 1.0),
            "roughness": 0.014,
            "bank_height": 4.0,
        },
        "canal": canal
        | {"shape": "trapezoid" if slope else "rectangle", "roughness": rng.uniform(0.012, 0.03), "bank_height": 4.0},
    }


def _pools(rng: np.random.Generator) -> tuple[list[dict[str, Any]], list[float]]:
    """Pools from the head down, and the bed levels at their lower ends."""
    pools, ends, bed = [], [], 100.0
    for k in range(rng.integers(2, 5)):
        length, slope = rng.uniform(400, 3000), rng.choice([0.0, 1e-4, 3e-4, 8e-4])
        apron, riprap = rng.choice([(0.0, 0.0), (15.0, 0.0), (18.0, 12.0)])
        floor = [{"length": apron, "section": "basin", "surface": "apron"}] if apron else []
        if riprap:
            floor.append(
                {"length": riprap, "section": "canal", "surface": "riprap", "transition": True, "transition_loss": 0.2}
            )
        floor.append({"length": length, "section": "canal", "surface": "lining", "slope": slope})
        ends.append(bed - slope * length)
        pools.append(
            {"name": f"P{k}", "bed_level": bed, "target_level": ends[-1] + rng.uniform(1.2, 2.4), "stretches": floor}
        )
        bed = ends[-1] - rng.choice([0.0, 0.2, 0.8])
    return pools, ends


def _water_astray(rng: np.random.Generator, pools: list[dict[str, Any]]) -> dict[str, Any]:
    """Escapes with high and low crests, free and drowned, heavy losses, and a roughness that leaps."""
    escapes = []
    for k, pool in enumerate(pools):
        crest = pool["target_level"] + rng.uniform(-0.4, 0.3)
        place = rng.uniform(0.0, 1.0) * sum(stretch["length"] for stretch in pool["stretches"])
        escapes.append(
            {"name": f"E{k}", "pool": pool["name"], "chainage": place, "crest_level": max(crest, pool["bed_level"]),
             "length": rng.choice([2.0, 10.0, 60.0])}
        )  # fmt: skip
        if rng.random() < 0.6:
            escapes[-1]["outside_level"] = crest + rng.uniform(-0.3, 0.6)
    return {
        "escapes": escapes,
        "losses": {"seepage": f"{rng.choice([0.1, 1.0, 10.0])} m/day", "rain": f"{rng.choice([0.0, 80.0])} mm/h"},
        "roughness_calendar": [{"from": "2031-05-01", "factor": rng.choice([0.5, 1.0, 3.0])}],
    }


def _gate(rng: np.random.Generator, upstream: str, downstream: str, sill: float, width: float) -> dict[str, Any]:
    gate = {
        "name": f"gate below {upstream}", "upstream": upstream, "downstream": downstream, "kind": "vertical",
        "bay_width": width * rng.uniform(0.4, 0.78), "sill_level": sill, "max_opening": 1.8,
    }  # fmt: skip
    if rng.random() < 0.5:
        gate |= {"kind": "radial", "radius": 3.0, "pinion_height": 1.8}
    if rng.random() < 0.5:
        gate["leaf_height"] = 2.0
    if rng.random() < 0.5:
        gate["hoist_speed"] = "0.3 m/min"
    return gate


def _offtakes(rng: np.random.Generator, bed: float) -> list[dict[str, Any]]:
    take = {"name": "T0", "pool": "P0", "chainage": 100.0, "sill_level": bed + 0.5}
    return [
        take
        | rng.choice(
            [{"kind": "demand"}, {"kind": "weir", "width": 0.6}, {"kind": "orifice", "width": 0.6, "opening": 0.3}]
        )
    ]


def _tail(rng: np.random.Generator, bed: float) -> dict[str, Any]:
    return rng.choice(
        [
            {"kind": "level", "level": bed + 1.0},
            {"kind": "free overfall"},
            {"kind": "normal depth", "slope": 0.0005},
            {"kind": "rating", "rating": [[bed, 0.0], [bed + 1.0, 5.0], [bed + 2.0, 16.0]]},
        ]
    )


def _clock(minutes: int) -> str:
    return f"{minutes // 60:02d}:{minutes % 60:02d}"


def _day(rng: np.random.Generator, canal: dict[str, Any], local_inertia: bool, start: str) -> dict[str, Any]:
    day = {
        "canal": "canal.toml",
        "title": "violent",
        "period": {
            "start": "2031-05-04T00:00:00Z", "length": "24 h", "spacing": rng.choice([100.0, 250.0]),
            "local_inertia": local_inertia,
        },
        "output": {"every": "10 min", "profiles_every": "1 h"},
        "plans": {"only": {"orders": _orders(rng, canal["gates"])}},
        "start": {"state": start},
    }  # fmt: skip
    if canal["head"]["kind"] == "inflow":
        times = sorted(rng.choice(np.arange(1, 1439), 6, replace=False).tolist())
        values = [["00:00", 4.0], *([_clock(t), rng.choice([0.0, 0.5, 4.0, 15.0])] for t in times)]
        day["inflow"] = {"shape": str(rng.choice(["steps", "lines"])), "values": values}
    elif start == "steady":
        day["start"]["inflow"] = 4.0
    if canal["offtakes"][0]["kind"] == "demand":
        day["deliveries"] = {"T0": [["00:00", 0.5], ["09:00", 3.0], ["15:00", 0.0]]}
    if canal["tail"]["kind"] == "level":
        low = canal["tail"]["level"]
        day["tail"] = {
            "shape": "lines",
            "values": [["00:00", low], ["08:00", low], ["12:00", low + 3.0], ["20:00", low - 0.5]],
        }
    return day


def _orders(rng: np.random.Generator, gates: list[dict[str, Any]]) -> list[dict[str, Any]]:
    """Slams open, shut and to anything between, at random times."""
    times = sorted(rng.choice(np.arange(1, 1439), 25, replace=False).tolist())
    return [
        {
            "at": _clock(t),
            "gate": gates[rng.integers(len(gates))]["name"],
            "opening": rng.choice([0.0, 1.8, rng.uniform(0.0, 1.8), rng.uniform(0.0, 0.1)]),
        }
        for t in times
    ]


def _silly_operation(rng: np.random.Generator, gates: list[dict[str, Any]]) -> dict[str, Any]:
    """Beside the orders a rule on every gate below a pool, with targets out of reach and gains that can only hunt; a
    stuck leaf.
    """
    below = [gate["name"] for gate in gates if gate["upstream"] != "head"]
    rules = [_silly_rule(rng, gate) | {"every": str(rng.choice(["1 min", "7 min", "24 h"]))} for gate in below]
    return {"rules": rules, "stuck": [{"gate": gates[-1]["name"], "from": "03:00", "until": "09:00"}]}


def _silly_rule(rng: np.random.Generator, gate: str) -> dict[str, Any]:
    target = float(rng.choice([-50.0, 100.0, 101.0, 150.0]))
    level = {"kind": "hold upstream level", "target": target, "band": 0.0}
    rule: dict[str, Any] = rng.choice(
        [
            level | {"gain": 100.0},
            level | {"gain": 1e-6, "reset": "1 min"},
            level | {"discharge_gain": 10_000.0, "reset": "1 min"},
            {"kind": "hold discharge", "target": float(rng.choice([0.0, 4.0, 9999.0])), "feedforward": "wave"},
            {"kind": "gatekeeper rounds", "target": target, "step": 100.0},
        ]
    )
    return rule | {"gate": gate}

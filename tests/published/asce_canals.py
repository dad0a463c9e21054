"""The two test canals of the ASCE task committee on canal automation, as published, and as canal files.

Clemmens, Kacerek, Grawitz & Schuurmans 1998, J. Irrig. Drain. Eng. 124(1) 23-30 (from memory). Geometry published
second-hand: transcribed from Clemmens et al. 2015 (table 1), Bonet et al. 2025 (tables 5-6), Litrico & Fromion 2004
(tables 1-7), whose delays and areas these are. The schedule of demand changes is not known here, and nothing
of its unsteady results is claimed.
"""

from typing import Any, NamedTuple

SIDE_SLOPE = 1.5


class TestCanal(NamedTuple):
    """Pools from the head down. `low` and `high` hold discharge [m³/s], delay [s] and area [m²] of every pool."""

    __test__ = False

    slope: float
    roughness: float
    lengths: tuple[float, ...]
    bottom_widths: tuple[float, ...]
    targets: tuple[float, ...]
    gate_widths: tuple[float, ...]
    gate_heights: tuple[float, ...]
    low: tuple[tuple[float, float, float], ...]
    high: tuple[tuple[float, float, float], ...]


CANAL_1 = TestCanal(
    0.002, 0.014,
    (100.0, 1200.0, 400.0, 800.0, 2000.0, 1700.0, 1600.0, 1700.0), (1.0, 1.0, 1.0, 0.8, 0.8, 0.8, 0.6, 0.6),
    (0.9, 0.9, 0.8, 0.9, 0.9, 0.8, 0.8, 0.8), (1.5, 1.5, 1.5, 1.2, 1.2, 1.2, 1.0), (1.0, 1.0, 0.9, 1.0, 1.0, 0.9, 0.9),
    (
        (0.8, 36.9, 339.2), (0.7, 427.6, 824.9), (0.6, 152.9, 671.2), (0.5, 307.6, 790.8), (0.4, 794.9, 817.8),
        (0.3, 724.8, 678.3), (0.2, 734.2, 632.7), (0.1, 913.4, 667.1),
    ),
    (
        (2.0, 29.6, 331.2), (1.8, 337.4, 575.9), (1.6, 117.0, 436.3), (1.4, 238.2, 575.8), (1.2, 610.8, 620.8),
        (1.0, 541.3, 496.2), (0.8, 531.0, 467.6), (0.6, 603.5, 518.8),
    ),
)  # fmt: skip
CANAL_2 = TestCanal(
    0.0001, 0.020,
    (7000.0, 3000.0, 3000.0, 4000.0, 4000.0, 3000.0, 2000.0, 2000.0), (7.0, 7.0, 7.0, 6.0, 6.0, 5.0, 5.0, 5.0),
    (2.1, 2.1, 2.1, 1.9, 1.9, 1.7, 1.7, 1.7), (7.0, 7.0, 7.0, 6.0, 6.0, 5.0, 5.0), (2.3, 2.3, 2.3, 2.1, 2.1, 1.8, 1.8),
    (
        (2.7, 1821.4, 83_746), (2.5, 754.4, 38_247), (2.2, 757.5, 38_315), (2.0, 1073.0, 43_767),
        (1.7, 1079.5, 43_941), (1.5, 848.7, 28_560), (1.2, 564.0, 19_490), (1.0, 566.8, 19_523),
    ),
    (
        (11.0, 1582.8, 61_245), (10.0, 682.0, 34_113), (9.0, 690.9, 34_891), (8.0, 953.7, 35_885),
        (7.0, 971.9, 37_598), (6.0, 754.3, 23_634), (5.0, 513.8, 17_809), (4.0, 526.3, 18_425),
    ),
)  # fmt: skip
CANALS = {"canal 1": CANAL_1, "canal 2": CANAL_2}


def canal_file(canal: TestCanal) -> dict[str, Any]:
    """The canal as the table of a canal file: every pool ends at a gate on its bed, the last at a held level; each has
    an offtake at its lower end.
    """
    bed, pools, gates, offtakes, sections = 100.0, [], [], [], {}
    names = [f"Pool {k + 1}" for k in range(len(canal.lengths))]
    for k, (name, length, width) in enumerate(zip(names, canal.lengths, canal.bottom_widths, strict=True)):
        end = bed - canal.slope * length
        section = {"shape": "trapezoid", "bottom_width": width, "side_slope": SIDE_SLOPE, "roughness": canal.roughness}
        sections[name] = section
        stretch = {"length": length, "section": name, "surface": "lining", "slope": canal.slope}
        pools.append(
            {"name": name, "bed_level": bed, "target_level": round(end + canal.targets[k], 6), "stretches": [stretch]}
        )
        offtakes.append({"name": f"Offtake {k + 1}", "pool": name, "chainage": length, "kind": "demand"})
        if k < len(canal.gate_widths):
            gates.append(
                {
                    "name": f"Check {k + 1}", "upstream": name, "downstream": names[k + 1], "kind": "vertical",
                    "bay_width": canal.gate_widths[k], "sill_level": end, "max_opening": canal.gate_heights[k],
                    "smallest_move": 0.001, "hoist_speed": "0.2 m/min",
                }
            )  # fmt: skip
        bed = end
    return {
        "name": "test canal",
        "units": "metric",
        "sections": sections,
        "surfaces": {"lining": {"protected": False}},
        "pools": pools,
        "gates": gates,
        "offtakes": offtakes,
        "head": {"kind": "inflow"},
        "tail": {"kind": "level", "level": pools[-1]["target_level"]},
    }


def deliveries_at_low_flow(canal: TestCanal) -> list[float]:
    """What is taken between the discharges of one pool and the next [m³/s]; all in the last."""
    flows = [discharge for discharge, _, _ in canal.low]
    return [above - below for above, below in zip(flows, [*flows[1:], 0.0], strict=True)]

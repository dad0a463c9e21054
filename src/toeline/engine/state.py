"""The arrays that the time loop changes in place."""

from typing import NamedTuple

import numpy as np

from toeline.hydraulics.gradually_varied_flow import Channel
from toeline.network.tables import Boundary, Gates, Links, Nodes, Offtakes, Pools


class State(NamedTuple):
    """Where the canal stands, by node (n) and link (n + 1)."""

    level: np.ndarray  # (n) m
    volume: np.ndarray  # (n) m³, exact sum of what came and went
    discharge: np.ndarray  # (n + 1) m³/s
    convective_head: np.ndarray  # (n + 1) m, C of a reach link
    net_inflow: np.ndarray  # (n) m³/s, dV/dt
    convective_rate: np.ndarray  # (n + 1) m/s, dC/dt
    convective_share: np.ndarray  # (n + 1), 1 in calm flow, 0 from critical flow on
    imbalance: np.ndarray  # (n + 1) m of head left to accelerate the link's water (local inertia)
    mean_area: np.ndarray  # (n + 1) m² of a reach link
    width: np.ndarray  # (n) m, dA/dz of the storage
    delivery: np.ndarray  # (d) m³/s


class Forcing(NamedTuple):
    """What people and weather do to the canal between two stops: linear in time; see network.tables for the order."""

    value: np.ndarray  # (f) at the start of the leg
    rate: np.ndarray  # (f) a second
    now: np.ndarray  # (f) at the time of a stage


class Tables(NamedTuple):
    """The tables of a Network as one argument of compiled code."""

    channel: Channel
    nodes: Nodes
    links: Links
    gates: Gates
    offtakes: Offtakes
    boundary: Boundary
    pools: Pools


class Totals(NamedTuple):
    """Volumes since the start of the day [m³], advanced with the same weights as the stored volumes."""

    inflow: np.ndarray  # (1)
    outflow: np.ndarray  # (1)
    delivery: np.ndarray  # (d)


class Stage(NamedTuple):
    """Scratch of the implicit stages."""

    area: np.ndarray  # (n) m², storage area of the section
    width: np.ndarray  # (n) m, its derivative to the level
    conveyance: np.ndarray  # (n) m³/s
    conveyance_slope: np.ndarray  # (n) m²/s
    inverse_area: np.ndarray  # (n) α/A² [1/m⁴]
    inverse_area_slope: np.ndarray  # (n) [1/m⁵]
    volume_base: np.ndarray  # (n) m³, what the stage starts from
    convective_base: np.ndarray  # (n + 1) m
    momentum_base: np.ndarray  # (n + 1) m of head an area, earlier stages of the local inertia
    source: np.ndarray  # (n) m³/s, deliveries, negative
    source_slope: np.ndarray  # (n) m²/s
    correction: np.ndarray  # (2n + 1) link, node, link … as in the matrix
    pivot: np.ndarray  # (2n + 1) inverse pivots
    lower: np.ndarray  # (2n + 1)
    upper: np.ndarray  # (2n + 1)
    error: np.ndarray  # (n) m


def new_state(nodes: int, offtakes: int) -> State:
    """A state of zeros."""
    sizes = dict.fromkeys(State._fields, nodes + 1)
    sizes |= dict.fromkeys(("level", "volume", "net_inflow", "width"), nodes) | {"delivery": offtakes}
    return State(**{name: np.zeros(size) for name, size in sizes.items()})


def new_totals(offtakes: int) -> Totals:
    """Totals of zero."""
    return Totals(np.zeros(1), np.zeros(1), np.zeros(offtakes))


def new_stage(nodes: int) -> Stage:
    """Scratch for a canal of so many nodes."""
    sizes = dict.fromkeys(Stage._fields, nodes)
    sizes |= dict.fromkeys(("convective_base", "momentum_base"), nodes + 1)
    sizes |= dict.fromkeys(("correction", "pivot", "lower", "upper"), 2 * nodes + 1)
    return Stage(**{name: np.zeros(size) for name, size in sizes.items()})

"""The arrays that the time loop changes in place: records by node and by link."""

from typing import NamedTuple

import numpy as np

from toeline.network.tables import Network

STORED = np.dtype(
    [
        ("level", float),  # m above datum
        ("volume", float),  # m³, exact sum of what came and went
        ("net_inflow", float),  # m³/s, dV/dt
        ("width", float),  # m, dA/dz of the storage
        ("rate", float),  # m/s, dz/dt
    ]
)
"""A node of the state."""

CARRIED = np.dtype(
    [
        ("discharge", float),  # m³/s
        ("convective_head", float),  # m, of a reach link
        ("convective_rate", float),  # m/s, its rate of change
        ("convective_share", float),  # 1 in calm flow, 0 from critical flow on
        ("imbalance", float),  # m of head that accelerates the link's water (local inertia)
        ("mean_area", float),  # m² of a reach link
        ("source_area", float),  # m² at its end that the water comes from
    ]
)
"""A link of the state."""

NODE_WORK = np.dtype(
    [
        ("area", float),  # m² of storage
        ("width", float),  # m, its derivative to the level
        ("conveyance", float),  # m³/s
        ("conveyance_slope", float),  # m²/s
        ("inverse_area", float),  # α/A² [1/m⁴]
        ("inverse_area_slope", float),  # [1/m⁵]
        ("volume_base", float),  # m³ that the stage starts from
        ("source", float),  # m³/s, deliveries, escapes and losses, negative
        ("source_slope", float),  # m²/s
    ]
)

LINK_WORK = np.dtype(
    [
        ("convective_base", float),  # m that the stage starts from
        ("momentum_base", float),  # m of head an area, left by earlier stages
        ("by_up", float),  # m²/s, derivative of a gate's discharge to the level above
        ("by_down", float),  # m²/s, and to the level below
    ]
)

MATRIX_ROW = np.dtype([("pivot", float), ("lower", float), ("upper", float), ("x", float)])
"""Inverse pivot, coefficients and unknown of a row: link, node, link …; see `tridiagonal`."""

FORCING = np.dtype([("value", float), ("rate", float), ("now", float)])
"""At the start of a leg, a second, and at the time of a stage; see network.tables for the order."""


class State(NamedTuple):
    """Where the canal stands."""

    nodes: np.recarray  # (n) of STORED
    links: np.recarray  # (n + 1) of CARRIED
    delivery: np.ndarray  # (d) m³/s
    escape: np.ndarray  # (e) m³/s
    loss: np.ndarray  # (p) m³/s, seepage and evaporation less rain of a pool


class Work(NamedTuple):
    """Scratch of the implicit stages."""

    nodes: np.recarray  # (n) of NODE_WORK
    links: np.recarray  # (n + 1) of LINK_WORK
    rows: np.recarray  # (2n + 1) of MATRIX_ROW


class Totals(NamedTuple):
    """Volumes since the start of the day [m³], advanced with the same weights as the stored volumes."""

    passed: np.ndarray  # (p + 1) through the upper ends of the pools and the lower end of the last
    delivery: np.ndarray  # (d)
    escape: np.ndarray  # (e)
    loss: np.ndarray  # (p)


def zeros(count: int, kind: np.dtype) -> np.recarray:
    """A record array of zeros."""
    return np.zeros(count, kind).view(np.recarray)


def new_state(network: Network) -> State:
    """A state of zeros."""
    nodes = network.node_count
    links = zeros(nodes + 1, CARRIED)
    links.mean_area = links.source_area = links.convective_share = 1.0
    takes, escapes, pools = network.offtake_count, network.escape_count, network.pool_count
    return State(zeros(nodes, STORED), links, np.zeros(takes), np.zeros(escapes), np.zeros(pools))


def new_work(nodes: int) -> Work:
    """Scratch for a canal of so many nodes."""
    return Work(zeros(nodes, NODE_WORK), zeros(nodes + 1, LINK_WORK), zeros(2 * nodes + 1, MATRIX_ROW))


def new_totals(network: Network) -> Totals:
    """Totals of zero."""
    takes, escapes, pools = network.offtake_count, network.escape_count, network.pool_count
    return Totals(np.zeros(pools + 1), np.zeros(takes), np.zeros(escapes), np.zeros(pools))

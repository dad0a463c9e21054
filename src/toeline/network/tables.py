"""The canal as arrays, in the form that compiled code reads.

Nodes are numbered downstream. Link j lies between node j − 1 and node j; link 0 is the head of the canal and link n its
tail, so that n nodes have n + 1 links and every boundary is a link like any other.
"""

from dataclasses import dataclass
from typing import Any, NamedTuple

import numpy as np

from toeline.hydraulics.gradually_varied_flow import Channel
from toeline.hydraulics.underflow_gate import UnderflowGate

INFLOW, REACH, GATE, TAIL_LEVEL, FREE_OVERFALL, RATING, NORMAL_DEPTH = range(7)
"""Kinds of link."""

HEAD, TAIL = -1, -2
"""Stand for the node beyond either end of the canal."""

FORCING_HEAD, FORCING_TAIL, FORCING_GATES = 0, 1, 2
"""Where the forcing array holds the inflow or head level, the tail level and, from there on, gate openings."""


CELL = np.dtype(
    [
        ("length", float),  # m of canal that the node stands for
        ("dry_area", float),  # m² at the dry depth, from which the area goes on exponentially
        ("dry_width", float),  # m there
        ("dry_perimeter", float),  # m there
    ]
)
"""The storage of a node whose level is unknown."""

LINK = np.dtype(
    [
        ("kind", np.int64),
        ("length", float),  # m; 1 m of friction at a tail without a gate, 0 for other boundaries and gates
        ("point_loss", float),  # k of k·V²/2g
        ("gate", np.int64),  # index, -1 where there is none
    ]
)

GATE_ROW = np.dtype(
    [
        *((name, float) for name in UnderflowGate._fields),
        ("upstream_node", np.int64),  # HEAD for the reservoir
        ("downstream_node", np.int64),  # of the channel; not an unknown one below a tail gate with a level beyond
        ("upstream_section", np.int64),  # row of Channel.shapes
        ("downstream_section", np.int64),
        ("floor_last", np.int64),  # last node of the channel below
        ("protection_last", np.int64),  # last node of its protected floor, at least one below the first
        ("apron_end", float),  # m from the gate
        ("protection_end", float),  # m from the gate
    ]
)
"""A gate: the fields of its law, and where it stands."""

OFFTAKE = np.dtype(
    [
        ("node", np.int64),
        ("kind", np.int64),  # see hydraulics.offtake
        ("sill_level", float),  # m above datum
        ("width", float),  # m
        ("coefficient", float),  # 1 of an orifice, m^0.5/s of a weir
    ]
)

POOL = np.dtype([("first_node", np.int64), ("last_node", np.int64)])


class Tables(NamedTuple):
    """The canal as compiled code takes it: record arrays by node (n), link (n + 1), gate, offtake and pool."""

    channel: Channel
    cells: np.recarray  # (n) of CELL
    links: np.recarray  # (n + 1) of LINK
    gates: np.recarray  # (g) of GATE_ROW
    offtakes: np.recarray  # (d) of OFFTAKE
    pools: np.recarray  # (p) of POOL
    tail_slope: np.ndarray  # (1) for NORMAL_DEPTH
    tail_rating: np.ndarray  # (2, r) levels [m] and discharges [m³/s] for RATING


def records(row: np.dtype, /, **columns: Any) -> np.recarray:
    """A record array from its columns, all of one length."""
    table = np.zeros(len(next(iter(columns.values()))), row).view(np.recarray)
    for name, values in columns.items():
        table[name] = values
    return table


@dataclass(frozen=True)
class Network:
    """All tables of a canal, and the names and levels that only people read.

    `tables.channel` holds the canal's nodes and, behind a tail gate, those of the floor beyond it. Of the n unknown
    nodes the last one is a basin beyond the tail gate where `has_tail_basin`; it is outside the canal and its ledger.
    """

    tables: Tables
    has_tail_basin: bool
    names: "Names"

    @property
    def channel(self) -> Channel:
        return self.tables.channel

    @property
    def node_count(self) -> int:
        """Nodes with an unknown level, the tail basin included."""
        return self.tables.cells.size

    @property
    def canal_node_count(self) -> int:
        """Nodes inside the canal."""
        return self.node_count - int(self.has_tail_basin)

    @property
    def gate_count(self) -> int:
        return self.tables.gates.size

    @property
    def offtake_count(self) -> int:
        return self.tables.offtakes.size


@dataclass(frozen=True)
class Names:
    """Labels and levels for people, by the same indices as the tables."""

    pools: tuple[str, ...]
    gates: tuple[str, ...]
    offtakes: tuple[str, ...]
    surfaces: tuple[str, ...]
    node_surface: np.ndarray  # (canal nodes) int8, index of the surface that begins at the node
    velocity_limit: np.ndarray  # (canal nodes) m/s, NaN where none
    lining_level: np.ndarray  # (canal nodes) m, NaN where none
    bank_level: np.ndarray  # (canal nodes) m, NaN where none
    target_level: np.ndarray  # (p) m, NaN where none
    max_opening: np.ndarray  # (g) m
    smallest_move: np.ndarray  # (g) m
    turn: np.ndarray  # (g) m, NaN where none
    scale_mark: np.ndarray  # (g) m, NaN where none

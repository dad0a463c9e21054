"""The canal as arrays, in the form that compiled code reads.

Nodes are numbered downstream. Link j lies between node j − 1 and node j; link 0 is the head of the canal and link n its
tail, so that n nodes have n + 1 links and every boundary is a link like any other.
"""

from dataclasses import dataclass
from typing import Any, NamedTuple

import numpy as np
import numpy.typing as npt

from toeline.hydraulics.gradually_varied_flow import Channel
from toeline.hydraulics.underflow_gate import UnderflowGate

INFLOW, REACH, GATE, TAIL_LEVEL, FREE_OVERFALL, RATING, NORMAL_DEPTH = range(7)
"""Kinds of link."""

HEAD, TAIL = -1, -2
"""Stand for the node beyond either end of the canal."""

FORCING_HEAD, FORCING_TAIL, FORCING_EVAPORATION, FORCING_RAIN, FORCING_GATES = range(5)
"""Where the forcing array holds the inflow or head level, the tail level, evaporation and rain [m/s] and, from there
on, openings of leaves.
"""


CELL = np.dtype(
    [
        ("length", float),  # m of canal that the node stands for
        ("dry_area", float),  # m² at the dry depth, from which the area goes on exponentially
        ("dry_width", float),  # m there
        ("dry_perimeter", float),  # m there
        ("seepage", float),  # m/s through the wetted perimeter
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
        ("first_leaf", np.int64),  # one leaf for all bays, or one a bay
        ("leaf_count", np.int64),
    ]
)
"""A gate: the fields of its law, where it stands, and what moves it."""

LEAF = np.dtype(
    [
        ("gate", np.int64),
        ("bay", np.int64),  # row of bays that move apart, -1 where the leaf stands for all bays of its gate
    ]
)

OFFTAKE = np.dtype(
    [
        ("node", np.int64),
        ("kind", np.int64),  # see hydraulics.offtake
        ("sill_level", float),  # m above datum
        ("width", float),  # m
        ("coefficient", float),  # 1 of an orifice, m^0.5/s of a weir
    ]
)

ESCAPE = np.dtype(
    [
        ("node", np.int64),
        ("crest_level", float),  # m above datum
        ("length", float),  # m of crest
        ("coefficient", float),  # m^0.5/s
        ("outside_level", float),  # m above datum, -inf where the water falls freely
    ]
)

GAUGE = np.dtype(
    [
        ("node", np.int64),  # of the channel; HEAD for the reservoir
        ("weight", float),  # 1, share of the next node
        ("bed_level", float),  # m above datum, at the staff
        ("zero_level", float),  # m above datum
    ]
)

POOL = np.dtype([("first_node", np.int64), ("last_node", np.int64), ("seeps", np.int64)])
"""`seeps` is 1 where any of its nodes has a seepage."""


class Tables(NamedTuple):
    """The canal as compiled code takes it: record arrays by node (n), link (n + 1), gate, offtake and so on."""

    channel: Channel
    cells: np.recarray  # (n) of CELL
    links: np.recarray  # (n + 1) of LINK
    gates: np.recarray  # (g) of GATE_ROW
    leaves: np.recarray  # (l) of LEAF
    offtakes: np.recarray  # (d) of OFFTAKE
    escapes: np.recarray  # (e) of ESCAPE
    gauges: np.recarray  # (u) of GAUGE
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
    clean_roughness: np.ndarray  # (channel nodes) Manning's n before any factor
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
    def leaf_count(self) -> int:
        return self.tables.leaves.size

    @property
    def bay_count(self) -> int:
        """Bays of gates whose bays move apart."""
        return len(self.names.bays)

    def leaves_of(self, g: int) -> range:
        """Rows of the leaves of a gate."""
        first = int(self.tables.gates.first_leaf[g])
        return range(first, first + int(self.tables.gates.leaf_count[g]))

    def gate_law(self, g: int) -> tuple[UnderflowGate, np.ndarray, np.ndarray]:
        """The law of a gate, and the sections above and below it."""
        row, shapes = self.tables.gates[g], self.channel.shapes
        law = UnderflowGate(*(float(row[name]) for name in UnderflowGate._fields))
        return law, shapes[row.upstream_section], shapes[row.downstream_section]

    def places_of_leaves(self) -> list[tuple[int, int]]:
        """Gate and number of the bay of every leaf; 0 where it stands for all bays."""
        gates, leaves = self.tables.gates, self.tables.leaves
        numbers = np.arange(leaves.size) - gates.first_leaf[leaves.gate] + 1
        return list(zip(leaves.gate.tolist(), np.where(leaves.bay < 0, 0, numbers).tolist(), strict=True))

    @property
    def offtake_count(self) -> int:
        return self.tables.offtakes.size

    @property
    def escape_count(self) -> int:
        return self.tables.escapes.size

    @property
    def pool_count(self) -> int:
        return self.tables.pools.size

    def set_roughness(self, factors: np.ndarray) -> None:
        """Give the nodes of every pool their roughness times a factor [1]; beyond a tail gate it is never changed."""
        by_node = np.ones(self.clean_roughness.size)
        by_node[: self.canal_node_count] = factors[self.pool_of(np.arange(self.canal_node_count))]
        self.channel.nodes.roughness = self.clean_roughness * by_node

    def pool_of(self, node: npt.ArrayLike) -> np.ndarray:
        """Index of the pool of a canal node; that after the last for a node beyond a tail gate."""
        return np.searchsorted(self.tables.pools.last_node, node)


@dataclass(frozen=True)
class Names:
    """Labels and levels for people, by the same indices as the tables."""

    pools: tuple[str, ...]
    gates: tuple[str, ...]
    bays: tuple[str, ...]  # of gates whose bays move apart
    offtakes: tuple[str, ...]
    escapes: tuple[str, ...]
    gauges: tuple["GaugeName", ...]
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
    gatekeepers: tuple[str, ...]  # by gate, "" where none is named


class GaugeName(NamedTuple):
    """A gauge as people know it: beside a gate, or along a pool (no gate, side "none")."""

    name: str
    gate: str
    side: str
    pool: str  # "head" or "tail" beyond the ends of the canal

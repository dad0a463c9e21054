"""The canal as arrays, in the form that compiled code reads.

Nodes are numbered downstream. Link j lies between node j − 1 and node j; link 0 is the head of the canal and link n its
tail, so that n nodes have n + 1 links and every boundary is a link like any other.
"""

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from toeline.hydraulics.gradually_varied_flow import Channel

INFLOW, REACH, GATE, TAIL_LEVEL, FREE_OVERFALL, RATING, NORMAL_DEPTH = range(7)
"""Kinds of link."""

HEAD, TAIL = -1, -2
"""Stand for the node beyond either end of the canal."""

FORCING_HEAD, FORCING_TAIL, FORCING_GATES = 0, 1, 2
"""Where the forcing array holds the inflow or head level, the tail level and, from there on, gate openings."""


class Nodes(NamedTuple):
    """The n nodes whose levels are unknown, and the section rows by which they dry."""

    cell_length: np.ndarray  # (n) m of canal that a node stands for
    dry_area: np.ndarray  # (s) m², area of a section row at the dry depth
    dry_width: np.ndarray  # (s) m, its width there
    dry_perimeter: np.ndarray  # (s) m


class Links(NamedTuple):
    """The n + 1 links."""

    kind: np.ndarray  # (n + 1) int64
    length: np.ndarray  # (n + 1) m; 1 m of friction at a tail without a gate, else 0
    point_loss: np.ndarray  # (n + 1) k of k·V²/2g
    gate: np.ndarray  # (n + 1) int64 index, -1 where there is none


class Gates(NamedTuple):
    """The g gates, in order downstream."""

    law: np.ndarray  # (g, 11) fields of an UnderflowGate
    upstream_node: np.ndarray  # (g) int64, HEAD for the reservoir
    downstream_node: np.ndarray  # (g) int64, a node of the channel (beyond the n nodes below a tail gate)
    upstream_shape: np.ndarray  # (g) int64, section row
    downstream_shape: np.ndarray  # (g) int64, section row
    floor_last: np.ndarray  # (g) int64, last node of the channel below
    apron_end: np.ndarray  # (g) m from the gate
    protection_end: np.ndarray  # (g) m from the gate


class Offtakes(NamedTuple):
    """The d offtakes."""

    node: np.ndarray  # (d) int64
    kind: np.ndarray  # (d) int64, see hydraulics.offtake
    sill_level: np.ndarray  # (d) m
    width: np.ndarray  # (d) m
    coefficient: np.ndarray  # (d) 1 or m^0.5/s


class Boundary(NamedTuple):
    """What lies beyond the tail."""

    slope: np.ndarray  # (1) for NORMAL_DEPTH
    rating_level: np.ndarray  # (r) m
    rating_discharge: np.ndarray  # (r) m³/s


class Pools(NamedTuple):
    """The p pools by their nodes."""

    first_node: np.ndarray  # (p) int64
    last_node: np.ndarray  # (p) int64


@dataclass(frozen=True)
class Network:
    """All tables of a canal, and the names and levels that only people read.

    `channel` holds the canal's nodes and, behind a tail gate, those of the floor beyond it. Of the n unknown nodes the
    last one is a basin beyond the tail gate where `has_tail_basin`; it is outside the canal and its ledger.
    """

    channel: Channel
    nodes: Nodes
    links: Links
    gates: Gates
    offtakes: Offtakes
    boundary: Boundary
    pools: Pools
    has_tail_basin: bool
    names: "Names"

    @property
    def node_count(self) -> int:
        """Nodes with an unknown level, the tail basin included."""
        return self.nodes.cell_length.size

    @property
    def canal_node_count(self) -> int:
        """Nodes inside the canal."""
        return self.node_count - int(self.has_tail_basin)

    @property
    def gate_count(self) -> int:
        return self.gates.upstream_node.size

    @property
    def offtake_count(self) -> int:
        return self.offtakes.node.size


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

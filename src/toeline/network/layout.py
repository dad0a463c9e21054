"""Where the nodes of a canal stand: at both ends of every stretch and in between at the chosen spacing."""

import math
from dataclasses import dataclass, field
from itertools import pairwise

from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.pools import Stretch

SUDDEN_CHANGE_LENGTH = 1.0
"""Length [m] given to a change of section without a transition."""

BARE_TAIL_LENGTH = 100.0
"""Length [m] of level, unprotected floor below a tail gate whose floor is not described."""


@dataclass
class Node:
    """A node while it is laid out: sections by name, the second one blended in by weight."""

    distance: float  # m from the start of its line
    bed: float
    section: str
    blend: tuple[str, float] | None
    surface: str
    transition_loss: float = 0.0  # of the link to the next node


@dataclass
class Line:
    """The nodes of a pool, or of the floor beyond the tail gate."""

    start: float  # m from the head of the canal
    nodes: list[Node] = field(default_factory=list)
    first_index: int = 0

    @property
    def last_index(self) -> int:
        return self.first_index + len(self.nodes) - 1


def lay_out(canal: Canal, spacing: float) -> list[Line]:
    """A line of nodes a pool, and one for the floor beyond a tail gate."""
    lines: list[Line] = []
    start, index = 0.0, 0
    for pool in canal.pools:
        line = Line(start, _pool_nodes(pool.stretches, pool.bed_level, spacing), index)
        lines.append(line)
        start, index = start + line.nodes[-1].distance, index + len(line.nodes)
    if canal.gates and canal.gates[-1].downstream == "tail":
        lines.append(Line(start, _tail_floor(canal, spacing), index))
    return lines


def _tail_floor(canal: Canal, spacing: float) -> list[Node]:
    tail, gate = canal.tail, canal.gates[-1]
    bed = tail.floor_level if tail.floor_level is not None else gate.sill_level
    if tail.stretches:
        return _pool_nodes(tail.stretches, bed, spacing)
    last = canal.pools[-1].stretches[-1]
    section = tail.section or last.section
    surface = tail.surface or ""
    return [Node(d, bed, section, None, surface) for d in (0.0, BARE_TAIL_LENGTH)]


def _pool_nodes(stretches: list[Stretch], bed: float, spacing: float) -> list[Node]:
    """Nodes at both ends of every stretch and in between; a change of section is spread over a transition."""
    first = stretches[0]
    nodes = [Node(0.0, bed, first.section, None, first.surface)]
    before = first.section
    for stretch in stretches:
        length, level = stretch.length, nodes[-1].bed
        blend = stretch.section != before
        if blend and not stretch.transition:
            sudden = min(SUDDEN_CHANGE_LENGTH, 0.5 * length)
            _append(nodes, stretch, sudden, spacing, before)
            length, blend = length - sudden, False
        _append(nodes, stretch, length, spacing, before if blend else None)
        nodes[-1].bed = level - stretch.slope * stretch.length
        before = stretch.section
    return nodes


def _append(nodes: list[Node], stretch: Stretch, length: float, spacing: float, blended_from: str | None) -> None:
    """Add the nodes of one length of a stretch behind those already laid."""
    start, bed = nodes[-1].distance, nodes[-1].bed
    nodes[-1].surface = stretch.surface
    count = max(1, math.ceil(length / spacing - 1e-9))
    for k in range(1, count + 1):
        weight = k / count
        blend = (blended_from, 1.0 - weight) if blended_from and k < count else None
        nodes[-1].transition_loss = stretch.transition_loss if blended_from else 0.0
        nodes.append(
            Node(
                start + length * weight, bed - stretch.slope * length * weight, stretch.section, blend, stretch.surface
            )
        )


def protected_ends(canal: Canal, line: Line) -> tuple[float, float]:
    """Where the concrete apron ends, and the last protected surface without a gap [m from the gate]."""
    apron = protection = 0.0
    on_apron = True
    for node, following in pairwise(line.nodes):
        surface = canal.surfaces.get(node.surface)
        if surface is None or not surface.protected:
            break
        on_apron = on_apron and surface.apron
        apron = following.distance if on_apron else apron
        protection = following.distance
    return apron, protection

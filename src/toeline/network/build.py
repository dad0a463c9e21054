"""From the scenario's pools, gates and offtakes to the tables of the time loop."""

import math

import numpy as np

from toeline.hydraulics import cross_section, offtake, status
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.gradually_varied_flow import CHANNEL_NODE, DRY_DEPTH, Channel
from toeline.hydraulics.underflow_gate import SHARP_EDGE_CONTRACTION, UnderflowGate
from toeline.hydraulics.uniform_flow import normal_depth
from toeline.network.layout import Line, Node, lay_out, protected_ends
from toeline.network.tables import (
    CELL,
    FREE_OVERFALL,
    GATE,
    GATE_ROW,
    HEAD,
    INFLOW,
    LINK,
    NORMAL_DEPTH,
    OFFTAKE,
    POOL,
    RATING,
    REACH,
    TAIL_LEVEL,
    Names,
    Network,
    Tables,
    records,
)
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.gates import Gate
from toeline.scenario.schema.sections import Section

TAIL_BASIN_LENGTH = 20.0
"""Length [m] of canal that stands for the water just below a tail gate with a rating beyond (choice)."""

RESERVOIR_WIDTH = 1e9
"""Width [m] of the section above a head gate: still water."""

TAIL_KINDS = {"level": TAIL_LEVEL, "rating": RATING, "free overfall": FREE_OVERFALL, "normal depth": NORMAL_DEPTH}
OFFTAKE_KINDS = {"demand": offtake.DEMAND, "orifice": offtake.ORIFICE, "weir": offtake.WEIR}


def network_of(canal: Canal, spacing: float) -> Network:
    """Tables of a canal with nodes at most `spacing` metres apart."""
    lines = lay_out(canal, spacing)
    has_tail_gate = canal.gates and canal.gates[-1].downstream == "tail"
    has_basin = bool(has_tail_gate) and canal.tail.kind != "level"
    shapes = _Shapes(canal)
    channel = _channel(lines, shapes)
    canal_nodes = sum(len(line.nodes) for line in lines[: len(canal.pools)])
    tables = Tables(
        channel=channel,
        cells=_cells(lines, channel, canal_nodes, has_basin),
        links=_links(canal, lines, canal_nodes, has_basin),
        gates=_gates(canal, lines, channel, shapes),
        offtakes=_offtakes(canal, lines, channel),
        pools=_pools(lines[: len(canal.pools)]),
        tail_slope=np.array([canal.tail.slope or 0.0]),
        tail_rating=np.ascontiguousarray(np.array(canal.tail.rating or [(0.0, 0.0), (1.0, 1.0)], float).T),
    )
    return Network(tables, has_basin, _names(canal, lines, canal_nodes))


class _Shapes:
    """Section arrays by name and blend, each once."""

    def __init__(self, canal: Canal):
        self.sections = {name: _section(section) for name, section in canal.sections.items()}
        self.roughness = {name: section.roughness for name, section in canal.sections.items()}
        self.rows: list[np.ndarray] = []
        self.index: dict[tuple[str, tuple[str, float] | None], int] = {}

    def row(self, name: str, blend: tuple[str, float] | None) -> int:
        key = (name, blend)
        if key not in self.index:
            array = self.sections[name]
            if blend is not None:
                array = cross_section.blended(array, self.sections[blend[0]], blend[1])
            self.index[key] = self.add(array)
        return self.index[key]

    def add(self, array: np.ndarray) -> int:
        self.rows.append(array)
        return len(self.rows) - 1

    def roughness_at(self, name: str, blend: tuple[str, float] | None) -> float:
        n = self.roughness[name]
        return n if blend is None else n + blend[1] * (self.roughness[blend[0]] - n)


def _section(section: Section) -> np.ndarray:
    """Section array of the scenario's section; walls are vertical above the bank where one is given."""
    alpha, beta = section.velocity_coefficient, section.momentum_coefficient
    top = section.bank_height if section.bank_height is not None else math.inf
    if section.shape == "points":
        stations, levels = zip(*(section.points or ()), strict=True)
        return cross_section.surveyed(stations, levels, alpha, beta)
    if section.shape == "circle":
        return cross_section.circle(section.diameter or 0.0, alpha, beta)
    return cross_section.trapezoid(section.bottom_width or 0.0, section.side_slope or 0.0, top, alpha, beta)


def _channel(lines: list[Line], shapes: _Shapes) -> Channel:
    nodes = [(line, node) for line in lines for node in line.nodes]
    section = [shapes.row(node.section, node.blend) for _, node in nodes]
    shapes.add(cross_section.rectangle(RESERVOIR_WIDTH))
    table = records(
        CHANNEL_NODE,
        chainage=[line.start + node.distance for line, node in nodes],
        bed_level=[node.bed for _, node in nodes],
        section=section,
        roughness=[shapes.roughness_at(node.section, node.blend) for _, node in nodes],
        transition_loss=[node.transition_loss for _, node in nodes],
    )
    return Channel(table, cross_section.packed(shapes.rows))


def _cells(lines: list[Line], channel: Channel, canal_nodes: int, has_basin: bool) -> np.recarray:
    count = canal_nodes + int(has_basin)
    length = np.zeros(count)
    for line in lines:
        last = min(line.last_index, canal_nodes - 1)
        half = 0.5 * np.diff(channel.nodes.chainage[line.first_index : last + 1])
        length[line.first_index : last] += half
        length[line.first_index + 1 : last + 1] += half
    if has_basin:
        length[-1] = TAIL_BASIN_LENGTH
    at_dry = np.array([cross_section.geometry(row, DRY_DEPTH)[:3] for row in channel.shapes])
    area, width, perimeter = at_dry[channel.nodes.section[:count]].T
    return records(CELL, length=length, dry_area=area, dry_width=width, dry_perimeter=perimeter)


def _links(canal: Canal, lines: list[Line], canal_nodes: int, has_basin: bool) -> np.recarray:
    count = canal_nodes + int(has_basin)
    links = np.zeros(count + 1, LINK).view(np.recarray)
    links.kind, links.gate = REACH, -1
    for pool, line in zip(canal.pools, lines, strict=False):
        ends = np.array([node.distance for node in line.nodes])
        first = line.first_index + 1
        links.length[first : line.last_index + 1] = np.diff(ends)
        for loss in pool.point_losses:
            links.point_loss[first + int(np.searchsorted(ends[1:], loss.chainage))] += loss.coefficient
    tail = TAIL_KINDS[canal.tail.kind]
    links[0] = (INFLOW, 0.0, 0.0, -1)
    links[count] = (tail, 1.0 if tail == TAIL_LEVEL else 0.0, 0.0, -1)
    for g, link in enumerate(_gate_links(canal, lines)):
        links[link] = (GATE, 0.0, 0.0, g)
    return links


def _gate_links(canal: Canal, lines: list[Line]) -> list[int]:
    """The link of every gate: the one above the first node of the pool below it."""
    starts = {pool.name: line.first_index for pool, line in zip(canal.pools, lines, strict=False)}
    starts["tail"] = lines[len(canal.pools) - 1].last_index + 1
    return [starts[gate.downstream] for gate in canal.gates]


def _gates(canal: Canal, lines: list[Line], channel: Channel, shapes: _Shapes) -> np.recarray:
    names = [pool.name for pool in canal.pools] + ["tail"]
    rows = []
    for gate in canal.gates:
        line = lines[names.index(gate.downstream)]
        up = HEAD if gate.upstream == "head" else lines[names.index(gate.upstream)].last_index
        bed = gate.sill_level if up == HEAD else channel.nodes.bed_level[up]
        law = gate_law(gate, channel.nodes.bed_level[line.first_index], bed)
        sections = (
            len(shapes.rows) - 1 if up == HEAD else channel.nodes.section[up],
            channel.nodes.section[line.first_index],
        )
        apron, protection = protected_ends(canal, line)
        protected = line.first_index + max(1, sum(node.distance <= protection for node in line.nodes) - 1)
        rows.append((*law, up, line.first_index, *sections, line.last_index, protected, apron, protection))
    return np.array(rows, GATE_ROW).view(np.recarray)


def gate_law(gate: Gate, floor_level: float, upstream_bed_level: float) -> UnderflowGate:
    """The law's view of a gate of the scenario."""
    return UnderflowGate(
        width=gate.bays * gate.bay_width,
        sill_level=gate.sill_level,
        floor_level=floor_level,
        upstream_bed_level=upstream_bed_level,
        contraction=gate.contraction if gate.contraction is not None else SHARP_EDGE_CONTRACTION,
        radius=gate.radius or 0.0,
        pinion_height=gate.pinion_height or 0.0,
        discharge_factor=gate.discharge_factor,
        leaf_height=gate.leaf_height if gate.leaf_height is not None else math.inf,
        leaf_weir_coefficient=gate.leaf_weir_coefficient,
        leakage=gate.leakage,
    )


def _offtakes(canal: Canal, lines: list[Line], channel: Channel) -> np.recarray:
    """Every offtake at the node nearest to it."""
    names = [pool.name for pool in canal.pools]
    nodes = []
    for take in canal.offtakes:
        line = lines[names.index(take.pool)]
        distances = np.array([node.distance for node in line.nodes])
        nodes.append(line.first_index + int(np.argmin(np.abs(distances - take.chainage))))
    sills = [
        take.sill_level if take.sill_level is not None else channel.nodes.bed_level[node]
        for take, node in zip(canal.offtakes, nodes, strict=True)
    ]
    return records(
        OFFTAKE,
        node=nodes,
        kind=[OFFTAKE_KINDS[take.kind] for take in canal.offtakes],
        sill_level=sills,
        width=[take.width or 0.0 for take in canal.offtakes],
        coefficient=[take.coefficient or 0.0 for take in canal.offtakes],
    )


def _pools(lines: list[Line]) -> np.recarray:
    return records(POOL, first_node=[line.first_index for line in lines], last_node=[line.last_index for line in lines])


def _names(canal: Canal, lines: list[Line], canal_nodes: int) -> Names:
    surfaces = tuple(canal.surfaces)
    nodes = [node for line in lines for node in line.nodes][:canal_nodes]
    limits = {name: surface.velocity_limit for name, surface in canal.surfaces.items()}
    return Names(
        pools=tuple(pool.name for pool in canal.pools),
        gates=tuple(gate.name for gate in canal.gates),
        offtakes=tuple(take.name for take in canal.offtakes),
        surfaces=surfaces,
        node_surface=np.array([surfaces.index(node.surface) for node in nodes], np.int8),
        velocity_limit=np.array([_or_nan(limits[node.surface]) for node in nodes]),
        lining_level=np.array([_line_level(canal, node, "lining_height") for node in nodes]),
        bank_level=np.array([_line_level(canal, node, "bank_height") for node in nodes]),
        target_level=np.array([_or_nan(pool.target_level) for pool in canal.pools]),
        max_opening=np.array([gate.max_opening for gate in canal.gates], float),
        smallest_move=np.array([gate.smallest_move for gate in canal.gates], float),
        turn=np.array([_or_nan(gate.turn) for gate in canal.gates], float),
        scale_mark=np.array([_or_nan(gate.scale_mark) for gate in canal.gates], float),
    )


def _or_nan(value: float | None) -> float:
    return math.nan if value is None else value


def _line_level(canal: Canal, node: Node, height: str) -> float:
    """Level of the lining's or the bank's top at a node; through a transition it goes from one height to the other."""
    here = _or_nan(getattr(canal.sections[node.section], height))
    if node.blend is None:
        return node.bed + here
    there = _or_nan(getattr(canal.sections[node.blend[0]], height))
    return node.bed + here + node.blend[1] * (there - here)


def steep_stretches(canal: Canal, discharge: float) -> list[tuple[int, int, float, float]]:
    """Stretches whose normal depth is below critical: pool index, stretch index, normal and critical depth [m]."""
    found = []
    sections = {name: _section(section) for name, section in canal.sections.items()}
    for p, pool in enumerate(canal.pools):
        for s, stretch in enumerate(pool.stretches):
            section, n = sections[stretch.section], canal.sections[stretch.section].roughness
            normal, flag = normal_depth(section, n, stretch.slope, discharge)
            critical, _ = critical_depth(section, discharge)
            if flag == status.OK and normal < critical:
                found.append((p, s, normal, critical))
    return found

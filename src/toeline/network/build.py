"""From the scenario's pools, gates and offtakes to the tables of the time loop."""

import math
from collections.abc import Mapping

import numpy as np

from toeline.hydraulics import cross_section, offtake, status
from toeline.hydraulics.critical_flow import critical_depth
from toeline.hydraulics.gradually_varied_flow import CHANNEL_NODE, DRY_DEPTH, Channel
from toeline.hydraulics.underflow_gate import SHARP_EDGE_CONTRACTION, UnderflowGate
from toeline.hydraulics.uniform_flow import normal_depth
from toeline.network.layout import Line, Node, lay_out, protected_ends
from toeline.network.tables import (
    CELL,
    ESCAPE,
    FREE_OVERFALL,
    GATE,
    GATE_ROW,
    GAUGE,
    HEAD,
    INFLOW,
    LEAF,
    LINK,
    NORMAL_DEPTH,
    OFFTAKE,
    POOL,
    RATING,
    REACH,
    TAIL_LEVEL,
    GaugeName,
    Names,
    Network,
    Tables,
    records,
)
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.gates import Gate
from toeline.scenario.schema.gauges import Gauge
from toeline.scenario.schema.sections import Section

TAIL_BASIN_LENGTH = 20.0
"""Length [m] of canal that stands for the water just below a tail gate with a rating beyond (choice)."""

RESERVOIR_WIDTH = 1e9
"""Width [m] of the section above a head gate: still water."""

TAIL_KINDS = {"level": TAIL_LEVEL, "rating": RATING, "free overfall": FREE_OVERFALL, "normal depth": NORMAL_DEPTH}
OFFTAKE_KINDS = {"demand": offtake.DEMAND, "orifice": offtake.ORIFICE, "weir": offtake.WEIR}


def network_of(canal: Canal, spacing: float, seepage: Mapping[str, float] | None = None) -> Network:
    """Tables of a canal with nodes at most `spacing` metres apart; `seepage` [m/s] by pool goes before the canal's."""
    lines = lay_out(canal, spacing)
    seeping = _seepage(canal, lines, seepage or {})
    has_tail_gate = canal.gates and canal.gates[-1].downstream == "tail"
    has_basin = bool(has_tail_gate) and canal.tail.kind != "level"
    shapes = _Shapes(canal)
    channel = _channel(lines, shapes)
    canal_nodes = sum(len(line.nodes) for line in lines[: len(canal.pools)])
    tables = Tables(
        channel=channel,
        cells=_cells(lines, seeping, channel, canal_nodes, has_basin),
        links=_links(canal, lines, canal_nodes, has_basin),
        gates=_gates(canal, lines, channel, shapes),
        leaves=_leaves(canal),
        offtakes=_offtakes(canal, lines, channel),
        escapes=_escapes(canal, lines),
        gauges=_gauges(canal, lines, channel),
        pools=_pools(lines[: len(canal.pools)], seeping[: len(canal.pools)]),
        tail_slope=np.array([canal.tail.slope or 0.0]),
        tail_rating=np.ascontiguousarray(np.array(canal.tail.rating or [(0.0, 0.0), (1.0, 1.0)], float).T),
    )
    return Network(tables, channel.nodes.roughness.copy(), has_basin, _names(canal, lines, canal_nodes))


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


def _cells(
    lines: list[Line], seepage: list[list[float]], channel: Channel, canal_nodes: int, has_basin: bool
) -> np.recarray:
    count = canal_nodes + int(has_basin)
    length, seeping = np.zeros(count), np.zeros(count)
    for line, rates in zip(lines, seepage, strict=True):
        last = min(line.last_index, canal_nodes - 1)
        half = 0.5 * np.diff(channel.nodes.chainage[line.first_index : last + 1])
        for side in (slice(line.first_index, last), slice(line.first_index + 1, last + 1)):
            length[side] += half
            seeping[side] += half * rates[: half.size]
    if has_basin:
        length[-1] = TAIL_BASIN_LENGTH
    at_dry = np.array([cross_section.geometry(row, DRY_DEPTH)[:3] for row in channel.shapes])
    area, width, perimeter = at_dry[channel.nodes.section[:count]].T
    return records(
        CELL, length=length, dry_area=area, dry_width=width, dry_perimeter=perimeter, seepage=seeping / length
    )


def _seepage(canal: Canal, lines: list[Line], of_day: Mapping[str, float]) -> list[list[float]]:
    """Seepage [m/s] from every node on, by line: that of the day for the pool, of the surface, or of the canal; none
    beyond the last gate where no surface is named.
    """
    of_surface = {name: surface.seepage for name, surface in canal.surfaces.items()} | {"": 0.0}
    in_canal = {name: canal.losses.seepage if rate is None else rate for name, rate in of_surface.items()}
    names = [pool.name for pool in canal.pools] + ["tail"]
    return [
        [of_day.get(name, in_canal[node.surface]) for node in line.nodes]
        for line, name in zip(lines, names, strict=False)
    ]


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
    rows, first_leaf = [], 0
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
        leaves = (first_leaf, gate.leaf_count)
        rows.append((*law, up, line.first_index, *sections, line.last_index, protected, apron, protection, *leaves))
        first_leaf += gate.leaf_count
    return np.array(rows, GATE_ROW).view(np.recarray)


def _leaves(canal: Canal) -> np.recarray:
    """The leaves of all gates, those of bays that move apart numbered through."""
    gates = [g for g, gate in enumerate(canal.gates) for _ in range(gate.leaf_count)]
    is_apart = np.array([canal.gates[g].separate_bays for g in gates], bool)
    return records(LEAF, gate=gates, bay=np.where(is_apart, np.cumsum(is_apart) - 1, -1))


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
    nodes = [_nearest_node(canal, lines, take.pool, take.chainage) for take in canal.offtakes]
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


def _line_of(canal: Canal, lines: list[Line], pool: str) -> Line:
    return lines[[other.name for other in canal.pools].index(pool)]


def _nearest_node(canal: Canal, lines: list[Line], pool: str, chainage: float) -> int:
    line = _line_of(canal, lines, pool)
    distances = np.array([node.distance for node in line.nodes])
    return line.first_index + int(np.argmin(np.abs(distances - chainage)))


def _escapes(canal: Canal, lines: list[Line]) -> np.recarray:
    """Every escape at the node nearest to the middle of its crest."""
    outside = [escape.outside_level for escape in canal.escapes]
    return records(
        ESCAPE,
        node=[_nearest_node(canal, lines, escape.pool, escape.chainage) for escape in canal.escapes],
        crest_level=[escape.crest_level for escape in canal.escapes],
        length=[escape.length for escape in canal.escapes],
        coefficient=[escape.coefficient for escape in canal.escapes],
        outside_level=[-math.inf if level is None else level for level in outside],
    )


def _gauges(canal: Canal, lines: list[Line], channel: Channel) -> np.recarray:
    """Every gauge between the two nodes beside it, or at the node beside its gate."""
    rows = []
    for gauge in canal.gauges:
        node, weight = _gauge_place(canal, lines, gauge)
        beds = channel.nodes.bed_level[node : node + 2]
        bed = -math.inf if node == HEAD else beds[0] + (weight * (beds[1] - beds[0]) if weight else 0.0)
        rows.append((node, weight, bed, gauge.zero_level))
    return np.array(rows, GAUGE).view(np.recarray)


def _gauge_place(canal: Canal, lines: list[Line], gauge: Gauge) -> tuple[int, float]:
    """Node of the channel and share of the next one."""
    if gauge.pool is not None and gauge.chainage is not None:
        line = _line_of(canal, lines, gauge.pool)
        distances = np.array([node.distance for node in line.nodes])
        before = int(np.searchsorted(distances[1:-1], gauge.chainage, side="right"))
        weight = (gauge.chainage - distances[before]) / (distances[before + 1] - distances[before])
        return line.first_index + before, float(min(weight, 1.0))
    gate = next(gate for gate in canal.gates if gate.name == gauge.gate)
    if gauge.side == "downstream":
        return _gate_links(canal, lines)[canal.gates.index(gate)], 0.0
    return (HEAD if gate.upstream == "head" else _line_of(canal, lines, gate.upstream).last_index), 0.0


def _gauge_name(canal: Canal, gauge: Gauge) -> GaugeName:
    if gauge.pool is not None:
        return GaugeName(gauge.name, "", "none", gauge.pool)
    gate = next(gate for gate in canal.gates if gate.name == gauge.gate)
    side = gauge.side or ""
    return GaugeName(gauge.name, gate.name, side, gate.upstream if side == "upstream" else gate.downstream)


def _pools(lines: list[Line], seepage: list[list[float]]) -> np.recarray:
    return records(
        POOL,
        first_node=[line.first_index for line in lines],
        last_node=[line.last_index for line in lines],
        seeps=[int(any(rates)) for rates in seepage],
    )


def _names(canal: Canal, lines: list[Line], canal_nodes: int) -> Names:
    surfaces = tuple(canal.surfaces)
    nodes = [node for line in lines for node in line.nodes][:canal_nodes]
    limits = {name: surface.velocity_limit for name, surface in canal.surfaces.items()}
    return Names(
        pools=tuple(pool.name for pool in canal.pools),
        gates=tuple(gate.name for gate in canal.gates),
        bays=tuple(f"{g.name}, bay {k + 1}" for g in canal.gates if g.separate_bays for k in range(g.bays)),
        offtakes=tuple(take.name for take in canal.offtakes),
        escapes=tuple(escape.name for escape in canal.escapes),
        gauges=tuple(_gauge_name(canal, gauge) for gauge in canal.gauges),
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
        gatekeepers=tuple(gate.gatekeeper or "" for gate in canal.gates),
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


def steep_stretches(canal: Canal, discharge: float, factors: np.ndarray) -> list[tuple[int, int, float, float]]:
    """Stretches whose normal depth is below critical: pool index, stretch index, normal and critical depth [m].

    `factors` are those on Manning's n, by pool.
    """
    found = []
    sections = {name: _section(section) for name, section in canal.sections.items()}
    for p, pool in enumerate(canal.pools):
        for s, stretch in enumerate(pool.stretches):
            section, n = sections[stretch.section], factors[p] * canal.sections[stretch.section].roughness
            normal, flag = normal_depth(section, n, stretch.slope, discharge)
            critical, _ = critical_depth(section, discharge)
            if flag == status.OK and normal < critical:
                found.append((p, s, normal, critical))
    return found

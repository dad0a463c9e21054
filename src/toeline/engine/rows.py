"""Rows of output as the time loop fills them. Field names are the names of variables in results/variables."""

from typing import NamedTuple

import numpy as np

from toeline.network.tables import Network

FLAG = np.int8

# Aligned, because records of odd length cost a tenth of a day.
GATE_OUTPUT = np.dtype(
    [
        ("gate_opening", float),
        ("gate_discharge", float),
        ("gate_headwater_level", float),
        ("gate_tailwater_level", float),
        ("gate_modular_limit_level", float),
        ("jet_depth", float),
        ("jet_froude_number", float),
        ("sequent_depth", float),
        ("roller_depth", float),
        ("jump_toe_distance", float),
        ("jump_end_distance", float),
        ("tailwater_margin", float),
        ("protection_margin", float),
        ("jump_energy_loss", float),
        ("jump_power", float),
        ("surge_height_bound_upstream", float),
        ("surge_height_bound_downstream", float),
        ("gate_flow_state", FLAG),
        ("discharge_quality", FLAG),
        ("jump_state", FLAG),
        ("jump_kind", FLAG),
        ("jump_length_quality", FLAG),
    ],
    align=True,
)

POOL_OUTPUT = np.dtype(
    [
        ("pool_volume", float),
        ("pool_head_level", float),
        ("pool_tail_level", float),
        ("pool_inflow", float),
        ("pool_outflow", float),
        ("pool_inflow_volume", float),
        ("pool_outflow_volume", float),
        ("pool_losses", float),
        ("pool_loss_volume", float),
        ("pool_roughness_factor", float),
        ("pool_bank_margin", float),
        ("pool_lining_margin", float),
        ("settling", FLAG),
    ],
    align=True,
)

BAY_OUTPUT = np.dtype([("bay_opening", float), ("bay_discharge", float)])

OFFTAKE_OUTPUT = np.dtype(
    [("demand", float), ("delivery", float), ("delivery_volume", float), ("offtake_level", float)]
)

ESCAPE_OUTPUT = np.dtype([("escape_discharge", float), ("escape_volume", float)])

GAUGE_OUTPUT = np.dtype([("gauge_reading", float)])

CANAL_OUTPUT = np.dtype(
    [
        ("time", np.int64),  # ms from the start of the period
        ("canal_inflow", float),
        ("canal_outflow", float),
        ("canal_inflow_volume", float),
        ("canal_outflow_volume", float),
        ("canal_storage", float),
        ("balance_residual", float),
    ]
)

PROFILE_OUTPUT = np.dtype([("water_level", float), ("discharge", float), ("velocity", float)])


class Rows(NamedTuple):
    """A block of output that the compiled loop fills, and how far it is filled."""

    canal: np.recarray  # (rows) of CANAL_OUTPUT
    gates: np.recarray  # (rows, g) of GATE_OUTPUT
    bays: np.recarray  # (rows, bays that move apart) of BAY_OUTPUT
    pools: np.recarray  # (rows, p) of POOL_OUTPUT
    offtakes: np.recarray  # (rows, d) of OFFTAKE_OUTPUT
    escapes: np.recarray  # (rows, e) of ESCAPE_OUTPUT
    gauges: np.recarray  # (rows, u) of GAUGE_OUTPUT
    profile_time: np.ndarray  # (profile rows) int64 ms from the start of the period
    profiles: np.recarray  # (profile rows, n) of PROFILE_OUTPUT
    filled: np.ndarray  # (2) int64: rows, profile rows


def new_rows(rows: int, profile_rows: int, network: Network) -> Rows:
    """An empty block of the given capacity."""

    def block(kind: np.dtype, *shape: int) -> np.recarray:
        return np.zeros(shape, kind).view(np.recarray)

    return Rows(
        block(CANAL_OUTPUT, rows),
        block(GATE_OUTPUT, rows, network.gate_count),
        block(BAY_OUTPUT, rows, network.bay_count),
        block(POOL_OUTPUT, rows, network.pool_count),
        block(OFFTAKE_OUTPUT, rows, network.offtake_count),
        block(ESCAPE_OUTPUT, rows, network.escape_count),
        block(GAUGE_OUTPUT, rows, network.tables.gauges.size),
        np.zeros(profile_rows, np.int64),
        block(PROFILE_OUTPUT, profile_rows, network.canal_node_count),
        np.zeros(2, np.int64),
    )


def filled_block(rows: Rows) -> dict[str, np.ndarray]:
    """The filled part of a block as copies by variable name."""
    count, profile_count = rows.filled
    block = {"profile_time": rows.profile_time[:profile_count].copy()}
    by_row = (rows.canal, rows.gates, rows.bays, rows.pools, rows.offtakes, rows.escapes, rows.gauges)
    for table, size in (*((table, count) for table in by_row), (rows.profiles, profile_count)):
        filled = np.asarray(table[:size])  # plain: a record array looks up every name anew
        block |= {name: np.ascontiguousarray(filled[name]) for name in table.dtype.names or ()}
    return block

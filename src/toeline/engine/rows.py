"""Rows of output as the time loop fills them. Field names are the names of variables in results/variables."""

from typing import NamedTuple

import numpy as np

FLAG = np.int8

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
    ]
)

POOL_OUTPUT = np.dtype(
    [
        ("pool_volume", float),
        ("pool_head_level", float),
        ("pool_tail_level", float),
        ("pool_inflow", float),
        ("pool_outflow", float),
        ("pool_losses", float),
        ("pool_bank_margin", float),
        ("pool_lining_margin", float),
        ("settling", FLAG),
    ]
)

OFFTAKE_OUTPUT = np.dtype(
    [("demand", float), ("delivery", float), ("delivery_volume", float), ("offtake_level", float)]
)

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
    pools: np.recarray  # (rows, p) of POOL_OUTPUT
    offtakes: np.recarray  # (rows, d) of OFFTAKE_OUTPUT
    profile_time: np.ndarray  # (profile rows) int64 ms from the start of the period
    profiles: np.recarray  # (profile rows, n) of PROFILE_OUTPUT
    filled: np.ndarray  # (2) int64: rows, profile rows


def new_rows(rows: int, profile_rows: int, gates: int, pools: int, offtakes: int, nodes: int) -> Rows:
    """An empty block of the given capacity."""

    def block(kind: np.dtype, *shape: int) -> np.recarray:
        return np.zeros(shape, kind).view(np.recarray)

    return Rows(
        block(CANAL_OUTPUT, rows),
        block(GATE_OUTPUT, rows, gates),
        block(POOL_OUTPUT, rows, pools),
        block(OFFTAKE_OUTPUT, rows, offtakes),
        np.zeros(profile_rows, np.int64),
        block(PROFILE_OUTPUT, profile_rows, nodes),
        np.zeros(2, np.int64),
    )


def filled_block(rows: Rows) -> dict[str, np.ndarray]:
    """The filled part of a block as copies by variable name."""
    count, profile_count = rows.filled
    block = {"profile_time": rows.profile_time[:profile_count].copy()}
    for table, size in ((rows.canal, count), (rows.gates, count), (rows.pools, count), (rows.offtakes, count),
                        (rows.profiles, profile_count)):  # fmt: skip
        block |= {name: np.ascontiguousarray(table[:size][name]) for name in table.dtype.names or ()}
    return block

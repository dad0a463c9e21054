"""Rows of output as the time loop fills them. Field names are the names of variables in results/variables."""

from typing import NamedTuple

import numpy as np


class GateRows(NamedTuple):
    """(rows, gates)"""

    gate_opening: np.ndarray
    gate_discharge: np.ndarray
    gate_flow_state: np.ndarray
    discharge_quality: np.ndarray
    gate_headwater_level: np.ndarray
    gate_tailwater_level: np.ndarray
    jet_depth: np.ndarray
    jet_froude_number: np.ndarray
    sequent_depth: np.ndarray
    roller_depth: np.ndarray
    jump_state: np.ndarray
    jump_kind: np.ndarray
    jump_toe_distance: np.ndarray
    jump_end_distance: np.ndarray
    jump_length_quality: np.ndarray
    tailwater_margin: np.ndarray
    protection_margin: np.ndarray
    jump_energy_loss: np.ndarray
    jump_power: np.ndarray
    surge_height_bound_upstream: np.ndarray
    surge_height_bound_downstream: np.ndarray


class PoolRows(NamedTuple):
    """(rows, pools)"""

    settling: np.ndarray
    pool_volume: np.ndarray
    pool_head_level: np.ndarray
    pool_tail_level: np.ndarray
    pool_inflow: np.ndarray
    pool_outflow: np.ndarray
    pool_losses: np.ndarray
    pool_bank_margin: np.ndarray
    pool_lining_margin: np.ndarray


class OfftakeRows(NamedTuple):
    """(rows, offtakes)"""

    demand: np.ndarray
    delivery: np.ndarray
    delivery_volume: np.ndarray


class CanalRows(NamedTuple):
    """(rows)"""

    canal_inflow: np.ndarray
    canal_outflow: np.ndarray
    canal_inflow_volume: np.ndarray
    canal_outflow_volume: np.ndarray
    canal_storage: np.ndarray
    balance_residual: np.ndarray


class ProfileRows(NamedTuple):
    """(rows, nodes)"""

    water_level: np.ndarray
    discharge: np.ndarray
    velocity: np.ndarray


class Rows(NamedTuple):
    """A block of output that the compiled loop fills, and how far it is filled."""

    time: np.ndarray  # (rows) int64 ms from the start of the period
    profile_time: np.ndarray  # (profile rows) int64 ms
    gates: GateRows
    pools: PoolRows
    offtakes: OfftakeRows
    canal: CanalRows
    profiles: ProfileRows
    filled: np.ndarray  # (2) int64: rows, profile rows


FLAGS = {"gate_flow_state", "discharge_quality", "jump_state", "jump_kind", "jump_length_quality", "settling"}


def new_rows(rows: int, profile_rows: int, gates: int, pools: int, offtakes: int, nodes: int) -> Rows:
    """An empty block of the given capacity."""

    def block(kind, *shape: int):
        return kind(**{name: np.zeros(shape, np.int8 if name in FLAGS else np.float64) for name in kind._fields})

    return Rows(
        np.zeros(rows, np.int64),
        np.zeros(profile_rows, np.int64),
        block(GateRows, rows, gates),
        block(PoolRows, rows, pools),
        block(OfftakeRows, rows, offtakes),
        block(CanalRows, rows),
        block(ProfileRows, profile_rows, nodes),
        np.zeros(2, np.int64),
    )


def filled_block(rows: Rows) -> dict[str, np.ndarray]:
    """The filled part of a block as copies by variable name."""
    count, profile_count = rows.filled
    block = {"time": rows.time[:count].copy(), "profile_time": rows.profile_time[:profile_count].copy()}
    for part in (rows.gates, rows.pools, rows.offtakes, rows.canal):
        block |= {name: values[:count].copy() for name, values in part._asdict().items()}
    return block | {name: values[:profile_count].copy() for name, values in rows.profiles._asdict().items()}

"""What a step costs at least: one geometry pass over the nodes and one tridiagonal solve, and nothing else."""

import numpy as np
from numba import njit

from toeline.engine.stage import geometry_pass
from toeline.engine.state import new_state, new_work
from toeline.engine.tridiagonal import back_substitute

COMPILED = {"error_model": "numpy", "_nrt": False}


@njit(**COMPILED)
def solve_many(tables, nodes, work, solves):
    """Repeat the two so many times; the matrix is that of unit storage and links."""
    for _ in range(solves):
        geometry_pass(tables, nodes, work)
        upper = right = 0.0
        for k in range(work.rows.size):
            row = work.rows[k]
            row.pivot = 1.0 / (1.0 + 0.25 * upper)
            row.upper = upper = 0.25 * row.pivot
            row.x = right = (1.0 + 0.25 * right) * row.pivot
        back_substitute(work.rows)
    return work.rows[0].x


def prepared(network, level: np.ndarray):
    """Arguments of `solve_many` but for the count."""
    state, work = new_state(network), new_work(network.node_count)
    state.nodes["level"] = level
    return network.tables, state.nodes, work

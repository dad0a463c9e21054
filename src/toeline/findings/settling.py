"""When waves of a change still travelled, pool by pool and beside every gate."""

import numpy as np
import xarray as xr

from toeline.findings.series import is_any, names


def pools_settling(run: xr.Dataset) -> np.ndarray:
    """Whether each pool was settling, along time and pool."""
    return is_any(run["settling"], "settling")


def gates_settling(run: xr.Dataset) -> np.ndarray:
    """Whether a pool beside each gate was settling, along time and gate."""
    by_pool = dict(zip(names(run["pool"]), pools_settling(run).T, strict=True))
    quiet = np.zeros(run.sizes["time"], dtype=bool)
    beside = zip(names(run["gate_upstream_pool"]), names(run["gate_downstream_pool"]), strict=True)
    columns = [by_pool.get(above, quiet) | by_pool.get(below, quiet) for above, below in beside]
    return np.array(columns, dtype=bool).reshape(-1, quiet.size).T

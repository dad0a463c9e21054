"""Water above an edge of the canal, or faster than a surface bears."""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.incident import Incident, Settling
from toeline.findings.series import least, meanings, names
from toeline.findings.spells import spells
from toeline.results.dataset import in_parts, values_at_nodes


def water_above(edge: str, run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    """Water above the bank, or above the lining."""
    variable = f"pool_{edge}_margin"
    for part in in_parts(run, "pool", variable):
        for name, margins in zip(names(part["pool"]), part[variable].values.T, strict=True):
            yield from _above(edge, name, margins, part["time"].values, settling)


def _above(edge: str, pool: str, margins: np.ndarray, times: np.ndarray, settling: Settling) -> Iterator[Incident]:
    for spell in spells(margins < 0, times, margins):
        worst = least(margins[spell.rows], times[spell.rows])
        yield Incident(
            f"water above the {edge}",
            pool,
            spell.start,
            spell.end,
            worst.value,
            worst.time,
            limit=0.0,
            unit="m",
            source=f"{edge} over the water, by {edge}_height of the canal file",
            settling=settling.during(spell, pool),
            runs_to_end=spell.runs_to_end,
        )


def velocities_over_limit(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    """At the times of the profiles, pool by pool, by the node furthest over the limit of its surface."""
    times, limits = run["profile_time"].values, run["velocity_limit"].values
    if not np.isfinite(limits).any():
        return
    for pool, name in enumerate(names(run["pool"])):
        nodes = np.flatnonzero((run["node_pool"].values == pool) & np.isfinite(limits))
        velocities = values_at_nodes(run, "velocity", nodes)
        margins = np.nan_to_num(limits[nodes] - np.abs(velocities), nan=np.inf)
        in_pool = margins.min(axis=1, initial=np.inf)
        for spell in spells(in_pool < 0, times, in_pool):
            row = spell.first + int(np.argmin(in_pool[spell.rows]))
            fastest = int(np.argmin(margins[row]))
            node = int(nodes[fastest])
            surface = meanings(run["surface"])[int(run["surface"].values[node])]
            yield Incident(
                "velocity over the limit of the surface",
                name,
                spell.start,
                spell.end,
                abs(float(velocities[row, fastest])),
                times[row],
                limit=float(limits[node]),
                unit="m s-1",
                source=f"velocity_limit of surface {surface} in the canal file",
                settling=settling.during(spell, name),
                runs_to_end=spell.runs_to_end,
                chainage=float(run["chainage"].values[node]),
            )

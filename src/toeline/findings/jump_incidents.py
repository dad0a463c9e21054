"""Jumps that end where the floor does not bear them."""

from collections.abc import Iterator

import numpy as np
import xarray as xr

from toeline.findings.incident import Incident, Measure, Settling, pools_beside_gates
from toeline.findings.jumps import BEYOND_PROTECTION
from toeline.findings.series import greatest, is_any, least
from toeline.findings.spells import spells
from toeline.results.dataset import in_parts

JUMP_END = "end of the jump from the gate"
_NEEDED = ("jump_state", "protection_margin", "jump_end_distance")


def jumps_beyond_protection(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    for part in in_parts(run, "gate", *_NEEDED):
        is_beyond = is_any(part["jump_state"], *BEYOND_PROTECTION)
        yield from _jump_incidents(
            "jump beyond protection", is_beyond, part["protection_margin"].values, part, settling
        )


def jumps_swept_out(run: xr.Dataset, settling: Settling) -> Iterator[Incident]:
    for part in in_parts(run, "gate", *_NEEDED):
        is_swept_out = is_any(part["jump_state"], "swept_out_of_pool")
        no_margin = np.full(is_swept_out.shape, np.nan)
        yield from _jump_incidents("jump swept out of the pool", is_swept_out, no_margin, part, settling)


def _jump_incidents(
    what: str, holds: np.ndarray, crossing: np.ndarray, run: xr.Dataset, settling: Settling
) -> Iterator[Incident]:
    """`holds` and `crossing`, the margin that begins and ends it, are along time and gate."""
    times, margins, ends = (run[name].values for name in ("time", "protection_margin", "jump_end_distance"))
    for gate, (name, *neighbours) in enumerate(pools_beside_gates(run)):
        for spell in spells(holds[:, gate], times, crossing[:, gate]):
            worst = least(margins[spell.rows, gate], times[spell.rows])
            furthest = greatest(ends[spell.rows, gate], times[spell.rows])
            yield Incident(
                what,
                name,
                spell.start,
                spell.end,
                worst.value,
                worst.time,
                limit=0.0,
                unit="m",
                source="tailwater to spare before the jump ends beyond the protected surfaces of the canal file",
                settling=settling.during(spell, *neighbours),
                runs_to_end=spell.runs_to_end,
                also=(Measure(JUMP_END, furthest.value, "m", float(run["gate_protection_end"].values[gate])),),
            )

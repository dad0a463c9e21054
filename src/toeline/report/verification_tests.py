"""The mass test and the ramp test in words, each number beside its tolerance."""

from collections.abc import Iterator

import numpy as np

from toeline.findings.closure import LEDGER_TOLERANCE, POOL_TOLERANCE
from toeline.findings.ramp import (
    DRIFT_TOLERANCE,
    PASSED_TOLERANCE,
    RETURN_TOLERANCE,
    VOLUME_TOLERANCE,
    RampPassage,
)
from toeline.findings.verification import Verification
from toeline.report.clock import duration_text
from toeline.report.layout import paragraph, table
from toeline.units import Display


def mass_lines(found: Verification, width: int) -> Iterator[str]:
    """Whether water was lost, in every run."""
    yield paragraph(
        "Whether the computing loses or makes water, as a share of the water that passed or stood there. Canal: the "
        f"largest residual of the ledger at any time; tolerance {_percent(LEDGER_TOLERANCE)}. Worst pool: its volume "
        f"against its discharges, added up from time to time; tolerance {_percent(POOL_TOLERANCE)}. Both tolerances "
        "are choices of this program.",
        width,
    )
    rows = [
        (
            name,
            _percent(closure.canal.share),
            f"{_percent(closure.worst_pool.share)}, {closure.worst_pool.where}",
            _verdict(closure.is_closed),
        )
        for name, closure in found.closures.items()
    ]
    yield table(("", "canal", "worst pool", "tolerance"), rows, width)


def ramp_lines(found: Verification, display: Display, width: int) -> Iterator[str]:
    """Whether a ramp of inflow passed the canal, and how long it took."""
    ramp = found.ramp
    if ramp is None:
        yield paragraph(f"Not done: {found.ramp_reason}.", width)
        return
    yield paragraph(
        "Into steady flow more water comes within an hour (a reservoir, where there is one, is raised); no gate is "
        f"moved and nothing else changes. The inflow goes from {display.discharge(ramp.inflow[0])} to "
        f"{display.discharge(ramp.inflow[1])} in the end. All of that has to come out again, without swinging. The "
        "tolerances are choices of this program.",
        width,
    )
    yield table(("", "found", "allowed", "tolerance"), list(_ramp_rows(ramp)), width)
    yield paragraph(
        f"The pools take up {display.volume(ramp.stored)}, as much as the rise brings in "
        f"{duration_text(ramp.volume_lag)}. Half of the rise leaves the tail {_time(ramp.half_passed)} after half of "
        f"it came in. From head to tail a small fast wave needs {_time(ramp.fast_wave)}, a slow wave as on uniform "
        f"flow {_time(ramp.slow_wave)}. Pools between gates that are not moved fill like basins: there the volume that "
        "they take up sets the time.",
        width,
    )


def _ramp_rows(ramp: RampPassage) -> Iterator[tuple[str, ...]]:
    for name, share, tolerance in (
        ("outflow changes before the rise", ramp.drift_share, DRIFT_TOLERANCE),
        ("volume taken up, not explained", ramp.volume_gap_share, VOLUME_TOLERANCE),
        ("outflow falls back after it rose", ramp.fall_back_share, RETURN_TOLERANCE),
    ):
        yield (name, _percent(share), f"0 to {_percent(tolerance)}", _verdict(share <= tolerance))
    least, most = (_percent(1.0 + sign * PASSED_TOLERANCE) for sign in (-1, 1))
    share = ramp.passed_share
    name = "of the rise leaves in the end"
    yield (name, _percent(share), f"{least} to {most}", _verdict(abs(share - 1.0) <= PASSED_TOLERANCE))


def _verdict(is_within: bool) -> str:
    return "within" if is_within else "NOT within"


def _percent(share: float) -> str:
    percent = 100.0 * share
    if 0.0 < percent < 0.00005:
        return "<0.0001 %"
    return f"{percent:.2g} %" if percent < 10.0 else f"{percent:.4g} %"


def _time(seconds: float) -> str:
    return duration_text(seconds) if np.isfinite(seconds) else "no finite time"

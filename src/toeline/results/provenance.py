"""What a run file says about itself: title, inputs, settings, versions and the caution, as global attributes."""

import json
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime

from toeline.constants import CAUTION

CONVENTIONS = "CF-1.11"
SOURCE_PREFIX = "Toeline "
COMPLETE = "complete"
UNFINISHED = "unfinished: the run is still going on, or it was killed"
"""Outcome of a file whose writer has not closed it."""

ATTRIBUTES = {
    "title": "title of the day",
    "Conventions": "the metadata conventions followed",
    "history": "when the file was made, and by which version",
    "source": "the program and its version",
    "canal": "name of the canal",
    "plan": "name of the plan; empty where the day has none",
    "canal_file": "text of the canal file, unchanged",
    "day_file": "text of the day file, unchanged",
    "resolved_settings": "all settings of the run with defaults filled in, in SI units (JSON)",
    "input_hash": "digest of all inputs: equal digests, equal inputs",
    "surface_names": "names of the surfaces in the canal file, in the order of the values of `surface` (JSON)",
    "units_for_display": "units in which people are shown results; the file itself is in SI units",
    "zone": "name of the time zone for people; empty where the day gives none",
    "utc_offset": "offset from UTC at the start of the period",
    "call": "whom gatekeepers call, and how; empty where the canal file does not say",
    "outcome": f"`{COMPLETE}`, or when and why the run stopped",
    "comment": "the caution that goes with all results",
}
"""Every global attribute and its meaning."""


def run_attributes(
    *,
    title: str,
    canal: str,
    plan: str | None,
    canal_text: str,
    day_text: str,
    settings: Mapping[str, object],
    input_hash: str,
    surface_names: Sequence[str],
    units_for_display: str,
    zone: str | None,
    start: datetime,
    version: str,
    created: datetime,
    call: str | None = None,
) -> dict[str, str]:
    """Global attributes of a run, but for its outcome, which the sink writes.

    `settings` must be fit for JSON. `start` carries the offset of the day file. `created` is the one value taken from
    the clock: equal inputs give equal files but for `history`.
    """
    made = created.astimezone(UTC).isoformat(timespec="seconds").replace("+00:00", "Z")
    return {
        "title": title,
        "Conventions": CONVENTIONS,
        "history": f"{made} {SOURCE_PREFIX}{version}: run",
        "source": f"{SOURCE_PREFIX}{version}",
        "canal": canal,
        "plan": plan or "",
        "canal_file": canal_text,
        "day_file": day_text,
        "resolved_settings": json.dumps(settings, ensure_ascii=False, allow_nan=False, sort_keys=True),
        "input_hash": input_hash,
        "surface_names": json.dumps(list(surface_names), ensure_ascii=False),
        "units_for_display": units_for_display,
        "zone": zone or "",
        "utc_offset": _offset(start),
        "call": call or "",
        "comment": CAUTION,
    }


def _offset(instant: datetime) -> str:
    """Offset of an aware time as in ISO 8601, +02:00."""
    digits = instant.strftime("%z")
    return f"{digits[:3]}:{digits[3:5]}"

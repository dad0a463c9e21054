"""What a run file says about itself: title, inputs, settings, versions and the caution, as global attributes."""

import copy
import hashlib
import json
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime
from typing import Any

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
    "shared_input_hash": "digest of all that the numbers depend on but the plan: equal for all plans of one day",
    "surface_names": "names of the surfaces in the canal file, in the order of the values of `surface` (JSON)",
    "limits": "the owner's limits in the order of the canal file: kind, limit, unit, places, source and, by kind, "
    "window in s, measured_from, at, surfaces (JSON)",
    "avoided_openings": "bands of openings in m that are not to be held, by gate (JSON)",
    "units_for_display": "units in which people are shown results; the file itself is in SI units",
    "zone": "name of the time zone for people; empty where the day gives none",
    "utc_offset": "offset from UTC at the start of the period",
    "call": "whom gatekeepers call, and how; empty where the canal file does not say",
    "outcome": f"`{COMPLETE}`, or when and why the run stopped",
    "comment": "the caution that goes with all results",
}
"""Every global attribute and its meaning."""

DIMENSIONS = "dimensions"
"""Where the resolved settings say what each of them measures, by key path, * for any name."""

RULES, STUCK, RULE_DIMENSIONS = "rules", "stuck", "rule_dimensions"
"""Where the resolved settings carry those of the plan beside its orders: rules, leaves that are stuck, and what the
settings of each kind of rule measure, by key (durations in seconds)."""

START_DIGEST = "start_file_digest"
"""Where the resolved settings tell by a digest which run a run goes on from; null where it begins afresh."""

_SHARED = ("canal", "day", START_DIGEST)
"""Settings beside those of the plan."""

_NAMES_AND_DISPLAY = (
    ("canal", "units"),
    ("day", "canal"),
    ("day", "title"),
    ("day", "units"),
    ("day", "start", "file"),
)
"""Settings that no number of a run depends on: titles, where a file lies, units for people."""


def run_attributes(
    *,
    title: str,
    canal: str,
    plan: str | None,
    canal_text: str,
    day_text: str,
    settings: Mapping[str, Any],
    input_hash: str,
    surface_names: Sequence[str],
    limits: Sequence[Mapping[str, object]] = (),
    avoided_openings: Mapping[str, Sequence[tuple[float, float]]] | None = None,
    units_for_display: str,
    zone: str | None,
    start: datetime,
    version: str,
    created: datetime,
    call: str | None = None,
) -> dict[str, str]:
    """Global attributes of a run, but for its outcome, which the sink writes.

    `settings` and `limits` must be fit for JSON. `start` carries the offset of the day file. `created` is the one value
    taken from the clock: equal inputs give equal files but for `history`.
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
        "resolved_settings": _json(settings, sort_keys=True),
        "input_hash": input_hash,
        "shared_input_hash": shared_input_hash(settings),
        "surface_names": _json(list(surface_names)),
        "limits": _json(limits),
        "avoided_openings": _json(avoided_openings or {}),
        "units_for_display": units_for_display,
        "zone": zone or "",
        "utc_offset": _offset(start),
        "call": call or "",
        "comment": CAUTION,
    }


def shared_settings(settings: Mapping[str, Any]) -> dict[str, Any]:
    """The resolved settings that the numbers of a run depend on, beside its plan."""
    shared = {key: copy.deepcopy(settings[key]) for key in _SHARED if key in settings}
    for *tables, key in _NAMES_AND_DISPLAY:
        inner = shared
        for table in tables:
            inner = inner.get(table, {})
        inner.pop(key, None)
    return shared


def shared_input_hash(settings: Mapping[str, Any]) -> str:
    """Digest of the resolved settings that the numbers of a run depend on, beside its plan."""
    return hashlib.sha256(_json(shared_settings(settings), sort_keys=True).encode()).hexdigest()


def _json(value: object, *, sort_keys: bool = False) -> str:
    return json.dumps(value, ensure_ascii=False, allow_nan=False, sort_keys=sort_keys)


def _offset(instant: datetime) -> str:
    """Offset of an aware time as in ISO 8601, +02:00."""
    digits = instant.strftime("%z")
    return f"{digits[:3]}:{digits[3:5]}"

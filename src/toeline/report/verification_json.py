"""The numbers of `toeline verify` for other programs."""

import json
import math
from collections.abc import Sequence
from dataclasses import fields, is_dataclass
from typing import Any

import numpy as np

from toeline.findings.verification import Verification

_ABOUT = ("canal", "title", "plan", "source", "input_hash", "comment")


def verification_json(found: Sequence[Verification]) -> str:
    """A JSON list with one entry a plan: the fields of `Verification` in SI, times in UTC, null where there is none."""
    return json.dumps([_entry(verification) for verification in found], indent=1, ensure_ascii=False, allow_nan=False)


def _entry(found: Verification) -> dict[str, Any]:
    numbers = {field.name: getattr(found, field.name) for field in fields(found) if field.name != "run"}
    about = {key: found.run.attrs[key] for key in _ABOUT}
    return {key: _plain(value) for key, value in (about | {"passed": found.is_within_tolerance} | numbers).items()}


def _plain(value: Any) -> Any:
    """A value as JSON knows it."""
    if is_dataclass(value):
        return {field.name: _plain(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, (list, tuple)):
        return [_plain(item) for item in value]
    if isinstance(value, np.datetime64):
        return None if np.isnat(value) else f"{value.astype('datetime64[ms]')}Z"
    if isinstance(value, float) and not math.isfinite(value):
        return None
    return value

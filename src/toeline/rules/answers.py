"""What a rule of a user's own gives back, held against what it may: nobody has looked at it before it runs."""

import math
from collections.abc import Mapping
from numbers import Real
from typing import Any

import numpy as np

from toeline.rules.setting import EVERY_KEY, LEAST_EVERY, Setting

KIND = "kind"
"""Key of an entry in a day file by which the rule itself is chosen."""


def finite(value: Any) -> float | None:
    """A finite number as such; None for all else, truth values too."""
    number = real(value)
    return number if number is not None and math.isfinite(number) else None


def real(value: Any) -> float | None:
    """A number as such, be it infinite or none at all (NaN); None for what is no number or too large for one."""
    if isinstance(value, bool) or not isinstance(value, Real):
        return None
    try:
        return float(value)
    except OverflowError:
        return None


def whole_times(value: Any, length_ms: int) -> np.ndarray | None:
    """Decision times [ms] that rise, from the start to before the end; None for what is no row of finite numbers."""
    times = np.asarray(value)
    if times.ndim != 1 or times.dtype.kind not in "iuf" or not np.isfinite(times).all():
        return None
    inside: np.ndarray = np.unique(times[(times >= 0) & (times < length_ms)].astype(np.int64))
    return inside


def is_memory(value: Any) -> bool:
    """Whether it can be stored with the state at the end of a run: numbers by name."""
    return isinstance(value, dict) and all(
        isinstance(name, str) and name.isprintable() and real(number) is not None for name, number in value.items()
    )


def is_misfits(value: Any) -> bool:
    """Whether it is a list of keys, each with a sentence."""
    return all(
        isinstance(pair, tuple) and len(pair) == 2 and all(isinstance(text, str) for text in pair) for pair in value
    )


def are_settings(value: Any) -> bool:
    """Whether it declares settings, none of them under the key by which the rule is chosen."""
    return isinstance(value, Mapping) and all(
        isinstance(key, str) and key != KIND and isinstance(setting, Setting) for key, setting in value.items()
    )


def is_too_often(settings: Mapping[str, Setting]) -> bool:
    """Whether the time between decisions is shorter than allowed where nothing is given, or whatever is given."""
    every = settings.get(EVERY_KEY)
    if every is None or every.takes not in ("number", "duration"):
        return False
    default = finite(every.default)
    return every.most < LEAST_EVERY or (default is not None and default < LEAST_EVERY)

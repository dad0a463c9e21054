"""Indicators of the canal-control test cases: Clemmens, Kacerek, Grawitz & Schuurmans 1998.

J. Irrig. Drain. Eng. 124(1). Formulas from memory, the window of the steady-state error less surely. The worked values
are derived.
"""

import numpy as np
import pytest

from toeline.findings.gate_use import integrated_change
from toeline.findings.level_errors import greatest_error, integrated_error, steady_state_error

SECONDS = np.arange(0.0, 43_201.0, 300.0)
DEPTHS = 2.01 + 0.1 * np.exp(-SECONDS / 7200.0) * np.cos(SECONDS / 1800.0)
TARGET = 2.0
"""Twelve hours at 300 s, both ends included."""


def test_maximum_absolute_error():
    assert greatest_error(DEPTHS, TARGET) == pytest.approx(0.055000, abs=5e-7)


def test_integrated_absolute_error():
    assert integrated_error(DEPTHS, TARGET) == pytest.approx(0.008342, abs=5e-7)


def test_steady_state_error_of_the_last_two_hours():
    assert steady_state_error(DEPTHS[SECONDS >= 36_000.0], TARGET) == pytest.approx(0.004914, abs=5e-7)


def test_integrated_change_of_discharge():
    assert integrated_change(np.array([1.0, 1.2, 1.1, 1.3, 1.3])) == pytest.approx(0.2)


def test_integrated_change_of_what_only_grows_is_nothing():
    assert integrated_change(np.array([0.1, 0.4, 0.4, 0.9])) == pytest.approx(0.0)

"""Adequacy, efficiency, equity and dependability of Molden & Gates, J. Irrig. Drain. Eng. 116(6), 1990.

Formulas from memory; equity quoted second-hand. The worked case and its values are derived: recomputed by hand twice.
"""

import numpy as np
import pytest

from toeline.findings.deliveries import adequacy, dependability, efficiency, equity, variation

DELIVERED = np.array([[8.0, 9.0, 10.0, 6.0], [10.0, 10.0, 12.0, 8.0], [5.0, 6.0, 6.0, 6.0]]).T
REQUIRED = np.array([[10.0] * 4, [10.0] * 4, [6.0] * 4]).T
"""Four times along three places."""


@pytest.mark.parametrize(
    ("measure", "value"),
    [(adequacy, 0.91111), (efficiency, 0.98611), (equity, 0.11024), (dependability, 0.13200)],
)
def test_the_worked_case_with_the_deviation_of_the_population(measure, value):
    assert measure(DELIVERED, REQUIRED) == pytest.approx(value, abs=5e-6)


@pytest.mark.parametrize(("along", "count", "value"), [(1, 3, 0.13501), (0, 4, 0.15242)])
def test_the_deviation_of_a_sample_would_give_more(along, count, value):
    """The values of the source's case with n − 1, derived: which deviation is meant must be said."""
    of_population = variation(DELIVERED / REQUIRED, along=along).mean()
    assert of_population * np.sqrt(count / (count - 1)) == pytest.approx(value, abs=5e-6)

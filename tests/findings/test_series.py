"""Hours and extremes of single series."""

import numpy as np
import pytest

from toeline.findings.series import greatest, hours_of_rows, least

TIMES = np.datetime64("2031-05-04T00:00", "ns") + np.array([0, 60, 90, 210]) * np.timedelta64(1, "m")


def test_each_row_stands_for_half_of_the_steps_beside_it():
    np.testing.assert_array_equal(hours_of_rows(TIMES), [0.5, 0.75, 1.25, 1.0])


@pytest.mark.parametrize("rows", [0, 1])
def test_without_a_step_there_are_no_hours(rows):
    np.testing.assert_array_equal(hours_of_rows(TIMES[:rows]), np.zeros(rows))


def test_extremes_come_with_their_first_time_and_leave_out_what_is_missing():
    values = np.array([np.nan, 2.0, -1.0, 2.0])
    assert (least(values, TIMES).value, least(values, TIMES).time) == (-1.0, TIMES[2])
    assert (greatest(values, TIMES).value, greatest(values, TIMES).time) == (2.0, TIMES[1])


def test_a_series_without_values_has_no_extreme():
    extreme = greatest(np.full(4, np.nan), TIMES)
    assert np.isnan(extreme.value)
    assert np.isnat(extreme.time)

"""What was to be read on the staff gauges of a run."""

import numpy as np

from toeline.findings.gauges import gauge_readings


def test_extremes_leave_out_the_times_when_the_staff_stood_dry(run_by_hand, at):
    readings = np.array([[1.2, -0.1, np.nan, 1.4]]).T
    gauge = gauge_readings(run_by_hand([0, 10, 20, 30], values={"gauge_reading": readings, "gauge_side": 2}))[0]
    assert (gauge.gauge, gauge.place, gauge.first) == ("Mill gauge", "downstream of Mill check", 1.2)
    assert (gauge.least.value, gauge.least.time) == (-0.1, at(10))
    assert (gauge.greatest.value, gauge.greatest.time) == (1.4, at(30))


def test_gauge_along_a_pool_stands_there(run_by_hand):
    run = run_by_hand([0], values={"gauge_gate": np.array([""], object)})
    assert gauge_readings(run)[0].place == "Mill pool"


def test_run_without_a_step_has_no_reading(run_by_hand):
    assert np.isnan(gauge_readings(run_by_hand([], values={}))[0].first)

"""A step in an offtake under hold upstream level on the two published test canals, from a steady start at low flow.

The geometry is published (see tests/published/asce_canals.py); the step is this test's own, as are the dead band and
the intervals. All gains are those that the rules find for themselves.
"""

import numpy as np
import pytest
from tests.canals import day, scenario_of
from tests.published.asce_canals import CANAL_1, CANAL_2, canal_file, deliveries_at_low_flow
from tests.recorded_run import RecordedRun

from toeline.simulate import cautions

BAND = 0.01
HOUR_MS = 3_600_000
STEPPED = 3
"""Number of the offtake."""


@pytest.fixture(
    scope="module",
    params=[(CANAL_1, 0.05, "1 min"), (CANAL_1, -0.05, "1 min"), (CANAL_2, 0.15, "5 min"), (CANAL_2, -0.15, "5 min")],
    ids=["canal 1, more", "canal 1, less", "canal 2, more", "canal 2, less"],
)
def stepped(request, tmp_path_factory):
    """The run, and the change of the delivery at two o'clock."""
    canal, change, every = request.param
    taken = deliveries_at_low_flow(canal)
    deliveries = {f"Offtake {k + 1}": [["00:00", taking]] for k, taking in enumerate(taken)}
    deliveries[f"Offtake {STEPPED}"].append(["02:00", taken[STEPPED - 1] + change])
    rules = [
        {"kind": "hold upstream level", "gate": f"Check {k + 1}", "every": every, "band": BAND}
        for k in range(len(canal.gate_widths))
    ]
    tables = {"deliveries": deliveries, "plans": {"held": {"rules": rules}}}
    scenario = scenario_of(tmp_path_factory.mktemp("canal"), canal_file(canal), day(canal.low[0][0], **tables))
    return RecordedRun(scenario), change


def test_mass_closes(stepped):
    run, _ = stepped
    assert np.abs(run["balance_residual"]).max() <= 1e-9 * run["canal_inflow_volume"][-1]


def test_levels_leave_the_band_and_return_to_it(stepped):
    run, _ = stepped
    error = np.abs(run["pool_tail_level"] - run.network.names.target_level)
    assert error[:, STEPPED - 1].max() > BAND
    assert error.max() < 0.04
    assert error[run["time"] >= 18 * HOUR_MS].max() < 1.5 * BAND


def test_what_is_not_taken_passes_on_to_the_tail(stepped):
    run, change = stepped
    before = run["canal_outflow"][run["time"] < 2 * HOUR_MS][-1]
    assert run["canal_outflow"][-1] - before == pytest.approx(-change, rel=0.10)


def test_gates_above_the_step_stay_and_those_below_come_to_rest(stepped):
    run, _ = stepped
    numbers = np.array([int(gate.removeprefix("Check ")) for gate in run["order_gate"]])
    assert numbers.min() == STEPPED
    assert np.count_nonzero(run["order_time"] > 20 * 3600.0) <= 2


FOURTH, MORE, MINUTES_AT = 4, 0.3, 6 * 60


def fed_forward(folder, **keys):
    """Canal 2 under hold downstream level, whose fourth offtake takes more from six o'clock on."""
    taken = deliveries_at_low_flow(CANAL_2)
    deliveries = {f"Offtake {k + 1}": [["00:00", taking]] for k, taking in enumerate(taken)}
    deliveries[f"Offtake {FOURTH}"].append(["06:00", taken[FOURTH - 1] + MORE])
    rules = [
        {"kind": "hold downstream level", "gate": f"Check {k + 1}", "every": "1 min", **keys}
        for k in range(len(CANAL_2.gate_widths))
    ]
    tables = {"length": "12 h", "deliveries": deliveries, "plans": {"held": {"rules": rules}}}
    return RecordedRun(scenario_of(folder, canal_file(CANAL_2), day(CANAL_2.low[0][0], **tables)))


def test_feedforward_comes_the_published_delays_ahead(tmp_path):
    run = fed_forward(tmp_path, feedforward="wave")
    for check in range(1, FOURTH):
        ahead = sum(delay for _, delay, _ in CANAL_2.low[check:FOURTH]) / 60.0
        first = run["order_time"][run["order_gate"] == f"Check {check}"][0] / 60.0
        assert MINUTES_AT - first == pytest.approx(ahead, rel=0.10)


def test_feedforward_spares_the_pools_most_of_the_disturbance(tmp_path):
    plain, ahead = fed_forward(tmp_path), fed_forward(tmp_path, feedforward="wave")
    pools = slice(1, FOURTH)  # the first is fed by the inflow, which no gate changes
    errors = [np.abs(run["pool_tail_level"] - run.network.names.target_level)[:, pools].max() for run in (plain, ahead)]
    assert errors[1] < 0.8 * errors[0]
    assert ahead["order_time"].size < 0.5 * plain["order_time"].size


def coarse(folder, smallest_move):
    """Two days of canal 1 with a step of the third offtake, its gates making no smaller moves than this [m]."""
    taken = deliveries_at_low_flow(CANAL_1)
    deliveries = {f"Offtake {k + 1}": [["00:00", taking]] for k, taking in enumerate(taken)}
    deliveries[f"Offtake {STEPPED}"].append(["02:00", taken[STEPPED - 1] + 0.05])
    rules = [{"kind": "hold upstream level", "gate": f"Check {k + 1}"} for k in range(len(CANAL_1.gate_widths))]
    canal = canal_file(CANAL_1)
    canal["gates"] = [gate | {"smallest_move": smallest_move} for gate in canal["gates"]]
    tables = {"length": "48 h", "deliveries": deliveries, "plans": {"held": {"rules": rules}}}
    return scenario_of(folder, canal, day(CANAL_1.low[0][0], **tables))


def swing(folder, smallest_move):
    """By how much levels of canal 1 swing in the last 12 of 48 h [m]."""
    run = RecordedRun(coarse(folder, smallest_move))
    return np.ptp(run["pool_tail_level"][run["time"] >= 36 * HOUR_MS], axis=0)


def test_gates_that_make_no_small_moves_swing_for_ever_and_the_same_rules_rest_where_they_do(tmp_path):
    """As (E46) has it: bands of 2 cm, and 4 to 18 cm would do. Every gate is told in a caution."""
    lower = slice(STEPPED - 1, len(CANAL_1.gate_widths))
    assert 0.08 < swing(tmp_path, 0.01)[lower].min() < swing(tmp_path, 0.01)[lower].max() < 0.25
    assert swing(tmp_path, 0.0).max() < 0.002
    told = [caution.message.split("; ")[-1] for caution in cautions(coarse(tmp_path, 0.01))]
    bands = [float(words.split()[0]) for words in told]
    assert bands == pytest.approx([0.039, 0.047, 0.047, 0.058, 0.081, 0.105, 0.182], abs=0.001)
    assert cautions(coarse(tmp_path, 0.0)) == []

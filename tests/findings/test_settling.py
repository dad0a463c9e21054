"""When pools and gates settle."""

import numpy as np

from toeline.findings.settling import gates_settling, pools_settling


def test_a_gate_settles_while_a_pool_beside_it_does(run_by_hand):
    settling = np.array([[0, 0], [1, 0], [0, 1]])
    run = run_by_hand([0, 1, 2], values={"settling": settling})
    assert pools_settling(run).tolist() == [[False, False], [True, False], [False, True]]
    # the Orchard check stands between both pools, the Mill check between the Mill pool and the tail
    assert gates_settling(run).tolist() == [[False, False], [True, False], [True, True]]

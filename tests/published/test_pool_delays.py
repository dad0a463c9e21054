"""Delays and areas of the pools of the two ASCE test canals, as Litrico & Fromion 2004 print them (second-hand)."""

import numpy as np
import pytest
from tests.published.asce_canals import CANALS, SIDE_SLOPE, canal_file, deliveries_at_low_flow

from toeline.hydraulics.cross_section import trapezoid
from toeline.network.build import network_of
from toeline.network.initial_state import Demands, steady_at_targets
from toeline.network.lead_times import pool_times, response
from toeline.scenario.schema.canal import Canal

PRINTED = 0.002
"""Relative rounding of the shortest delay printed, 29.6 s."""


@pytest.mark.parametrize("canal", CANALS.values(), ids=CANALS)
@pytest.mark.parametrize("flow", ["low", "high"])
def test_delays_and_areas_of_the_test_canals(canal, flow):
    for k, (discharge, delay, area) in enumerate(getattr(canal, flow)):
        section = trapezoid(canal.bottom_widths[k], SIDE_SLOPE)
        found = response(section, canal.roughness, canal.slope, canal.lengths[k], canal.targets[k], discharge)
        assert found.delay == pytest.approx(delay, rel=PRINTED)
        assert found.area == pytest.approx(area, rel=PRINTED)


@pytest.mark.parametrize("canal", CANALS.values(), ids=CANALS)
def test_lead_times_by_wave_of_a_canal_file_are_the_published_delays(canal):
    file = canal_file(canal)
    network = network_of(Canal.model_validate(file), 100.0)
    taken = deliveries_at_low_flow(canal)
    start = steady_at_targets(
        network, canal.low[0][0], file["tail"]["level"], 0.0, Demands(np.array(taken), np.zeros(len(taken)), 0.0),
        [gate["max_opening"] for gate in file["gates"]],
    )  # fmt: skip
    times = pool_times(network, start.level, start.discharge)
    assert times.wave == pytest.approx([delay for _, delay, _ in canal.low], rel=0.01)
    assert (times.volume > 0.0).all()

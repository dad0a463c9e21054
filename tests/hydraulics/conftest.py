"""Property tests draw the same examples every time, fewer where nothing is compiled."""

import numba
import numpy as np
import pytest
from hypothesis import HealthCheck, settings

from toeline.hydraulics.gradually_varied_flow import channel

settings.register_profile(
    "repeatable",
    deadline=None,
    derandomize=True,
    database=None,
    max_examples=15 if numba.config.DISABLE_JIT else 150,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
)
settings.load_profile("repeatable")


@pytest.fixture
def prismatic():
    """Makes a channel of one section: prismatic(section, length, slope, roughness, nodes)."""

    def make(section, length, slope, roughness, nodes=2):
        chainage = np.linspace(0.0, length, nodes)
        made = channel(chainage, slope * (length - chainage), [section] * nodes, roughness)
        made.nodes.section[:] = 0
        return made

    return make

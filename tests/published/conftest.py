"""Checks against values from outside the project. Beside every value stands where it comes from:

published       printed in the named source
from memory     stated by the named source as far as remembered; the source was not read again
derived         follows from the equations by another route, confirmed twice
recomputed      an independent evaluation with scipy of the case the source describes
"""

import math

import numpy as np
import pytest

from toeline.constants import GRAVITY
from toeline.hydraulics.critical_flow import specific_force
from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import channel, subcritical_profile, supercritical_profile
from toeline.hydraulics.jump_location import Jet, free_jump


class Units:
    """A source's system of units: its gravity, and the k of its Manning formula V = (k/n)·R^(2/3)·√S.

    The equations know a discharge through Q²/g and n²Q² alone. With `discharge` and `roughness` they therefore give
    the lengths of the source, in its own unit, although they work with standard gravity.
    """

    def __init__(self, gravity: float, manning: float = 1.0):
        self._ratio, self._manning = math.sqrt(GRAVITY / gravity), manning

    def discharge(self, value: float) -> float:
        return value * self._ratio

    def roughness(self, value: float) -> float:
        return value / (self._manning * self._ratio)

    def discharge_of_source(self, value: float) -> float:
        return value / self._ratio


@pytest.fixture
def units():
    return Units


@pytest.fixture
def prismatic():
    """Makes a channel of one section: prismatic(section, length, slope, roughness, nodes)."""

    def make(section, length, slope, roughness, nodes=2):
        chainage = np.linspace(0.0, length, nodes)
        made = channel(chainage, slope * (length - chainage), [section] * nodes, roughness)
        made.nodes.section[:] = 0
        return made

    return make


class Profiles:
    """Profiles and the jump between them, over the whole length of a channel."""

    def jet_profile(self, channel, depth, discharge, start=0.0, points=4000):
        """Chainages and depths of the supercritical profile, and how it ended."""
        x, y = np.empty(points), np.empty(points)
        count, end = supercritical_profile(channel, 0, channel.nodes.size - 1, start, depth, discharge, x, y)
        return x[:count], y[:count], end

    def backwater(self, channel, depth, discharge):
        """Depths of the subcritical profile above a depth at the lower end; NaN above the place where it turns
        critical.
        """
        levels, no_loss = np.full(channel.nodes.size, np.nan), np.zeros(channel.nodes.size)
        level = channel.nodes.bed_level[-1] + depth
        subcritical_profile(channel, 0, channel.nodes.size - 1, level, discharge, no_loss, levels)
        return levels - channel.nodes.bed_level

    def jump(self, channel, tail_depths, depth, discharge, start=0.0):
        """The free jump of a jet that fills the section from its start, under tail depths by node (or one for
        all).
        """
        section = channel.shapes[channel.nodes.section[0]]
        area, width = geometry(section, depth)[:2]
        froude = discharge / area * math.sqrt(width / (GRAVITY * area))
        jet = Jet(discharge, width, depth, depth, froude, specific_force(section, discharge, depth))
        x, y, _ = self.jet_profile(channel, depth, discharge, start)
        return free_jump(channel, 0, channel.nodes.size - 1, channel.nodes.bed_level + tail_depths, jet, x, y, x.size)


@pytest.fixture
def profiles():
    return Profiles()

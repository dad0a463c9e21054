"""Operating rules: plain Python that decides, at its decision times, which opening a gate should have."""

from toeline.rules.base import Answer, CanalFacts, Present, Rule
from toeline.rules.setting import Setting, duration, number, place, series, word

__all__ = ["Answer", "CanalFacts", "Present", "Rule", "Setting", "duration", "number", "place", "series", "word"]

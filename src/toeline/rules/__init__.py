"""Operating rules: plain Python that decides, at its decision times, which opening a gate should have."""

from toeline.rules.base import Answer, CanalFacts, Present, Rule
from toeline.rules.setting import EVERY, GATE, HOURS, VISITS, Setting, duration, number, place, series, word

__all__ = [
    "EVERY",
    "GATE",
    "HOURS",
    "VISITS",
    "Answer",
    "CanalFacts",
    "Present",
    "Rule",
    "Setting",
    "duration",
    "number",
    "place",
    "series",
    "word",
]

"""The input files: a canal, written once, and a day on it."""

from toeline.scenario.load import CanalFile, Scenario, load_canal, load_scenario, plan_names
from toeline.scenario.orders import Order
from toeline.scenario.rules import RuleChoice, Stuck
from toeline.scenario.series import Series
from toeline.scenario.starter import write_starter

__all__ = [
    "CanalFile",
    "Order",
    "RuleChoice",
    "Scenario",
    "Series",
    "Stuck",
    "load_canal",
    "load_scenario",
    "plan_names",
    "write_starter",
]

"""Toeline steps the pools and check gates of an irrigation canal through a day's schedule.

The public names load at first use, so that `import toeline` and `toeline --help` open at once.
"""

import sys
from importlib import import_module
from types import ModuleType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from toeline import hydraulics
    from toeline.results.dataset import open_run
    from toeline.scenario import load_canal, load_scenario
    from toeline.simulate import simulate

__version__ = "0.1.0"
__all__ = ["__version__", "hydraulics", "load_canal", "load_scenario", "open_run", "simulate"]

_HOMES = {
    "load_canal": "toeline.scenario",
    "load_scenario": "toeline.scenario",
    "open_run": "toeline.results.dataset",
    "simulate": "toeline.simulate",
}


def __getattr__(name: str) -> object:
    if name == "hydraulics":
        return import_module("toeline.hydraulics")
    if name not in _HOMES:
        raise AttributeError(f"module 'toeline' has no attribute {name!r}")
    value = getattr(import_module(_HOMES[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})


class _Package(ModuleType):
    """Keeps `toeline.simulate` the function: importing the module of that name would bind the module over it."""

    def __setattr__(self, name: str, value: object) -> None:
        if isinstance(value, ModuleType) and name in _HOMES:
            value = getattr(value, name)
        super().__setattr__(name, value)


sys.modules[__name__].__class__ = _Package

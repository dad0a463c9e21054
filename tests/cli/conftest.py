"""A small invented canal with one day, on disk, and the command to call on it."""

from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from toeline.cli.main import main

CANAL = """\
name = "Alder branch"
units = "metric"

[sections.basin]
shape = "rectangle"
bottom_width = 4.0
roughness = 0.014

[sections.earth]
shape = "trapezoid"
bottom_width = 4.0
side_slope = 1.5
roughness = 0.020
bank_height = 2.4

[surfaces]
apron = { protected = true, apron = true }
bed = { protected = false }

[[pools]]
name = "Upper pool"
bed_level = 50.00
target_level = 51.40
stretches = [
  { length = 800.0, section = "earth", surface = "bed", slope = 0.0002 },
]

[[pools]]
name = "Lower pool"
bed_level = 49.20
target_level = 50.60
stretches = [
  { length = 15.0, section = "basin", surface = "apron" },
  { length = 20.0, section = "earth", surface = "bed", transition = true },
  { length = 600.0, section = "earth", surface = "bed", slope = 0.0002 },
]

[[gates]]
name = "Middle check"
upstream = "Upper pool"
downstream = "Lower pool"
kind = "vertical"
bay_width = 3.0
sill_level = 49.84
max_opening = 1.2

[[gates]]
name = "Last check"
upstream = "Lower pool"
downstream = "tail"
kind = "vertical"
bay_width = 3.0
sill_level = 49.10
max_opening = 1.2

[[offtakes]]
name = "East lateral"
pool = "Lower pool"
chainage = 500.0
kind = "demand"

[head]
kind = "inflow"

[tail]
kind = "level"
level = 49.9
"""

DAY = """\
canal = "canal.toml"
title = "A short morning"

[period]
start = 2031-05-04T06:00:00+02:00
length = "1 h"
spacing = 200.0

[inflow]
values = [["06:00", 3.0]]

[deliveries]
"East lateral" = [["06:00", 0.2]]

[start]
state = "steady"

[plans.hold]
orders = []

[plans.raise]
orders = [{ at = "06:20", gate = "Middle check", by = 0.05 }]
"""


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The working directory, with canal.toml and day.toml."""
    (tmp_path / "canal.toml").write_text(CANAL, encoding="utf-8")
    (tmp_path / "day.toml").write_text(DAY, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def call():
    """Call `toeline` with these arguments."""

    def call_toeline(*arguments: str) -> Result:
        return CliRunner().invoke(main, list(arguments))

    return call_toeline

"""An invented run, complete in every variable, to write, kill and read back."""

from collections.abc import Iterator
from dataclasses import dataclass, field
from datetime import datetime, timedelta, timezone

import numpy as np
import pytest

from toeline.results.provenance import run_attributes
from toeline.results.variables import VARIABLES, growing

START = datetime(2031, 5, 4, tzinfo=timezone(timedelta(hours=2)))
MINUTE = 60_000
OTHER_STATE = 9
"""Length of the dimensions of the end state that no other variable has."""


def attributes() -> dict[str, str]:
    return run_attributes(
        title="Morning increase, evening cut",
        canal="Quillmere main canal",
        plan="proposed",
        canal_text='name = "Quillmere main canal"\r\n# Überfall\n',
        day_text='canal = "canal.toml"\n',
        settings={"level_tolerance": 0.003, "spacing": 100.0, "plan": None},
        input_hash="0" * 64,
        surface_names=["apron", "rip rap", "lining"],
        units_for_display="metric",
        zone=None,
        start=START,
        version="0.1.0",
        created=datetime(2031, 5, 3, 12, 0, 0, tzinfo=timezone(timedelta(hours=2))),
    )


@dataclass
class InventedRun:
    """Values from a seeded generator, of the right shapes; `blocks` cuts them as asked."""

    gates: int = 3
    pools: int = 3
    offtakes: int = 2
    nodes: int = 12
    steps: int = 100
    profiles: int = 11
    orders: int = 4
    seed: int = 7
    start: datetime = START
    attributes: dict[str, str] = field(default_factory=attributes)

    def sizes(self) -> dict[str, int]:
        return {
            "gate": self.gates,
            "pool": self.pools,
            "offtake": self.offtakes,
            "node": self.nodes,
            "time": self.steps,
            "profile_time": self.profiles,
            "order": self.orders,
            "state_gate": self.gates,
        }

    def values(self, name: str) -> np.ndarray:
        variable = VARIABLES[name]
        shape = tuple(self.sizes().get(dimension, OTHER_STATE) for dimension in variable.dimensions)
        generator = np.random.default_rng([self.seed, *name.encode()])
        if name == "time":
            return np.arange(self.steps, dtype=np.int64) * MINUTE
        if name == "profile_time":
            return np.arange(self.profiles, dtype=np.int64) * 10 * MINUTE
        if name in ("node", "chainage"):
            return np.arange(self.nodes) * (1 if name == "node" else 100.0)
        if variable.dtype == "text":
            return np.array([f"{name} {i + 1} Ä" for i in range(shape[0])], dtype=object)
        if variable.dtype in ("i1", "i4"):
            return generator.integers(0, len(variable.flags) or 3, shape)
        values = generator.normal(100.0, 3.0, shape)
        is_sometimes_missing = variable.dtype == "f4" or name == "order_completed"
        return np.where(generator.random(shape) < 0.1, np.nan, values) if is_sometimes_missing else values

    def static(self) -> dict[str, np.ndarray]:
        return {n: self.values(n) for n, v in VARIABLES.items() if not v.grows and not v.is_state}

    def end_state(self) -> dict[str, np.ndarray]:
        seconds = (self.steps - 1) * MINUTE / 1000.0
        return {n: self.values(n) for n, v in VARIABLES.items() if v.is_state} | {"end_time": np.array(seconds)}

    def blocks(self, rows: int) -> Iterator[dict[str, np.ndarray]]:
        """The run in blocks of so many time steps; profiles and orders spread over them."""
        count = -(-self.steps // rows)
        cuts = {d: np.linspace(0, self.sizes()[d], count + 1).astype(int) for d in ("profile_time", "order")}
        cuts["time"] = np.minimum(np.arange(count + 1) * rows, self.steps)
        columns = {v.name: self.values(v.name) for d in cuts for v in growing(d)}
        for k in range(count):
            yield {v.name: columns[v.name][cuts[d][k] : cuts[d][k + 1]] for d in cuts for v in growing(d)}

    def write_to(self, sink, *, rows: int = 37, outcome: str = "complete"):
        """Send all blocks to the sink and close it."""
        for block in self.blocks(rows):
            sink.write(block)
        sink.close(outcome, self.end_state())
        return sink


@pytest.fixture
def invented_run():
    """The maker of invented runs: InventedRun(gates=..., steps=...)."""
    return InventedRun

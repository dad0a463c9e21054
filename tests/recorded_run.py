"""A run at full precision: what the time loop hands on, before a dataset stores most of it in single precision."""

import numpy as np

from toeline.engine.run import Run
from toeline.network.build import network_of
from toeline.network.initial_state import Start
from toeline.network.start import starting_state
from toeline.network.timetable import timetable_of
from toeline.scenario import Scenario


class BlockList:
    """Keeps the blocks of a run."""

    def __init__(self):
        self.blocks: list[dict[str, np.ndarray]] = []

    def write(self, block: dict[str, np.ndarray]) -> None:
        self.blocks.append(block)

    def joined(self) -> dict[str, np.ndarray]:
        return {name: np.concatenate([block[name] for block in self.blocks]) for name in self.blocks[0]}


class RecordedRun:
    """A finished run: `values` by variable name (times in ms from the start), its end state and counts of steps."""

    def __init__(self, scenario: Scenario, start: Start | dict[str, np.ndarray] | None = None):
        """Run a scenario from its own steady or dry start, or from the given one, such as another run's end state."""
        self.network = network_of(scenario.canal, scenario.day.period.spacing)
        timetable = timetable_of(scenario, self.network)
        self.start = starting_state(scenario, self.network, timetable) if start is None else start
        blocks = BlockList()
        run = Run(self.network, timetable, blocks, self.start)
        run.go()
        self.values = blocks.joined()
        self.end_state = run.end_state()
        self.steps, self.rejected, self.solves = (int(run.pace[name][0]) for name in ("steps", "rejected", "solves"))

    def __getitem__(self, name: str) -> np.ndarray:
        return self.values[name]

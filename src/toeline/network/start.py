"""The state that a scenario's day starts from."""

import numpy as np

from toeline.errors import ScenarioError, UsageError
from toeline.network.build import steep_stretches
from toeline.network.initial_state import (
    Demands,
    Start,
    dry_state,
    steady_at_openings,
    steady_at_targets,
    steady_under_reservoir,
)
from toeline.network.tables import (
    FORCING_EVAPORATION,
    FORCING_GATES,
    FORCING_HEAD,
    FORCING_RAIN,
    FORCING_TAIL,
    Network,
)
from toeline.network.timetable import Timetable
from toeline.scenario import Scenario
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.day import OpeningOfGate


def starting_state(scenario: Scenario, network: Network, timetable: Timetable) -> Start:
    """Steady or dry, as the day file says; an end state is read elsewhere.

    Raises ScenarioError, on the line of `[start]`, where there is no such steady state, and on the lines of stretches
    that are steep for the largest discharge of the day.
    """
    start, canal = scenario.day.start, scenario.canal
    forcing = timetable.values_at(0)
    first, count = FORCING_GATES + network.leaf_count, network.offtake_count
    demands = Demands(
        np.nan_to_num(forcing[first : first + count]),
        forcing[first + count :],
        forcing[FORCING_EVAPORATION] - forcing[FORCING_RAIN],
    )
    network.set_roughness(timetable.roughness[0].factors)
    inflow, tail_level, head_level = start.inflow or 0.0, forcing[FORCING_TAIL], forcing[FORCING_HEAD]
    if canal.head.kind == "inflow":
        inflow = head_level
    try:
        if not isinstance(start.openings, dict):
            largest = [gate.max_opening for gate in canal.gates]
            return steady_at_targets(network, inflow, tail_level, head_level, demands, largest)
        openings = leaf_openings(start.openings, canal)
        if start.state == "dry":
            return dry_state(network, openings)
        if canal.head.kind == "inflow":
            return steady_at_openings(network, inflow, tail_level, demands, openings)
        return steady_under_reservoir(network, head_level, tail_level, demands, openings)
    except UsageError as error:
        raise ScenarioError([scenario.fault(str(error), "start", file="day")]) from None


def leaf_openings(openings: dict[str, OpeningOfGate], canal: Canal) -> np.ndarray:
    """Openings of all leaves [m] from those by gate: one of a gate is that of all its leaves."""
    by_gate = [np.broadcast_to(openings.get(gate.name, 0.0), gate.leaf_count) for gate in canal.gates]
    return np.concatenate([np.empty(0), *by_gate])


def check_mild(scenario: Scenario, timetable: Timetable) -> None:
    """Raise ScenarioError for stretches that are steep for the largest inflow that the day gives."""
    head = timetable.series[FORCING_HEAD]
    least_factors = np.min([change.factors for change in timetable.roughness], axis=0)
    inflow = float(np.max(head.values)) if scenario.canal.head.kind == "inflow" else scenario.day.start.inflow
    if not inflow:
        return
    faults = [
        scenario.fault(
            f"normal depth {normal:.2f} m is below critical depth {critical:.2f} m for {inflow:.3f} m3/s; "
            "steep pools are not computed: give a milder slope, or the drop as a step at a gate",
            "pools", p, "stretches", s, "slope",
        )
        for p, s, normal, critical in steep_stretches(scenario.canal, inflow, least_factors)
    ]  # fmt: skip
    if faults:
        raise ScenarioError(faults)

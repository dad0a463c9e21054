"""The road from a checked scenario to a finished run."""

import json
import os
from collections.abc import Callable
from dataclasses import fields, is_dataclass
from datetime import UTC, datetime, timedelta
from hashlib import sha256
from typing import Any

import numpy as np
import xarray as xr

import toeline
from toeline.engine.checkpoint import checkpoint_of, go_on_from
from toeline.engine.run import Run
from toeline.engine.settling import round_trip
from toeline.engine.state import new_state
from toeline.errors import Fault
from toeline.network.build import network_of
from toeline.network.hunting import hunting_rules
from toeline.network.initial_state import Start
from toeline.network.lead_times import pool_times
from toeline.network.start import check_mild, starting_state
from toeline.network.tables import HEAD, Network
from toeline.network.timetable import Timetable, timetable_of
from toeline.results.dataset import DatasetSink, open_run
from toeline.results.end_state import read_end_state
from toeline.results.netcdf_writer import NetcdfSink
from toeline.results.provenance import (
    COMPLETE,
    DIMENSIONS,
    RULE_DIMENSIONS,
    RULES,
    START_DIGEST,
    STUCK,
    run_attributes,
)
from toeline.results.thinning import Thinning
from toeline.results.unfinished import read_unfinished
from toeline.results.variables import GAUGE_SIDES
from toeline.scenario import RuleChoice, Scenario
from toeline.scenario.cautions import unseen_ends
from toeline.scenario.limits import limits_of
from toeline.scenario.setting_dimensions import setting_dimensions


def simulate(
    scenario: Scenario,
    output: str | os.PathLike[str] | None = None,
    *,
    overwrite: bool = False,
    resume: bool = False,
    progress: Callable[[float], None] | None = None,
) -> xr.Dataset:
    """Step a day and return the run as a dataset; with `output` it is written there while it goes on.

    `progress` is called with the fraction done. With `resume` the run goes on from the last checkpoint of an unfinished
    one, to the same values as if it had not been stopped, and begins anew where there is none. Raises ScenarioError
    where the day cannot start as asked, UsageError where `output` exists and may not be overwritten, or what is to go
    on was begun with other inputs, RunError where no step can be solved or a rule fails; what was done until then, as
    after a KeyboardInterrupt, stays in `output`.partial.
    """
    network, timetable, start = ready(scenario)
    level, discharge = levels_and_discharges(start)
    static, about = static_values(network, level, discharge), attributes(scenario)
    unfinished = read_unfinished(output, about) if resume and output is not None else None
    if unfinished is not None:
        about["history"] = f"{unfinished.history}\n{about['history']} resumed"
    description = static, about, scenario.day.period.start
    sink = (
        DatasetSink(*description)
        if output is None
        else NetcdfSink(output, *description, overwrite=overwrite, unfinished=unfinished)
    )
    thinning = Thinning(sink, scenario.day.output.every_ms, scenario.day.output.events_within_ms)
    run = None
    try:
        run = Run(network, timetable, thinning if scenario.day.output.is_thinned else sink, start)
        if unfinished is not None and unfinished.checkpoint is not None:
            thinning.go_on_from(unfinished.checkpoint)
            go_on_from(run, unfinished.checkpoint)
        run.go(_at_stops(run, thinning, sink, progress))
    except BaseException as reason:
        thinning.finish()
        sink.close(_stopped(scenario, run.time if run else 0, reason), {})
        raise
    thinning.finish()
    sink.close(COMPLETE, run.end_state())
    return sink.dataset if isinstance(sink, DatasetSink) else open_run(sink.written_path)


def _at_stops(
    run: Run, thinning: Thinning, sink: DatasetSink | NetcdfSink, progress: Callable[[float], None] | None
) -> Callable[[float], None]:
    """What is done at every stop of a run: now and then all that was done so far is made safe."""

    def at_stop(fraction: float) -> None:
        if isinstance(sink, NetcdfSink) and sink.is_copy_due:
            run.flush()
            sink.save_copy(checkpoint_of(run) | thinning.checkpoint())
        if progress is not None:
            progress(fraction)

    return at_stop


def ready(scenario: Scenario) -> tuple[Network, Timetable, Start | dict[str, np.ndarray]]:
    """The canal as arrays, the course of the day, and the state at the start; nothing is stepped.

    Raises ScenarioError or UsageError where the day cannot start as asked.
    """
    network = network_of(scenario.canal, scenario.day.period.spacing, scenario.day.losses.seepage)
    timetable = timetable_of(scenario, network)
    check_mild(scenario, timetable)
    return network, timetable, start_of(scenario, network, timetable)


def cautions(scenario: Scenario) -> list[Fault]:
    """What may come out other than it was meant, though the files hold no fault; each with its place. Raises as `ready`
    does.
    """
    found = list(unseen_ends(scenario))
    if scenario.rules:
        network, timetable, start = ready(scenario)
        level, _ = levels_and_discharges(start)
        openings = start["end_opening"] if isinstance(start, dict) else start.opening
        found += hunting_rules(scenario, network, timetable, level, openings)
    return found


def start_of(scenario: Scenario, network: Network, timetable: Timetable) -> Start | dict[str, np.ndarray]:
    """The state at the start: computed, or the end state of the run that the day goes on from."""
    if scenario.start_file is None:
        return starting_state(scenario, network, timetable)
    nodes = network.channel.nodes[: network.canal_node_count]
    return read_end_state(
        scenario.start_file, start=scenario.day.period.start, chainage=nodes["chainage"], bed_level=nodes["bed_level"],
        labels={"gate": network.names.gates, "bay": network.names.bays, "offtake": network.names.offtakes},
    )  # fmt: skip


def levels_and_discharges(start: Start | dict[str, np.ndarray]) -> tuple[np.ndarray, np.ndarray]:
    """Levels by node [m] and discharges by link [m³/s] of a state at the start."""
    return (start["end_level"], start["end_discharge"]) if isinstance(start, dict) else (start.level, start.discharge)


def _stopped(scenario: Scenario, time: int, reason: BaseException) -> str:
    start = scenario.day.period.start
    at = (start.astimezone(UTC) + timedelta(milliseconds=time)).astimezone(start.tzinfo).isoformat(timespec="seconds")
    return f"stopped at {at}: {'interrupted' if isinstance(reason, KeyboardInterrupt) else reason}"


def attributes(scenario: Scenario) -> dict[str, str]:
    """Global attributes of a run of a scenario."""
    day = scenario.day
    return run_attributes(
        title=day.title, canal=scenario.canal.name, plan=scenario.plan, canal_text=scenario.canal_text,
        day_text=scenario.day_text, settings=_settings(scenario), input_hash=scenario.input_hash,
        surface_names=tuple(scenario.canal.surfaces), units_for_display=scenario.display.system.value, zone=day.zone,
        limits=limits_of(scenario.canal), avoided_openings=_avoided_openings(scenario),
        start=day.period.start, version=toeline.__version__, created=datetime.now(UTC),
        call=scenario.canal.call,
    )  # fmt: skip


def _avoided_openings(scenario: Scenario) -> dict[str, list[tuple[float, float]]]:
    return {gate.name: gate.avoid_openings for gate in scenario.canal.gates if gate.avoid_openings}


def _settings(scenario: Scenario) -> dict[str, Any]:
    """Canal and day with defaults filled in, what their numbers measure, and the state gone on from; fit for JSON."""
    plain = {
        "canal": scenario.canal.model_dump(),
        "day": scenario.day.model_dump(exclude={"plans"}),
        START_DIGEST: sha256(scenario.start_file.read_bytes()).hexdigest() if scenario.start_file else None,
        RULES: [{"kind": rule.kind, **vars(rule.given)} for rule in scenario.rules],
        STUCK: list(scenario.stuck),
        RULE_DIMENSIONS: {rule.kind: _rule_dimensions(rule) for rule in scenario.rules},
        DIMENSIONS: setting_dimensions(),
    }
    return json.loads(json.dumps(plain, default=_plain))


def _rule_dimensions(rule: RuleChoice) -> dict[str, str]:
    settings = rule.found.rule.settings.items()
    measured = {key: "duration" if setting.takes == "duration" else setting.dimension for key, setting in settings}
    return {key: dimension for key, dimension in measured.items() if dimension}


def _plain(value: Any) -> Any:
    """A value that JSON does not know, as one that it does."""
    if is_dataclass(value) and not isinstance(value, type):
        return {field.name: getattr(value, field.name) for field in fields(value)}
    return value.tolist() if isinstance(value, np.ndarray) else str(value)


def static_values(network: Network, level: np.ndarray, discharge: np.ndarray) -> dict[str, np.ndarray]:
    """Coordinates and all that does not change during a run, by variable name.

    `level` [m] by node and `discharge` [m³/s] by link are those at the start.
    """
    names, gates, nodes = network.names, network.tables.gates, network.channel.nodes[: network.canal_node_count]
    chainage = nodes["chainage"]
    pools, offtakes = network.tables.pools, network.tables.offtakes
    times = pool_times(network, level, discharge)
    beside = (*names.pools, "tail")
    node_pool = network.pool_of(np.arange(nodes.size)).astype(np.int32)
    return {
        "gate": np.array(names.gates, object),
        "gate_chainage": network.channel.nodes["chainage"][gates.downstream_node],
        "gate_sill_level": gates.sill_level,
        "gate_floor_level": gates.floor_level,
        "gate_width": gates.width,
        "gate_max_opening": names.max_opening,
        "gate_smallest_move": names.smallest_move,
        "gate_turn": names.turn,
        "gate_scale_mark": names.scale_mark,
        "gate_gatekeeper": np.array(names.gatekeepers, object),
        "gate_apron_end": gates.apron_end,
        "gate_protection_end": gates.protection_end,
        "gate_upstream_pool": np.array(
            ["head" if up == HEAD else names.pools[node_pool[up]] for up in gates.upstream_node], object
        ),
        "gate_downstream_pool": np.array([beside[pool] for pool in network.pool_of(gates.downstream_node)], object),
        "bay": np.array(names.bays, object),
        "bay_gate": np.array(
            [names.gates[g] for g in network.tables.leaves.gate[network.tables.leaves.bay >= 0]], object
        ),
        "pool": np.array(names.pools, object),
        "pool_length": chainage[pools.last_node] - chainage[pools.first_node],
        "pool_target_level": names.target_level,
        "pool_wave_round_trip": _round_trips(network, level, discharge),
        "pool_lead_time_wave": times.wave,
        "pool_lead_time_volume": times.volume,
        "offtake": np.array(names.offtakes, object),
        "offtake_pool": np.array([names.pools[node_pool[node]] for node in offtakes.node], object),
        "offtake_chainage": chainage[offtakes.node],
        **_escape_facts(network),
        **_gauge_facts(network),
        "offtake_sill_level": offtakes.sill_level,
        "node": np.arange(nodes.size),
        "chainage": chainage,
        "bed_level": nodes["bed_level"],
        "lining_level": names.lining_level,
        "bank_level": names.bank_level,
        "node_pool": node_pool,
        "surface": names.node_surface,
        "velocity_limit": names.velocity_limit,
    }


def _escape_facts(network: Network) -> dict[str, np.ndarray]:
    names, escapes = network.names, network.tables.escapes
    return {
        "escape": np.array(names.escapes, object),
        "escape_pool": np.array([names.pools[pool] for pool in network.pool_of(escapes.node)], object),
        "escape_chainage": network.channel.nodes["chainage"][escapes.node],
        "escape_crest_level": escapes.crest_level,
    }


def _gauge_facts(network: Network) -> dict[str, np.ndarray]:
    gauges, chainage = network.names.gauges, network.channel.nodes["chainage"]
    places = np.maximum(network.tables.gauges.node, 0) + network.tables.gauges.weight
    return {
        "gauge": np.array([gauge.name for gauge in gauges], object),
        "gauge_gate": np.array([gauge.gate for gauge in gauges], object),
        "gauge_side": np.array([GAUGE_SIDES.index(gauge.side) for gauge in gauges], np.int8),
        "gauge_pool": np.array([gauge.pool for gauge in gauges], object),
        "gauge_chainage": np.interp(places, np.arange(chainage.size), chainage),
        "gauge_zero_level": network.tables.gauges.zero_level,
    }


def _round_trips(network: Network, level: np.ndarray, discharge: np.ndarray) -> np.ndarray:
    """Wave round trip of every pool [s]; NaN where a pool is dry."""
    state = new_state(network)
    state.nodes["level"], state.links["discharge"] = level, discharge
    trips = [round_trip(network.channel, pool.first_node, pool.last_node, state) for pool in network.tables.pools]
    return np.where(np.isfinite(trips), trips, np.nan)

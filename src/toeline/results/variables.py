"""Every output variable, said once: the writer, the dataset in memory, axis labels and the reference page read this.

A variable whose first dimension is `time`, `profile_time` or `order` grows while the run goes on; one of the state
dimensions is written at the end of the run; all others are fixed before it starts.
"""

from dataclasses import dataclass
from typing import Literal

GROWING_DIMENSIONS = ("time", "profile_time", "order")
LABELLED_DIMENSIONS = ("gate", "bay", "pool", "offtake", "escape", "gauge", "node")
CLOCK = "seconds since the start of the period"
"""Unit of all times in the registry; the file names the instant itself, in UTC."""

FLOW_STATES = (
    "closed",
    "free",
    "near_modular_limit",
    "drowned",
    "clear_of_water",
    "clear_and_drowned",
    "overtopped",
    "reverse",
)
DISCHARGE_QUALITIES = ("good", "near_modular_limit", "lip_near_surface", "very_drowned", "reverse", "uneven_bays")
JUMP_STATES = ("none", "drowned", "on_apron", "on_protection", "beyond_protection", "swept_out_of_pool")
JUMP_KINDS = ("none", "undular", "weak", "oscillating", "steady", "strong")
LENGTH_QUALITIES = ("not_defined", "good", "poorly_known")
GAUGE_SIDES = ("none", "upstream", "downstream")
ORDER_KINDS = ("opening", "by", "discharge")
ORDER_STATUSES = ("accepted", "trimmed", "refused", "replaced")


@dataclass(frozen=True)
class Variable:
    """One output variable.

    `dtype` is how it is stored: f4, f8, i1, i4 or text. `standard_name` is set only where the CF table has one.
    `flags` are the meanings of the values 0, 1, 2, ...; `companions` name the variables that qualify this one.
    """

    name: str
    dimensions: tuple[str, ...]
    unit: str | None
    long_name: str
    comment: str = ""
    standard_name: str | None = None
    dtype: Literal["f4", "f8", "i1", "i4", "text"] = "f4"
    flags: tuple[str, ...] = ()
    companions: tuple[str, ...] = ()
    is_state: bool = False

    @property
    def grows(self) -> bool:
        """Whether rows are added while the run goes on."""
        return bool(self.dimensions) and self.dimensions[0] in GROWING_DIMENSIONS

    @property
    def cell_methods(self) -> str | None:
        """All values along a time axis hold at the instant, none is a mean over the step."""
        along_time = self.dimensions[:1] in (("time",), ("profile_time",)) and self.dimensions != (self.name,)
        return f"{self.dimensions[0]}: point" if along_time and not self.flags else None


_GATES, _POOLS, _OFFTAKES, _PROFILE = ("time", "gate"), ("time", "pool"), ("time", "offtake"), ("profile_time", "node")
_ESCAPES = ("time", "escape")
_SURFACE = "water_surface_height_above_reference_datum"
_LEVEL = "above the datum of the canal file, whose altitude is not known here"
_JUMP = ("jump_state", "jump_length_quality")


def _flag(
    name: str,
    dimensions: tuple[str, ...],
    meaning: str,
    flags: tuple[str, ...],
    comment: str = "",
    standard_name: str | None = None,
) -> Variable:
    return Variable(name, dimensions, None, meaning, comment, standard_name, dtype="i1", flags=flags)


def _text(name: str, dimensions: tuple[str, ...], meaning: str, comment: str = "") -> Variable:
    return Variable(name, dimensions, None, meaning, comment, dtype="text")


def _state(name: str, dimensions: tuple[str, ...], unit: str | None, meaning: str, comment: str = "") -> Variable:
    return Variable(name, dimensions, unit, meaning, comment, dtype="f8", is_state=True)


def _state_text(name: str, dimensions: tuple[str, ...], meaning: str, comment: str = "") -> Variable:
    return Variable(name, dimensions, None, meaning, comment, dtype="text", is_state=True)


# fmt: off
_CLOCKS = (
    Variable("time", ("time",), CLOCK, "time of the output step", standard_name="time", dtype="f8"),
    Variable("profile_time", ("profile_time",), CLOCK, "time of the long profile", standard_name="time", dtype="f8"),
)

_GATE_SERIES = (
    Variable("gate_opening", _GATES, "m", "opening of the gate, lip above sill",
             "as moved, not as ordered; the mean over bays that move apart", dtype="f8"),
    Variable("gate_discharge", _GATES, "m3 s-1", "discharge of the gate", "downstream positive; all bays together",
             companions=("gate_flow_state", "discharge_quality"), dtype="f8"),
    _flag("gate_flow_state", _GATES, "state of the flow through the gate", FLOW_STATES, standard_name="status_flag",
          comment="this and all that is said of jet and jump: where bays move apart, of the bay with the largest unit "
          "discharge, as if the whole width ran like it"),
    _flag("discharge_quality", _GATES, "how well the discharge of the gate is known", DISCHARGE_QUALITIES,
          standard_name="quality_flag",
          comment="near the modular limit, with the lip near the surface, when very drowned, and with uneven bays that "
          "the tailwater reaches, gate ratings are poor"),
    Variable("gate_headwater_level", _GATES, "m", "water level just above the gate", _LEVEL, _SURFACE, dtype="f8"),
    Variable("gate_tailwater_level", _GATES, "m", "water level just below the gate", _LEVEL, _SURFACE, dtype="f8"),
    Variable("gate_modular_limit_level", _GATES, "m", "tailwater level above which the flow begins to drown",
             "at this headwater and opening; missing where nothing flows below the leaf",
             dtype="f8"),
    Variable("jet_depth", _GATES, "m", "depth of the jet at the contracted section",
             "above the floor below the gate; missing where there is no jet"),
    Variable("jet_froude_number", _GATES, "1", "Froude number of the jet at the contracted section"),
    Variable("sequent_depth", _GATES, "m", "sequent depth of the jet", "above the floor; the tail depth a jump at the "
             "contracted section needs"),
    Variable("roller_depth", _GATES, "m", "depth of the roller at the gate",
             "above the floor; missing where the jump is not drowned"),
    _flag("jump_state", _GATES, "where the hydraulic jump stands", JUMP_STATES, standard_name="status_flag",
          comment="by the end of the jump, or by its toe where the length is not defined; a drowned jump is a roller "
          "at the gate, which drowns people"),
    _flag("jump_kind", _GATES, "kind of the hydraulic jump by the Froude number before it", JUMP_KINDS),
    Variable("jump_toe_distance", _GATES, "m", "distance of the toe of the jump from the gate",
             "downstream positive; missing where there is no free jump", companions=_JUMP),
    Variable("jump_end_distance", _GATES, "m", "distance of the end of the jump from the gate",
             "end of the roller where drowned; missing where the length is not defined", companions=_JUMP),
    _flag("jump_length_quality", _GATES, "how well the length of the jump is known", LENGTH_QUALITIES,
          standard_name="quality_flag"),
    Variable("tailwater_margin", _GATES, "m", "tailwater level above that which would just drown the jump",
             "at this headwater and opening with the free discharge; negative: a free jump"),
    Variable("protection_margin", _GATES, "m", "fall of the tailwater until the jump's end passes the protected floor",
             "the whole tailwater profile shifted alike; negative: how much it is short; missing where no tailwater "
             "can do it", companions=_JUMP),
    Variable("jump_energy_loss", _GATES, "m", "energy head lost in the hydraulic jump",
             "from the headwater to the tailwater where drowned"),
    Variable("jump_power", _GATES, "W", "power lost in the hydraulic jump"),
    Variable("surge_height_bound_upstream", _GATES, "m", "greatest height of the surge sent up the pool",
             "of an instantaneous change as large as the last move of the gate; 0 once it has run there and back"),
    Variable("surge_height_bound_downstream", _GATES, "m", "greatest height of the surge sent down the pool",
             "of an instantaneous change as large as the last move of the gate; 0 once it has run there and back"),
)

_BAY_SERIES = (
    Variable("bay_opening", ("time", "bay"), "m", "opening of the bay, lip above sill", "as moved, not as ordered",
             dtype="f8"),
    Variable("bay_discharge", ("time", "bay"), "m3 s-1", "discharge of the bay",
             "its share of what the gate would pass with all bays at this opening", dtype="f8"),
)

_POOL_SERIES = (
    _flag("settling", _POOLS, "whether waves of the last change still travel in the pool", ("settled", "settling"),
          standard_name="status_flag",
          comment="a wave round trip after a move, or a leap of inflow, delivery or level, through all pools that the "
          "wave reaches; until then the quasi-steady levels are least trustworthy"),
    Variable("pool_volume", _POOLS, "m3", "volume of water in the pool", dtype="f8"),
    Variable("pool_head_level", _POOLS, "m", "water level at the upper end of the pool", _LEVEL, _SURFACE,
             companions=("settling",), dtype="f8"),
    Variable("pool_tail_level", _POOLS, "m", "water level at the lower end of the pool", _LEVEL, _SURFACE,
             companions=("settling",), dtype="f8"),
    Variable("pool_inflow", _POOLS, "m3 s-1", "discharge into the upper end of the pool", dtype="f8"),
    Variable("pool_outflow", _POOLS, "m3 s-1", "discharge out of the lower end of the pool", dtype="f8"),
    Variable("pool_inflow_volume", _POOLS, "m3", "volume taken in at the upper end of the pool since the start",
             dtype="f8"),
    Variable("pool_outflow_volume", _POOLS, "m3", "volume let out at the lower end of the pool since the start",
             dtype="f8"),
    Variable("pool_losses", _POOLS, "m3 s-1", "seepage and evaporation less rain",
             "deliveries and escapes are not losses; negative where rain exceeds the rest"),
    Variable("pool_loss_volume", _POOLS, "m3", "volume lost by seepage and evaporation less rain since the start",
             dtype="f8"),
    Variable("pool_roughness_factor", _POOLS, "1", "factor of the roughness calendar on Manning's n in the pool"),
    Variable("pool_bank_margin", _POOLS, "m", "least height of the bank above the water along the pool",
             "negative: over the bank; surges are not in it; missing where no bank is given", companions=("settling",)),
    Variable("pool_lining_margin", _POOLS, "m", "least height of the lining above the water along the pool",
             "negative: over the lining; surges are not in it; missing where no lining is given",
             companions=("settling",)),
)

_OFFTAKE_SERIES = (
    Variable("demand", _OFFTAKES, "m3 s-1", "discharge asked for at the offtake", "missing where nothing is asked",
             dtype="f8"),
    Variable("delivery", _OFFTAKES, "m3 s-1", "discharge delivered at the offtake", dtype="f8"),
    Variable("delivery_volume", _OFFTAKES, "m3", "volume delivered at the offtake since the start", dtype="f8"),
    Variable("offtake_level", _OFFTAKES, "m", "water level at the offtake", _LEVEL, _SURFACE, dtype="f8"),
)

_ESCAPE_SERIES = (
    Variable("escape_discharge", _ESCAPES, "m3 s-1", "discharge over the escape", "out of the canal; never back",
             dtype="f8"),
    Variable("escape_volume", _ESCAPES, "m3", "volume let out over the escape since the start", dtype="f8"),
)

_GAUGE_SERIES = (
    Variable("gauge_reading", ("time", "gauge"), "m", "water level as read on the staff gauge",
             "above its zero; negative below the zero; missing where the bed beside it is dry", dtype="f8"),
)

_CANAL_SERIES = (
    Variable("canal_inflow", ("time",), "m3 s-1", "discharge into the canal at its head", dtype="f8"),
    Variable("canal_outflow", ("time",), "m3 s-1", "discharge out of the canal at its tail", dtype="f8"),
    Variable("canal_inflow_volume", ("time",), "m3", "volume taken in at the head since the start", dtype="f8"),
    Variable("canal_outflow_volume", ("time",), "m3", "volume let out at the tail since the start", dtype="f8"),
    Variable("canal_storage", ("time",), "m3", "volume of water in all pools", dtype="f8"),
    Variable("balance_residual", ("time",), "m3", "residual of the water ledger since the start",
             "inflow less deliveries, escapes, losses, outflow and growth of storage", dtype="f8"),
)

_PROFILES = (
    Variable("water_level", _PROFILE, "m", "water level", _LEVEL, _SURFACE, dtype="f8"),
    Variable("discharge", _PROFILE, "m3 s-1", "discharge along the canal", "downstream positive",
             "water_volume_transport_in_river_channel", dtype="f8"),
    Variable("velocity", _PROFILE, "m s-1", "mean velocity of the section", "downstream positive"),
)

_ORDERS = (
    Variable("order_time", ("order",), CLOCK, "time of the order", dtype="f8"),
    _text("order_source", ("order",), "who gave the order", "schedule: the plan; else the kind of the rule"),
    _text("order_gate", ("order",), "gate of the order"),
    Variable("order_bay", ("order",), "1", "number of the bay of the order", "from 1; 0: all bays, moved together",
             dtype="i4"),
    _flag("order_kind", ("order",), "what the order gives", ORDER_KINDS,
          comment="opening: the opening to reach; by: the change of the opening; discharge: what it is to pass then"),
    Variable("order_value", ("order",), None, "value given by the order",
             "in m, or in m3 s-1 where a discharge is given", dtype="f8"),
    Variable("order_opening_before", ("order",), "m", "opening when the order came"),
    Variable("order_opening_after", ("order",), "m", "opening that the order led to"),
    Variable("order_completed", ("order",), CLOCK, "time at which the leaf stood", "missing where refused", dtype="f8"),
    _flag("order_status", ("order",), "what became of the order", ORDER_STATUSES),
    _text("order_reason", ("order",), "why the order was trimmed, refused or replaced"),
)

_GATE_FACTS = (
    _text("gate", ("gate",), "name of the gate"),
    Variable("gate_chainage", ("gate",), "m", "chainage of the gate", "from the head, downstream positive", dtype="f8"),
    Variable("gate_sill_level", ("gate",), "m", "level of the sill", _LEVEL, dtype="f8"),
    Variable("gate_floor_level", ("gate",), "m", "level of the floor just below the gate", _LEVEL, dtype="f8"),
    Variable("gate_width", ("gate",), "m", "open width of all bays", dtype="f8"),
    Variable("gate_max_opening", ("gate",), "m", "greatest opening", dtype="f8"),
    Variable("gate_smallest_move", ("gate",), "m", "smallest change of opening that can be carried out", dtype="f8"),
    Variable("gate_turn", ("gate",), "m", "change of opening for one turn of the handwheel",
             "missing where the canal file gives none", dtype="f8"),
    Variable("gate_scale_mark", ("gate",), "m", "spacing of the marks on the scale of the opening",
             "missing where the canal file gives none", dtype="f8"),
    Variable("gate_apron_end", ("gate",), "m", "distance of the end of the apron from the gate", dtype="f8"),
    Variable("gate_protection_end", ("gate",), "m", "distance of the end of the protected floor from the gate",
             "where the last protected surface without a gap ends", dtype="f8"),
    _text("gate_gatekeeper", ("gate",), "who works the gate", "empty where the canal file names nobody"),
    _text("gate_upstream_pool", ("gate",), "pool above the gate", "head: the source"),
    _text("gate_downstream_pool", ("gate",), "pool below the gate", "tail: beyond the last pool"),
)

_BAY_FACTS = (
    _text("bay", ("bay",), "name of the bay", "of gates whose bays move apart; numbered from the left bank"),
    _text("bay_gate", ("bay",), "gate of the bay"),
)

_POOL_FACTS = (
    _text("pool", ("pool",), "name of the pool"),
    Variable("pool_length", ("pool",), "m", "length of the pool", dtype="f8"),
    Variable("pool_target_level", ("pool",), "m", "target level at the lower end of the pool", _LEVEL, dtype="f8"),
    Variable("pool_wave_round_trip", ("pool",), "s", "time of a small wave down the pool and back", "at the start",
             dtype="f8"),
    Variable("pool_lead_time_wave", ("pool",), "s", "time that a change of flow needs down the pool, as a wave",
             "at the target level and the discharge of the start; missing where the water stands", dtype="f8"),
    Variable("pool_lead_time_volume", ("pool",), "s", "change of the pool's volume for a change of its flow",
             "dV/dQ of steady flow at the target level and the discharge of the start; missing where the water stands",
             dtype="f8"),
)

_OFFTAKE_FACTS = (
    _text("offtake", ("offtake",), "name of the offtake"),
    _text("offtake_pool", ("offtake",), "pool of the offtake"),
    Variable("offtake_chainage", ("offtake",), "m", "chainage of the offtake", "from the head, downstream positive",
             dtype="f8"),
    Variable("offtake_sill_level", ("offtake",), "m", "level of the sill of the offtake",
             "of the bed where the canal file gives no sill", dtype="f8"),
)

_ESCAPE_FACTS = (
    _text("escape", ("escape",), "name of the escape"),
    _text("escape_pool", ("escape",), "pool of the escape"),
    Variable("escape_chainage", ("escape",), "m", "chainage of the escape",
             "from the head, downstream positive; of the node that the water leaves", dtype="f8"),
    Variable("escape_crest_level", ("escape",), "m", "level of the crest of the escape", _LEVEL, dtype="f8"),
)

_GAUGE_FACTS = (
    _text("gauge", ("gauge",), "name of the staff gauge"),
    _text("gauge_gate", ("gauge",), "gate beside which the gauge stands", "empty where it stands along a pool"),
    _flag("gauge_side", ("gauge",), "side of the gate on which the gauge stands", GAUGE_SIDES),
    _text("gauge_pool", ("gauge",), "pool of the gauge", "head, tail: beyond the ends of the canal"),
    Variable("gauge_chainage", ("gauge",), "m", "chainage of the gauge", "from the head, downstream positive",
             dtype="f8"),
    Variable("gauge_zero_level", ("gauge",), "m", "level of the zero of the staff", _LEVEL, dtype="f8"),
)

_NODE_FACTS = (
    Variable("node", ("node",), "1", "number of the node, from the head", dtype="i4"),
    Variable("chainage", ("node",), "m", "chainage", "from the head, downstream positive", dtype="f8"),
    Variable("bed_level", ("node",), "m", "level of the bed", _LEVEL, dtype="f8"),
    Variable("lining_level", ("node",), "m", "level of the top of the lining", _LEVEL, dtype="f8"),
    Variable("bank_level", ("node",), "m", "level of the top of the bank", _LEVEL, dtype="f8"),
    Variable("node_pool", ("node",), "1", "position of the node's pool in the list of pools",
             "from 0; -1 beyond the last gate", dtype="i4"),
    Variable("surface", ("node",), None, "surface of the floor", "named as in the canal file", dtype="i1"),
    Variable("velocity_limit", ("node",), "m s-1", "greatest velocity allowed over the surface",
             "of the canal file; missing where none is given", dtype="f8"),
)

_END_STATE = (
    _state("end_level", ("state_node",), "m", "water level at the end of the run", _LEVEL),
    _state("end_volume", ("state_node",), "m3", "volume stored at the end of the run"),
    _state("end_discharge", ("state_link",), "m3 s-1", "discharge at the end of the run"),
    _state("end_convective_head", ("state_link",), "m", "convective head at the end of the run"),
    _state("end_convective_share", ("state_link",), "1", "weight of the convective head at the end of the run",
           "1 in calm flow, 0 from critical flow on"),
    _state("end_imbalance", ("state_link",), "m", "head that accelerates the water of a link at the end of the run",
           "zero without local inertia"),
    _state("end_delivery", ("state_offtake",), "m3 s-1", "delivery at the end of the run"),
    _state("end_opening", ("state_leaf",), "m", "opening at the end of the run"),
    _state("end_target_opening", ("state_leaf",), "m", "opening the leaf is moving to at the end of the run"),
    _state("end_ordered_opening", ("state_leaf",), "m", "opening last ordered", "'by' orders count from it"),
    _state("end_motion_remaining", ("state_leaf",), "s", "time for which the leaf still moves"),
    _state("end_surge_upstream", ("state_gate",), "m", "bound of the surge up the pool of the last moves"),
    _state("end_surge_downstream", ("state_gate",), "m", "bound of the surge down the pool of the last moves"),
    _state("end_surge_upstream_remaining", ("state_gate",), "s", "time for which it still stands"),
    _state("end_surge_downstream_remaining", ("state_gate",), "s", "time for which it still stands"),
    _state("end_settling_remaining", ("state_pool",), "s", "time until the pool has settled"),
    _state("end_roughness_factor", ("state_pool",), "1", "factor on Manning's n at the end of the run"),
    _state("end_move_age", ("state_move",), "s", "time since a move of the last hour began"),
    Variable("end_move_leaf", ("state_move",), "1", "position of the leaf of that move in the list of leaves", "from 0",
             dtype="i4", is_state=True),
    _state_text("end_rule", ("state_memory",), "rule that keeps the value", "kind and gate"),
    _state_text("end_rule_memory", ("state_memory",), "name of the value that the rule keeps"),
    _state("end_rule_value", ("state_memory",), None, "value that the rule keeps", "in SI units"),
    _state("end_rate", ("state_forcing",), None, "rates of change at the end of the run",
           "a second; of head, tail, evaporation, rain, gate openings, demands and offtake openings in their units"),
    _state("end_next_step", (), "s", "length of the step that would have come next"),
    _state("end_time", (), CLOCK, "time of the end state"),
)
# fmt: on

VARIABLES = {
    variable.name: variable
    for group in (
        _CLOCKS,
        _GATE_SERIES,
        _BAY_SERIES,
        _POOL_SERIES,
        _OFFTAKE_SERIES,
        _ESCAPE_SERIES,
        _GAUGE_SERIES,
        _CANAL_SERIES,
        _PROFILES,
        _ORDERS,
        _GATE_FACTS,
        _BAY_FACTS,
        _POOL_FACTS,
        _OFFTAKE_FACTS,
        _ESCAPE_FACTS,
        _GAUGE_FACTS,
        _NODE_FACTS,
        _END_STATE,
    )
    for variable in group
}
"""The registry: every variable by its name, in the order in which files and the reference page list them."""


def growing(dimension: str) -> list[Variable]:
    """Variables that gain rows along `dimension` (time, profile_time or order) while the run goes on."""
    return [variable for variable in VARIABLES.values() if variable.dimensions[:1] == (dimension,)]


def fixed() -> list[Variable]:
    """Variables known before the run starts."""
    return [variable for variable in VARIABLES.values() if not variable.grows and not variable.is_state]


def end_state() -> list[Variable]:
    """Variables from which the next run can start."""
    return [variable for variable in VARIABLES.values() if variable.is_state]

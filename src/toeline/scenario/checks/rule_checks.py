"""What must hold between the rules and stuck leaves of a plan and the canal."""

from collections.abc import Iterator, Sequence
from itertools import combinations

from toeline.rules.base import CanalFacts
from toeline.rules.decision_times import overlap
from toeline.rules.registry import UnknownRuleError
from toeline.rules.setting import EVERY_KEY
from toeline.scenario.canal_facts import canal_facts
from toeline.scenario.checks.day_checks import misfits_of_bay
from toeline.scenario.misfits import Misfit, nearest, shown, too_often
from toeline.scenario.rules import RuleChoice
from toeline.scenario.schema.canal import Canal
from toeline.scenario.schema.plans import StuckEntry


def misfits_of_rules(rules: Sequence[RuleChoice], canal: Canal) -> Iterator[Misfit]:
    """Find places that the canal does not have, what a rule itself objects to, and two rules for one gate at one time;
    paths begin with the index of the rule.
    """
    facts, moved = canal_facts(canal), {}
    for index, rule in enumerate(rules):
        found = list(_misfits_of_rule(rule, facts))
        yield from (Misfit((index, *path), message) for path, message in found)
        if not found:
            moved[index] = rule.found.gate_of(rule.given, facts)
    for (first, gate), (second, other) in combinations(moved.items(), 2):
        hours = [getattr(rules[index].given, "hours", None) for index in (first, second)]
        if gate == other and overlap(*hours):
            message = f'"{gate}" already has a rule at these hours; allowed: one, or several whose hours do not overlap'
            yield Misfit((second,), message)


def misfits_of_pace(rules: Sequence[RuleChoice], length_ms: int) -> Iterator[Misfit]:
    """Find rules that decide too often in a period; paths begin with the index of the rule."""
    for index, rule in enumerate(rules):
        every = getattr(rule.given, EVERY_KEY, None)
        if isinstance(every, float):
            yield from too_often((index, EVERY_KEY), every * 1000.0, length_ms)


def _misfits_of_rule(rule: RuleChoice, facts: CanalFacts) -> Iterator[Misfit]:
    places = list(_unknown_places(rule, facts))
    yield from places
    if places:
        return
    try:
        found = rule.found.misfits(rule.given, facts)
        yield from (Misfit((key,), message) for key, message in found)
        if not found and rule.found.gate_of(rule.given, facts) not in facts.gates:
            yield Misfit(("kind",), "moves no gate of the canal")
    except UnknownRuleError as error:
        yield Misfit(("kind",), str(error))


def _unknown_places(rule: RuleChoice, facts: CanalFacts) -> Iterator[Misfit]:
    known = {"gate": facts.gates, "pool": facts.pools}
    for key, setting in rule.found.rule.settings.items():
        value = getattr(rule.given, key)
        if setting.takes in known and value is not None and value not in known[setting.takes]:
            hint = nearest(value, known[setting.takes])
            yield Misfit((key,), f"found {shown(value)}, which is no {setting.takes} of the canal; {hint}")
        if setting.takes == "lead times" and isinstance(value, dict):
            for pool in value:
                if pool not in facts.pools:
                    hint = nearest(pool, facts.pools)
                    yield Misfit((key, pool), f"{shown(pool)} is no pool of the canal; {hint}")


def misfits_of_stuck(stuck: Sequence[StuckEntry], canal: Canal) -> Iterator[Misfit]:
    """Find gates and bays that the canal does not have; paths begin with the index of the entry."""
    gates = {gate.name: gate for gate in canal.gates}
    for index, entry in enumerate(stuck):
        if entry.gate not in gates:
            hint = nearest(entry.gate, gates)
            yield Misfit((index, "gate"), f"found {shown(entry.gate)}, which is no gate of the canal; {hint}")
        else:
            yield from misfits_of_bay(index, entry.bay or 0, gates[entry.gate])

"""Rules of a user's own: from a file beside the day file, a package, an entry point; and what they do wrong."""

import json
from importlib.metadata import EntryPoint
from pathlib import Path

import pytest
from tests.canals import day, scenario_of, stepped_canal

from toeline import open_run, simulate
from toeline.errors import RunError, ScenarioError
from toeline.rules import registry

WATCH = '''\
"""A rule that opens a little every hour, as often as it is told."""

from toeline.rules import Present, Rule, duration, number, place


class Watch(Rule):
    """Opens by a step at every decision until it has done so often enough."""

    settings = {
        "gate": place("gate", "Name of the gate."),
        "every": duration("Time between decisions.", least=60.0, most=86400.0, default=3600.0),
        "step": number("length", "Opening added.", above=0.0, most=1.0),
        "times": number(None, "How often.", least=1, most=100, default=2),
    }

    def decide(self, now: Present):
        done = self.memory.get("done", 0)
        if done >= self.given.times:
            return None
        self.memory["done"] = done + 1
        return now.ordered_opening(self.gate) + self.given.step
'''
RULE = {"kind": "watch.py:Watch", "gate": "G0", "step": "2 cm"}


DEVELOPERS = Path(__file__).parents[2] / "DEVELOPERS.md"


def scenario(folder, *rules):
    keys = day(8.0, length="4 h", plans={"only": {"rules": list(rules)}})
    return scenario_of(folder, stepped_canal(2, 800.0, gate={"hoist_speed": "1 m/min"}), keys)


def test_a_file_beside_the_day_file(tmp_path):
    (tmp_path / "watch.py").write_text(WATCH, encoding="utf-8")
    run = simulate(scenario(tmp_path, RULE))
    assert run.order_source.values.tolist() == ["watch.py:Watch"] * 2
    steps = run.order_opening_after - run.order_opening_before
    assert steps.values == pytest.approx([0.02, 0.02], abs=1e-6)
    assert run.end_rule_value.values.tolist() == [2.0]


def test_settings_are_checked_on_their_line(tmp_path):
    (tmp_path / "watch.py").write_text(WATCH, encoding="utf-8")
    with pytest.raises(ScenarioError, match=r"step: found \"2 kg\"; allowed: a finite number in m"):
        scenario(tmp_path, RULE | {"step": "2 kg"})


def test_its_text_enters_the_digest_of_the_inputs(tmp_path):
    file = tmp_path / "watch.py"
    file.write_text(WATCH, encoding="utf-8")
    before = scenario(tmp_path, RULE).input_hash
    file.write_text(WATCH.replace("default=2", "default=3"), encoding="utf-8")
    changed = scenario(tmp_path, RULE)
    assert changed.input_hash != before
    assert changed.rules[0].given.times == 3  # an edit takes effect


def test_an_error_names_rule_file_and_line_and_keeps_what_was_done(tmp_path):
    (tmp_path / "watch.py").write_text(WATCH.replace("if done >=", "if 1 / (1 - done) >="), encoding="utf-8")
    with pytest.raises(RunError) as raised:
        simulate(scenario(tmp_path, RULE), tmp_path / "run.nc")
    file = tmp_path / "watch.py"
    assert str(raised.value) == (
        f'1 h after the start: rule "watch.py:Watch" failed in {file}, line 18: ZeroDivisionError: division by zero'
    )
    with open_run(tmp_path / "run.nc.partial") as run:
        assert run.sizes["order"] == 1
        assert run.sizes["time"] == 60
        assert "ZeroDivisionError" in run.attrs["outcome"]


@pytest.mark.parametrize(
    ("source", "message"),
    [
        ("def = 1\n", "SyntaxError: invalid syntax, line 1"),
        ("import no_such_module\n", "ModuleNotFoundError: No module named 'no_such_module'"),
        ("class Watch:\n    pass\n", "has no class Watch that derives from toeline.rules.Rule"),
        (WATCH.replace('place("gate", "Name of the gate.")', '"gate"'), "allowed: a toeline.rules.Setting by key"),
        (WATCH.replace("settings = {", "settings = None and {"), "allowed: a toeline.rules.Setting by key"),
        (WATCH.replace('"step": number', '"kind": number'), "by key, any but kind"),
        (WATCH.replace("default=2", "default=float('nan')"), "found the default nan; allowed: a finite number in SI"),
        (WATCH.replace('"length"', '"width"'), "found the dimension 'width'; allowed: "),
        ("import sys\nsys.exit(3)\n", "cannot be loaded: SystemExit: 3"),
        (WATCH.replace("    def decide", "    def decided"), "Watch has no decide"),
        (WATCH + "\n    @classmethod\n    def misfits(cls, given, canal):\n        return given.nothing\n",
         "has no attribute 'nothing'"),
        (WATCH + "\n    @classmethod\n    def misfits(cls, given, canal):\n        return ['gate']\n",
         "objects with ['gate']; allowed: pairs of a key and a sentence"),
        (WATCH + "\n    @classmethod\n    def gate_of(cls, given, canal):\n        return []\n",
         "moves no gate of the canal"),
    ],
)  # fmt: skip
def test_a_file_that_is_no_rule_is_told_on_the_line_that_names_it(tmp_path, source, message):
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(ScenarioError) as raised:
        scenario(tmp_path, RULE)
    [fault] = raised.value.faults
    assert fault.key == "plans only rules[1] kind"
    assert message in fault.message


def test_a_rule_that_cannot_be_made_leaves_a_file_that_says_so(tmp_path):
    source = f"{WATCH}\n    def __init__(self, given, canal):\n        raise KeyError('pool')\n"
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(RunError, match="line 24: KeyError: 'pool'"):
        simulate(scenario(tmp_path, RULE), tmp_path / "run.nc")
    assert [file.name for file in tmp_path.glob("run.nc*")] == ["run.nc.partial"]


def ending(decision, tmp_path, more=""):
    """How a run ends whose rule decides so."""
    source = WATCH.replace("return now.ordered_opening(self.gate) + self.given.step", decision) + more
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(RunError) as raised:
        simulate(scenario(tmp_path, RULE), tmp_path / "run.nc")
    assert not (tmp_path / "run.nc.writing").exists()
    return str(raised.value)


@pytest.mark.parametrize("opening", ["'wide'", "float('nan')", "True", "10**400", "[0.1]"])
def test_an_opening_that_is_no_number_ends_the_run(tmp_path, opening):
    message = ending(f"return {opening}", tmp_path)
    assert "wants an opening of " in message
    assert message.endswith("; allowed: a number in m, or None")


@pytest.mark.parametrize("memory", ["['a'] = 'x'", "['a'] = 10**400", "[3] = 1.0", "['a\\0b'] = 1.0", " = None"])
def test_a_memory_that_the_next_day_could_not_read_ends_the_run(tmp_path, memory):
    assert "allowed: numbers by name" in ending(f"self.memory{memory}", tmp_path)


@pytest.mark.parametrize("times", ["None", "[float('nan')]", "['06:00']", "[[0]]"])
def test_decision_times_that_are_none_end_the_run(tmp_path, times):
    more = f"\n    @classmethod\n    def decision_times(cls, given, start, length_ms):\n        return {times}\n"
    assert "allowed: an array of times in ms from the start" in ending("return None", tmp_path, more)


def test_more_decisions_than_one_a_second_end_the_run(tmp_path):
    more = "\n    @classmethod\n    def decision_times(cls, *_):\n        return list(range(20_000))\n"
    assert "decides 20,000 times; allowed: once a second" in ending("return None", tmp_path, more)


@pytest.mark.parametrize("bounds", ["least=0.0, most=86400.0", "least=0.001, most=86400.0, default=3600.0"])
def test_a_time_between_decisions_below_a_second_is_refused_whatever_the_rule_allows(tmp_path, bounds):
    source = WATCH.replace("least=60.0, most=86400.0, default=3600.0", bounds)
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(ScenarioError, match=r'every: found "0.01 s"; allowed: from 1 s to 24 h'):
        scenario(tmp_path, RULE | {"every": "0.01 s"})
    assert scenario(tmp_path, RULE | {"every": "1 s"}).rules[0].given.every == 1.0


def test_a_time_between_decisions_in_plain_seconds_has_the_same_bound(tmp_path):
    source = WATCH.replace('duration("Time between decisions.", least=60.0', 'number(None, "Seconds.", least=0.0')
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(ScenarioError, match=r"every: found 0.001; allowed: a number from 1 to 86400|from 1 to 86400"):
        scenario(tmp_path, RULE | {"every": 0.001})


@pytest.mark.parametrize("bounds", ["least=0.0, most=0.5", "least=0.0, most=60.0, default=0.001"])
def test_a_rule_that_would_decide_too_often_by_itself_is_refused(tmp_path, bounds):
    source = WATCH.replace("least=60.0, most=86400.0, default=3600.0", bounds)
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    with pytest.raises(ScenarioError, match=r"Watch in .*watch.py decides too often by its setting every; allowed: a"):
        scenario(tmp_path, RULE)


def test_more_decisions_than_a_period_has_room_for_are_refused(tmp_path):
    (tmp_path / "watch.py").write_text(WATCH.replace("least=60.0", "least=1.0"), encoding="utf-8")
    keys = day(8.0, length="400 d", plans={"only": {"rules": [RULE | {"every": "2 s"}]}})
    with pytest.raises(ScenarioError, match=r"rules\[1\] every: found 2 s, 17,280,000 times in the period of 9600 h"):
        scenario_of(tmp_path, stepped_canal(2, 800.0), keys)


def test_a_gate_that_is_none_ends_the_run(tmp_path):
    assert "moves 'G9'; allowed: a gate of the canal" in ending("return 0.1", tmp_path, "\n    gate = 'G9'\n")


def test_a_rule_cannot_end_the_program(tmp_path):
    assert "SystemExit: 7" in ending("raise SystemExit(7)", tmp_path)


def test_decision_times_may_come_in_any_order(tmp_path):
    more = "\n    @classmethod\n    def decision_times(cls, *_):\n        return [7200000, 60000, -5, 60000, 1e15]\n"
    (tmp_path / "watch.py").write_text(WATCH + more, encoding="utf-8")
    run = simulate(scenario(tmp_path, RULE))
    assert ((run.order_time - run.time[0]).values.astype("timedelta64[s]").astype(int)).tolist() == [60, 7200]


def test_what_it_prints_goes_to_the_error_stream(tmp_path, capsys):
    source = f"print('read')\n{WATCH}".replace("done = ", "print('asked'); done = ")
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    simulate(scenario(tmp_path, RULE))
    told = capsys.readouterr()
    assert told.out == ""
    assert told.err.splitlines() == ["read", *["asked"] * 4]


def test_a_setting_may_have_any_name(tmp_path):
    source = WATCH.replace('"times"', '"schema"').replace("given.times", "given.schema")
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    assert simulate(scenario(tmp_path, RULE | {"schema": 1})).sizes["order"] == 1


def test_what_a_rule_does_to_its_settings_ends_with_the_run(tmp_path):
    source = WATCH.replace("done = self", "self.given.times -= 1; done = self")
    (tmp_path / "watch.py").write_text(source, encoding="utf-8")
    twice = scenario(tmp_path, RULE | {"times": 3})
    assert simulate(twice).sizes["order"] == simulate(twice).sizes["order"] > 0


@pytest.mark.parametrize("kind", ["sys:Watch", "a\0b.py:Watch"])
def test_a_module_without_a_file_and_a_file_that_cannot_be(tmp_path, kind):
    with pytest.raises(ScenarioError, match=r"has no class Watch|cannot be read: embedded null"):
        scenario(tmp_path, RULE | {"kind": kind})


@pytest.fixture
def package(tmp_path, monkeypatch):
    folder = tmp_path / "site" / "canal_rules"
    folder.mkdir(parents=True)
    (folder / "__init__.py").write_text("", encoding="utf-8")
    (folder / "night.py").write_text(WATCH, encoding="utf-8")
    monkeypatch.syspath_prepend(folder.parent)


def test_a_class_of_an_installed_package(tmp_path, package):
    run = simulate(scenario(tmp_path, RULE | {"kind": "canal_rules.night:Watch"}))
    assert run.order_source.values.tolist() == ["canal_rules.night:Watch"] * 2


def test_an_entry_point(tmp_path, package, monkeypatch):
    point = EntryPoint("night watch", "canal_rules.night:Watch", registry.ENTRY_POINTS)
    monkeypatch.setattr(registry, "entry_points", lambda group: [point] if group == point.group else [])
    run = simulate(scenario(tmp_path, RULE | {"kind": "night watch"}))
    assert run.order_source.values.tolist() == ["night watch"] * 2


def test_settings_of_the_run_are_kept_with_it(tmp_path):
    (tmp_path / "watch.py").write_text(WATCH, encoding="utf-8")
    rules = json.loads(simulate(scenario(tmp_path, RULE)).attrs["resolved_settings"])["rules"]
    assert rules == [{"kind": "watch.py:Watch", "gate": "G0", "every": 3600.0, "step": 0.02, "times": 2}]


def test_the_example_of_the_developers_page_runs(tmp_path):
    source = DEVELOPERS.read_text(encoding="utf-8").split("```python\n")[1].split("```")[0]
    (tmp_path / "night_watch.py").write_text(source, encoding="utf-8")
    rule = {"kind": "night_watch.py:NightWatch", "gate": "G0", "every": "1 h", "lowest": 9.0}
    run = simulate(scenario(tmp_path, rule))
    changes = run.order_opening_after - run.order_opening_before
    assert changes.values == pytest.approx([-0.02] * 4, abs=1e-6)

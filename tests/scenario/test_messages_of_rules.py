"""Every message for a fault in the rules and stuck leaves of a plan, and what else they bring into the files."""

from datetime import time

import pytest

from toeline.scenario import load_scenario

LINE = 29
"""Of the first rule in day.toml."""

HEAD = "[plans.proposed]\n"
UPSTREAM = 'kind = "hold upstream level", gate = "Upper check"'

CASES = [
    # the rule, key and message
    ('gate = "Upper check"', 'kind: required, but not given; known: "hold upstream level", "hold downstream level", '
     '"hold discharge", "gatekeeper rounds", "hold volume"'),
    ('kind = "hold upstream levels", gate = "Upper check"', 'kind: found "hold upstream levels"; did you mean "hold '
     'upstream level"?; one of your own is written "file.py:ClassName" or "package.module:ClassName"'),
    (f"{UPSTREAM}, bend = 0.02", 'bend: unknown key; did you mean "band"?'),
    ('kind = "hold upstream level"', "gate: required, but not given"),
    ('kind = "hold upstream level", gate = "Uper check"', 'gate: found "Uper check", which is no gate of the canal; '
     'did you mean "Upper check"?'),
    (f"{UPSTREAM}, gain = 0.0", "gain: found 0.0; allowed: above 0, up to 100"),
    (f'{UPSTREAM}, band = "2 kg"', 'band: found "2 kg"; allowed: a finite number in m, or text such as "2.5 m" with '
     "one of the units m, km, cm, mm, ft, in, mi"),
    (f'{UPSTREAM}, every = "1 s"', 'every: found "1 s"; allowed: from 10 s to 24 h'),
    (f"{UPSTREAM}, gain = 0.4, discharge_gain = 3.0", 'discharge_gain: found beside "gain"; allowed: one of the two'),
    (f'{UPSTREAM}, reset = "40 min"', 'reset: not used without "gain" or "discharge_gain": both are found from the '
     "pool"),
    (f'{UPSTREAM}, hours = ["06:00"]', 'hours: found an array of 1; allowed: array of times of day, as ["07:00", '
     '"18:00"], of 2'),
    (f'{UPSTREAM}, hours = ["06:00", "25:00"]', 'hours[2]: found "25:00"; allowed: a time of day such as "06:30"'),
    (f'{UPSTREAM}, feedforward = "waves"', 'feedforward: found "waves"; allowed: "wave", "volume", or a table of '
     "these or durations by pool"),
    (f'{UPSTREAM}, feedforward = {{ "Mil pool" = "20 min" }}', 'feedforward "Mil pool": "Mil pool" is no pool of the '
     'canal; did you mean "Mill pool"?'),
    (f'{UPSTREAM}, target = [["06:00", 21.8], ["05:00", 21.9]]', 'target[2][1]: found "05:00", which is not after the '
     "time before it; times must rise"),
    ('kind = "hold upstream level", gate = "Head gate"', 'gate: found "Head gate", which has no pool above it; '
     "allowed: a gate below a pool"),
    ('kind = "hold downstream level", gate = "Tail gate"', 'gate: found "Tail gate", which has no pool below it; '
     "allowed: a gate above a pool"),
    ('kind = "hold downstream level", gate = "Head gate", where = "below the gate"', 'target: required with where = '
     '"below the gate": the target_level of a pool is at its lower end'),
    ('kind = "hold discharge", gate = "Head gate"', "target: required, but not given"),
    ('kind = "gatekeeper rounds", gate = "Upper check"', 'visits: exactly one of "visits" and "every" is required'),
    ('kind = "hold volume", pool = "Uper pool"', 'pool: found "Uper pool", which is no pool of the canal; did you mean '
     '"Upper pool"?'),
    ('kind = "hold volume", pool = "Upper pool", every = "3 h"', 'within: shorter than "every": an error would be made '
     "good more than once between two decisions"),
    ('kind = "watch.py:Watch", gate = "Upper check"', 'kind: found "watch.py:Watch"; watch.py cannot be read: no such '
     "file or directory"),
    ('kind = "no_such_package:Watch"', 'kind: found "no_such_package:Watch"; no_such_package cannot be loaded: '
     "ModuleNotFoundError: No module named 'no_such_package'"),
]  # fmt: skip


@pytest.mark.parametrize(("rule", "message"), CASES)
def test_message(folder, rule, message):
    folder.replace("day.toml", HEAD, f"{HEAD}rules = [\n  {{ {rule} }},\n]\n")
    key, _, text = message.partition(": ")
    shown = key if key.startswith("[") else f" {key}"
    assert folder.messages() == [f"day.toml:{LINE}: plans proposed rules[1]{shown}: {text}"]


def test_two_rules_for_one_gate_at_one_time(folder):
    rules = f'{{ {UPSTREAM} }},\n{{ kind = "gatekeeper rounds", gate = "Upper check", every = "4 h" }}'
    folder.replace("day.toml", HEAD, f"{HEAD}rules = [\n{rules}\n]\n")
    assert folder.messages() == [
        'day.toml:30: plans proposed rules[2]: "Upper check" already has a rule at these hours; allowed: one, or '
        "several whose hours do not overlap"
    ]


def test_one_gate_by_day_and_by_night(folder):
    day = f'{{ {UPSTREAM}, hours = ["06:00", "20:00"] }}'
    night = f'{{ {UPSTREAM}, hours = ["20:00", "06:00"], band = 0.10 }}'
    folder.replace("day.toml", HEAD, f"{HEAD}rules = [\n{day},\n{night}\n]\n")
    rules = load_scenario("day.toml", plan="proposed").rules
    assert [rule.given.hours for rule in rules] == [(time(6), time(20)), (time(20), time(6))]
    assert [(rule.file, rule.line) for rule in rules] == [("day.toml", 29), ("day.toml", 30)]


def test_settings_are_si_with_their_defaults(folder):
    rule = f'{{ {UPSTREAM}, target = "70.9 ft", every = "10 min", gain = 0.4, reset = "40 min" }}'
    folder.replace("day.toml", HEAD, f"{HEAD}rules = [{rule}]\n")
    given = load_scenario("day.toml", plan="proposed").rules[0].given
    assert given.target.at(0) == pytest.approx(21.61032)
    assert (given.every, given.gain, given.reset, given.band) == (600.0, 0.4, 2400.0, 0.02)
    assert given.discharge_gain is given.feedforward is given.hours is None


@pytest.mark.parametrize(
    ("stuck", "message"),
    [
        ('gate = "Uper check", from = "06:00", until = "07:00"',
         'gate: found "Uper check", which is no gate of the canal; did you mean "Upper check"?'),
        ('gate = "Upper check", from = "07:00", until = "06:00"',
         "until: found a time that is not after from; allowed: a later one"),
    ],
)  # fmt: skip
def test_message_of_a_stuck_leaf(folder, stuck, message):
    folder.replace("day.toml", HEAD, f"{HEAD}stuck = [{{ {stuck} }}]\n")
    assert folder.messages() == [f"day.toml:28: plans proposed stuck[1] {message}"]


def test_openings_rounded_to_marks_that_no_gate_has(folder):
    folder.replace("day.toml", 'title = "A day for the tests"\n', 'title = "A day"\nround_openings = "scale marks"\n')
    assert folder.messages() == [
        'day.toml:3: round_openings: found "scale marks", but no gate of the canal has "scale_mark"'
    ]


def test_a_largest_move_below_the_smallest(folder):
    limits = "smallest_move = 0.02\nlargest_move = 0.01\n"
    folder.replace("canal.toml", 'name = "Head gate"\n', f'name = "Head gate"\n{limits}')
    assert folder.messages() == [
        'canal.toml:46: gates[1] "Head gate" largest_move: found 0.01 m; allowed: not below the smallest_move, 0.02 m'
    ]

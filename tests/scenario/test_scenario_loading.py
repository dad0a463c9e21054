"""What a loaded scenario holds: plans, orders, places, digest, overrides, units."""

from datetime import timedelta

import pytest

from toeline.errors import Fault, ScenarioError, UsageError
from toeline.scenario import Order, load_canal, load_scenario, plan_names
from toeline.units import Display, UnitSystem

HOUR = 3_600_000
FOOT = 0.3048


def loaded(plan="proposed", overrides=()):
    return load_scenario("day.toml", plan=plan, overrides=overrides)


def usage_error(**arguments):
    with pytest.raises(UsageError) as raised:
        load_scenario("day.toml", **arguments)
    assert not isinstance(raised.value, ScenarioError)
    return str(raised.value)


def test_orders_are_in_si_with_their_places(folder):
    assert loaded().orders == (
        Order(round(6.5 * HOUR), "Head gate", "discharge", 9.0, "day.toml", 29),
        Order(round(7.25 * HOUR), "Upper check", "by", 0.1, "day.toml", 30),
        Order(9 * HOUR, "Tail gate", "opening", 0.8, "day.toml", 31),
    )


def test_orders_of_a_csv_file_are_the_same_with_places_in_that_file(folder):
    in_day, in_csv = loaded("proposed").orders, loaded("from_file").orders

    assert [(o.at, o.gate, o.kind, o.value) for o in in_csv] == [(o.at, o.gate, o.kind, o.value) for o in in_day]
    assert [(o.file, o.line) for o in in_csv] == [("orders.csv", 3), ("orders.csv", 5), ("orders.csv", 6)]


def test_orders_come_by_time_however_they_are_listed(folder):
    folder.replace("day.toml", 'at = "06:30"', 'at = "23:00"')

    assert [order.gate for order in loaded().orders] == ["Upper check", "Tail gate", "Head gate"]


def test_plan_names(folder):
    assert plan_names("day.toml") == ("proposed", "from_file")


def test_several_plans_need_a_choice(folder):
    assert usage_error() == 'day.toml: the day has several plans; name one of "proposed", "from_file"'


def test_a_plan_that_is_not_there(folder):
    assert usage_error(plan="propose") == 'day.toml: there is no plan "propose"; did you mean "proposed"?'


def test_the_only_plan_runs_unnamed(folder):
    folder.replace("day.toml", '[plans.from_file]\norders = "orders.csv"\n', "")

    assert load_scenario("day.toml").plan == "proposed"


def test_a_day_without_plans_has_no_orders(us_folder):
    scenario = load_scenario("day.toml")

    assert (scenario.plan, scenario.orders, plan_names("day.toml")) == (None, (), ())
    assert usage_error(plan="proposed") == 'day.toml: there is no plan "proposed"; there is none here'


def test_files_are_kept_verbatim(folder, tmp_path):
    scenario = loaded()

    assert scenario.canal_text == (tmp_path / "canal.toml").read_text(encoding="utf-8")
    assert (str(scenario.canal_path), str(scenario.day_path)) == ("canal.toml", "day.toml")
    assert scenario.day_text == (tmp_path / "day.toml").read_text(encoding="utf-8")


@pytest.mark.parametrize(
    ("path", "file", "fault"),
    [
        (("pools", 0, "stretches", 1), "canal", ("canal.toml", 29, 'pools[1] "Upper pool" stretches[2]')),
        (("pools", 1, "point_losses"), "canal", ("canal.toml", 34, 'pools[2] "Mill pool" point_losses')),
        (("sections", "basin"), "canal", ("canal.toml", 4, "sections basin")),
        (("deliveries", "North lateral"), "day", ("day.toml", 13, 'deliveries "North lateral"')),
        ((), "canal", ("canal.toml", None, "")),
    ],
)
def test_a_fault_names_file_line_and_key(folder, path, file, fault):
    assert loaded().fault("wrong", *path, file=file) == Fault(*fault, "wrong")


def test_a_canal_file_locates_its_keys(folder):
    canal_file = load_canal("canal.toml")

    assert canal_file.locate("gates", 1, "kind") == 56
    assert canal_file.fault("wrong", "gates", 1) == Fault("canal.toml", 52, 'gates[2] "Upper check"', "wrong")
    assert canal_file.units is UnitSystem.metric
    assert (str(canal_file.path), canal_file.text[:6]) == ("canal.toml", "name =")


@pytest.mark.parametrize(
    ("override", "found"),
    [
        ('period.length="36 h"', lambda day: day.period.length_ms == 36 * HOUR),
        ("period.spacing = 50", lambda day: day.period.spacing == 50.0),
        ('deliveries."North lateral"=0.7', lambda day: day.deliveries["North lateral"].at(0) == 0.7),
        ('head={values=[["00:00", 22.0]]}', lambda day: day.head.at(0) == 22.0),
        ('title="a = b"', lambda day: day.title == "a = b"),
    ],
)
def test_an_override_sets_a_key_of_the_day_file_anew(folder, override, found):
    assert found(loaded(overrides=[override]).day)


def test_of_two_overrides_of_one_key_the_later_counts(folder):
    assert loaded(overrides=["period.spacing=50", "period.spacing=25"]).day.period.spacing == 25.0


@pytest.mark.parametrize(
    ("override", "message"),
    [
        ("period.spacing=0", "--set period.spacing=0: period spacing: found 0; allowed: from 1 m to 1000 m"),
        ("periods.spacing=9", '--set periods.spacing=9: periods: unknown key; did you mean "period"?'),
        (
            "plans.proposed.orders=[{at='25:00',gate='Head gate',by=1}]",
            "--set plans.proposed.orders=[{at='25:00',gate='Head gate',by=1}]: plans proposed orders[1] at: "
            'found "25:00"; a time of the first day goes from "00:00" to "24:00"; allowed after that: "+30 h" (from '
            "the start) or date and time (ISO 8601)",
        ),
    ],
)
def test_a_fault_in_an_override_names_it_in_place_of_the_file(folder, override, message):
    with pytest.raises(ScenarioError) as raised:
        loaded(overrides=[override])

    assert str(raised.value) == message


EXAMPLE = "as in 'period.length=\"6 h\"'"


@pytest.mark.parametrize(
    ("override", "message"),
    [
        ("period", '--set period: found no "="; allowed: key=value, such as \'period.length="6 h"\''),
        ("a=1\nb = 2", f"--set a=1\nb = 2: found the value 1\nb = 2; allowed: one TOML value, {EXAMPLE}"),
        (
            "North lateral=1",
            '--set North lateral=1: found the key "North lateral"; allowed: dotted keys; quote one with blanks, '
            f"{EXAMPLE}",
        ),
        ("=1", f'--set =1: found the key ""; allowed: dotted keys; quote one with blanks, {EXAMPLE}'),
        ("title.x=1", '--set title.x=1: "title" is no table in the file, so nothing can be set inside it'),
    ],
)
def test_what_is_no_key_and_value_is_refused(folder, override, message):
    assert usage_error(plan="proposed", overrides=[override]) == message


def test_text_needs_no_quotes_in_an_override(folder):
    scenario = loaded(overrides=["period.length=6 h", "title=A short morning"])
    assert scenario.day.period.length_ms == 6 * 3_600_000
    assert scenario.day.title == "A short morning"


def test_the_digest_is_the_same_for_the_same_inputs(folder):
    assert loaded().input_hash == loaded().input_hash
    assert len(loaded().input_hash) == 64


@pytest.mark.parametrize(
    ("file", "old", "new"),
    [
        ("canal.toml", "roughness = 0.014", "roughness = 0.015"),
        ("day.toml", "inflow = 8.0", "inflow = 8.1"),
        ("orders.csv", "9.0", "9.1"),
    ],
)
def test_the_digest_changes_with_every_file(folder, file, old, new):
    before = loaded().input_hash

    folder.replace(file, old, new)

    assert loaded().input_hash != before


def test_the_digest_changes_with_plan_overrides_and_start_file(folder, tmp_path):
    digests = [loaded().input_hash, loaded("from_file").input_hash, loaded(overrides=["period.spacing=50"]).input_hash]
    folder.replace("day.toml", 'state = "steady"\nopenings = "to hold targets"\ninflow = 8.0', 'file = "last.nc"')
    for content in (b"one", b"two"):
        (tmp_path / "last.nc").write_bytes(content)
        digests.append(loaded().input_hash)

    assert len(set(digests)) == 5


def test_a_start_from_a_file(folder, tmp_path):
    (tmp_path / "last.nc").write_bytes(b"")
    folder.replace("day.toml", 'state = "steady"\nopenings = "to hold targets"\ninflow = 8.0', 'file = "last.nc"')

    scenario = loaded()

    assert (scenario.start_file, scenario.day.start.openings) == (tmp_path.relative_to(tmp_path) / "last.nc", None)


def test_a_dry_start_has_its_gates_closed(folder):
    folder.replace("day.toml", 'state = "steady"\nopenings = "to hold targets"\ninflow = 8.0', 'state = "dry"')

    assert loaded().day.start.openings == {}


def test_us_customary_values_are_si_inside(us_folder):
    canal = load_scenario("day.toml").canal
    gate, weir = canal.gates[0], canal.offtakes[0]

    assert canal.pools[0].bed_level == pytest.approx(500.0 * FOOT)
    assert canal.surfaces["lining"].velocity_limit == pytest.approx(8.0 * FOOT)
    assert (gate.bay_width, gate.hoist_speed) == (pytest.approx(8.0 * FOOT), pytest.approx(0.5 * FOOT / 60))
    assert gate.leakage == pytest.approx(FOOT**3)
    assert (gate.leaf_weir_coefficient, weir.coefficient) == (pytest.approx(3.0 * FOOT**0.5),) * 2
    assert weir.chainage == pytest.approx(804.672)
    assert canal.tail.rating[1] == (pytest.approx(500.0 * FOOT), pytest.approx(150.0 * FOOT**3))


def test_a_us_customary_day_reads_and_shows_feet(us_folder):
    scenario = load_scenario("day.toml")

    assert scenario.day.inflow.values.tolist() == pytest.approx([100 * FOOT**3, 3.0, 120.5 * FOOT**3])
    assert scenario.display == Display(UnitSystem.us_customary)


def test_messages_are_in_the_units_of_the_file(us_folder):
    us_folder.replace("canal.toml", "sill_level = 499.5", "sill_level = 498.5")

    assert us_folder.messages(plan=None) == [
        'canal.toml:26: gates[1] "End gate" sill_level: found 498.5 ft; allowed: not below the bed at the end of the '
        "pool above, 499 ft"
    ]


def test_a_metric_day_on_a_us_customary_canal(us_folder):
    us_folder.replace("day.toml", 'title = "A day in feet"', 'title = "A day in metres"\nunits = "metric"')

    scenario = load_scenario("day.toml")

    assert scenario.day.inflow.at(0) == 100.0
    assert scenario.canal.pools[0].bed_level == pytest.approx(152.4)


def test_a_zone_makes_the_clock_follow_it(us_folder):
    us_folder.replace(
        "day.toml",
        "[period]\nstart = 2031-05-04T00:00:00-07:00",
        ('zone = "Europe/Berlin"\n[period]\nstart = 2025-03-30T00:00:00'),
    )

    scenario = load_scenario("day.toml")

    assert scenario.day.period.start.utcoffset() == timedelta(hours=1)
    assert scenario.day.inflow.times.tolist() == [0, 5 * HOUR, 11 * HOUR]

"""Files that are not there, are no text, or are no TOML; and faults of several files at once."""

import errno
from pathlib import Path

import pytest

from toeline.errors import ScenarioError
from toeline.scenario import load_canal, load_scenario, plan_names


def message_of(load, path):
    with pytest.raises(ScenarioError) as raised:
        load(path)
    return str(raised.value)


@pytest.mark.parametrize("load", [load_canal, load_scenario, plan_names])
def test_a_missing_file(load, folder):
    assert message_of(load, "nowhere.toml") == "nowhere.toml: there is no such file"


def test_a_folder_in_place_of_a_file(folder, tmp_path):
    (tmp_path / "folder.toml").mkdir()

    assert message_of(load_canal, "folder.toml") == "folder.toml: this is a folder; a text file is needed"


def test_a_file_that_may_not_be_read(folder, monkeypatch):
    def refuse(path):
        raise PermissionError(errno.EACCES, "Permission denied")

    monkeypatch.setattr(Path, "read_bytes", refuse)

    assert message_of(load_canal, "canal.toml") == "canal.toml: the file cannot be read: permission denied"


def test_a_path_through_a_file(folder):
    assert message_of(load_canal, "canal.toml/canal.toml") == (
        "canal.toml/canal.toml: the file cannot be read: not a directory"
    )


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"", "canal.toml: the file is empty"),
        (b" \n\t\n", "canal.toml: the file is empty"),
        (b'name = "x"\n# caf\xe9\n', "canal.toml:2: byte 0xe9 is not UTF-8; save the file as UTF-8 text"),
        ('name = "x"'.encode("utf-16"), "canal.toml:1: byte 0xff is not UTF-8; save the file as UTF-8 text"),
        (b"a = " + b"[" * 5000, "canal.toml: arrays and tables are nested too deeply"),
    ],
)
def test_a_file_that_is_no_toml(folder, tmp_path, content, message):
    (tmp_path / "canal.toml").write_bytes(content)

    assert message_of(load_canal, "canal.toml") == message


@pytest.mark.parametrize(
    ("content", "line"),
    [
        ('name = "x', 1),
        ('name = "x"\nunits = \n', 2),
        ('name = "x"\nunits : "metric"\n', 2),
        ("[tail\nlevel = 1\n", 1),
        ("a = 1\n# comment\na = 2\n", 3),
        ("pools = [\n1,\n", 2),
    ],
)
def test_a_fault_of_toml_has_its_line(folder, tmp_path, content, line):
    (tmp_path / "canal.toml").write_text(content, encoding="utf-8")

    assert message_of(load_canal, "canal.toml").startswith(f"canal.toml:{line}: not valid TOML: ")


def test_a_number_of_too_many_digits(folder, tmp_path):
    (tmp_path / "canal.toml").write_text(f"a = {'1' * 5000}", encoding="utf-8")

    assert message_of(load_canal, "canal.toml").startswith("canal.toml: not valid TOML: ")


def test_a_byte_order_mark_and_carriage_returns_do_not_matter(folder, tmp_path):
    for path in (tmp_path / "canal.toml", tmp_path / "day.toml", tmp_path / "orders.csv"):
        text = path.read_text(encoding="utf-8")
        path.write_bytes(b"\xef\xbb\xbf" + text.replace("\n", "\r\n").encode())

    scenario = load_scenario("day.toml", plan="from_file")

    assert [order.line for order in scenario.orders] == [3, 5, 6]
    assert scenario.fault("", "pools", 1, "bed_level").line == 36


def test_faults_of_all_files_come_at_once(folder):
    folder.replace("canal.toml", "roughness = 0.014", "roughness = 14")
    folder.replace("canal.toml", "bay_width = 3.0", "bay_widht = 3.0")
    folder.replace("day.toml", 'length = "24 h"', 'length = "24 h"\nspacing = 0')
    folder.replace("day.toml", "inflow = 8.0", "inflow = -8.0")

    assert folder.messages() == [
        "canal.toml:7: sections basin roughness: found 14; allowed: from 0.005 to 0.3",
        'canal.toml:68: gates[3] "Tail gate" bay_width: required, but not given',
        'canal.toml:73: gates[3] "Tail gate" bay_widht: unknown key; did you mean "bay_width"?',
        "day.toml:7: period spacing: found 0; allowed: from 1 m to 1000 m",
        "day.toml:26: start inflow: found -8.0; allowed: from 0 m3/s to 10000 m3/s",
    ]


def test_faults_of_every_plan_and_csv_file_come_at_once(folder):
    folder.replace("day.toml", 'gate = "Tail gate"', 'gate = "Tale gate"')
    folder.replace("orders.csv", "Upper check", "Uper check")

    assert folder.messages() == [
        'day.toml:31: plans proposed orders[3] gate: found "Tale gate", which is no gate of the canal; '
        'did you mean "Tail gate"?',
        'orders.csv:5: gate: found "Uper check", which is no gate of the canal; did you mean "Upper check"?',
    ]


def test_a_fault_in_the_period_hides_no_other(folder):
    folder.replace("day.toml", 'length = "24 h"', 'length = "a day"')
    folder.replace("day.toml", "discharge = 9.0", "discharge = -9.0")

    assert [message.split(": ")[1] for message in folder.messages()] == [
        "period length",
        "plans proposed orders[1] discharge",
    ]


@pytest.mark.parametrize("key", ["canal", "file"])
def test_a_name_that_no_file_can_have(folder, key):
    name = 300 * "a"
    old = {"canal": 'canal = "canal.toml"', "file": 'state = "steady"\nopenings = "to hold targets"\ninflow = 8.0'}[key]
    folder.replace("day.toml", old, f'{key} = "{name}"')

    assert folder.messages()[0].endswith(f'{key}: found "{57 * "a"}..."; there is no such file')


def test_a_broken_canal_still_gives_the_day_its_units(us_folder):
    us_folder.replace("canal.toml", "roughness = 0.015", "roughness = 15")
    us_folder.replace("day.toml", "spacing = 300.0", "spacing = 3000.0")

    assert us_folder.messages(plan=None) == [
        "canal.toml:8: sections canal roughness: found 15; allowed: from 0.005 to 0.3"
    ]


def test_a_canal_file_elsewhere_is_found_from_the_folder_of_the_day(folder, tmp_path):
    (tmp_path / "days").mkdir()
    (tmp_path / "day.toml").rename("days/day.toml")
    (tmp_path / "orders.csv").rename("days/orders.csv")
    folder.replace("days/day.toml", '"canal.toml"', '"../canal.toml"')

    assert load_scenario("days/day.toml", plan="proposed").canal_path == Path("days/../canal.toml")

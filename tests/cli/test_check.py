"""`toeline check`."""


def test_a_canal_is_told_in_one_line(folder, call):
    result = call("check", "canal.toml")
    assert result.exit_code == 0
    assert result.stdout == (
        "canal.toml: canal Alder branch, 1435.00 m long: 2 pools, 2 gates, 1 offtake; plain numbers are metric. "
        "No faults found.\n"
    )


def test_a_day_is_told_with_its_plans(folder, call):
    result = call("check", "day.toml")
    assert result.stdout == (
        "day.toml: day A short morning on Alder branch, 1 h from 2031-05-04 06:00: plan hold, 0 orders; "
        "plan raise, 1 order. No faults found.\n"
    )


def test_all_faults_of_both_files_are_listed_with_their_lines(folder, call):
    canal, day = folder / "canal.toml", folder / "day.toml"
    canal.write_text(canal.read_text().replace("max_opening = 1.2", "max_openin = 1.2", 1))
    day.write_text(day.read_text().replace('length = "1 h"', 'length = "1 hour"'))
    result = call("check", "day.toml")
    assert result.exit_code == 2
    assert result.stdout == ""
    assert 'canal.toml:45: gates[1] "Middle check" max_openin: unknown key; did you mean' in result.stderr
    assert "day.toml:6: period length: found" in result.stderr
    assert "faults in the input; nothing was run." in result.stderr


def test_what_is_no_toml_says_where(folder, call):
    (folder / "day.toml").write_text("title = \n")
    result = call("check", "day.toml")
    assert result.exit_code == 2
    assert "day.toml:1:" in result.stderr


def test_a_file_that_is_not_there_is_wrong_use(folder, call):
    result = call("check", "dya.toml")
    assert result.exit_code == 2
    assert "dya.toml" in result.stderr


def test_rules_are_counted_and_code_of_ones_own_is_named(folder, call):
    rule = (
        "from toeline.rules import EVERY, Rule, place\n"
        "class Idle(Rule):\n"
        "    settings = {'every': EVERY, 'gate': place('gate', 'Its gate.')}\n"
        "    def decide(self, now):\n"
        "        return None\n"
    )
    (folder / "idle.py").write_text(rule)
    day = folder / "day.toml"
    entry = 'rules = [{ kind = "idle.py:Idle", every = "1 h", gate = "Last check" }]\norders = []'
    day.write_text(day.read_text().replace("orders = []", entry))
    result = call("check", "day.toml")
    assert "plan hold, 0 orders, 1 rule; plan raise, 1 order; rules of your own were run from idle.py" in result.stdout


def test_a_dead_band_that_a_move_steps_over_is_told_by_check_and_by_run(folder, call):
    canal, day = folder / "canal.toml", folder / "day.toml"
    canal.write_text(canal.read_text().replace("sill_level = 49.10", "sill_level = 49.10\nsmallest_move = 0.02"))
    rule = 'rules = [{ kind = "hold upstream level", gate = "Last check" }]'
    day.write_text(day.read_text().replace("orders = []", f"{rule}\norders = []"))
    checked, run = call("check", "day.toml"), call("run", "day.toml")
    line, caution = checked.stdout.splitlines()
    assert (checked.exit_code, run.exit_code) == (0, 0)
    assert line.endswith("No faults found.")
    assert caution.startswith("Caution: day.toml:19: plans hold rules[1] band: found 0.02 m; a smallest move of Last c")
    assert run.stderr.splitlines() == [caution]


def test_a_start_that_cannot_be_is_told_as_by_run(folder, call):
    day = folder / "day.toml"
    day.write_text(day.read_text().replace('values = [["06:00", 3.0]]', 'values = [["06:00", 300.0]]'))
    results = [call(name, "day.toml") for name in ("check", "run")]
    assert [(result.exit_code, result.stdout) for result in results] == [(2, "")] * 2
    assert "day.toml:15: start: no calm steady flow" in results[0].stderr
    assert results[0].stderr == results[1].stderr


def test_a_steep_pool_is_told_as_by_run(folder, call):
    canal = folder / "canal.toml"
    smooth = canal.read_text().replace("roughness = 0.020", "roughness = 0.005")
    canal.write_text(smooth.replace("slope = 0.0002 },\n]\n\n[[pools]]", "slope = 0.001 },\n]\n\n[[pools]]").replace(
        "sill_level = 49.84", "sill_level = 49.70"
    ).replace("bed_level = 49.20", "bed_level = 48.90"))  # fmt: skip
    result = call("check", "day.toml")
    assert result.exit_code == 2
    assert "steep pools are not computed" in result.stderr
    assert result.stderr == call("run", "day.toml").stderr


def test_a_file_of_results_is_no_day(folder, call):
    (folder / "day.nc").write_bytes(b"\x89HDF\r\n\x1a\n")
    for command in ("check", "run", "verify"):
        result = call(command, "day.nc")
        assert (result.exit_code, result.stdout) == (2, "")
        assert "day.nc is a file of results: name the day file" in result.stderr


def test_a_byte_order_mark_and_the_line_ends_of_other_systems_change_nothing(folder, call):
    for name in ("canal.toml", "day.toml"):
        before = call("check", name).stdout
        text = (folder / name).read_bytes()
        (folder / name).write_bytes(b"\xef\xbb\xbf" + text.replace(b"\n", b"\r\n"))
        result = call("check", name)
        assert (result.exit_code, result.stdout) == (0, before)

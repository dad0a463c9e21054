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
        "from toeline.rules import Rule, place\n"
        "class Idle(Rule):\n"
        "    settings = {'gate': place('gate', 'Its gate.')}\n"
        "    def decide(self, now):\n"
        "        return None\n"
    )
    (folder / "idle.py").write_text(rule)
    day = folder / "day.toml"
    entry = 'rules = [{ kind = "idle.py:Idle", gate = "Last check" }]\norders = []'
    day.write_text(day.read_text().replace("orders = []", entry))
    result = call("check", "day.toml")
    assert "plan hold, 0 orders, 1 rule; plan raise, 1 order; rules of your own were run from idle.py" in result.stdout

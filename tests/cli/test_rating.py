"""`toeline rating`."""

import csv

import pytest

LEVELS = ("--headwater", "51.4", "--tailwater", "49.8,50.6", "--opening", "0.2,0.4")


def test_a_gate_is_rated_at_the_levels_given(folder, call):
    result = call("rating", "canal.toml", "Middle check", *LEVELS)
    assert result.exit_code == 0
    assert result.stdout.startswith("Middle check, Alder branch\n")
    assert "HEADWATER 51.40 m\n" in result.stdout


def test_levels_of_the_canal_are_chosen_where_none_are_given(folder, call):
    result = call("rating", "canal.toml", "Middle check")
    assert result.exit_code == 0
    assert result.stdout.count("HEADWATER") > 1


def test_a_mistyped_gate_names_the_nearest(folder, call):
    result = call("rating", "canal.toml", "Midle check")
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr == 'Error: Alder branch has no gate "Midle check"; did you mean "Middle check"?\n'


def test_the_table_goes_to_a_csv_file_as_well(folder, call):
    assert call("rating", "canal.toml", "Middle check", *LEVELS, "--csv", "rating.csv").exit_code == 0
    with (folder / "rating.csv").open(newline="") as file:
        rows = list(csv.DictReader(file))
    assert [(row["opening [m]"], row["tailwater_level [m]"]) for row in rows] == [
        ("0.2000", "49.8000"),
        ("0.2000", "50.6000"),
        ("0.4000", "49.8000"),
        ("0.4000", "50.6000"),
    ]


def test_a_csv_file_that_stands_is_kept(folder, call):
    (folder / "rating.csv").write_text("mine")
    result = call("rating", "canal.toml", "Middle check", *LEVELS, "--csv", "rating.csv")
    assert (result.exit_code, result.stdout, (folder / "rating.csv").read_text()) == (2, "", "mine")
    assert "--overwrite" in result.stderr


@pytest.mark.parametrize(("value", "reason"), [("4 gallons", "allowed"), ("high", "allowed"), ("", "allowed")])
def test_what_is_no_length_is_refused_by_the_name_of_its_option(folder, call, value, reason):
    result = call("rating", "canal.toml", "Middle check", "--opening", f"0.2,{value}")
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr.startswith("Error: --opening: found ")
    assert reason in result.stderr


def test_lengths_carry_their_own_units_where_given(folder, call):
    result = call("rating", "canal.toml", "Middle check", *LEVELS[:4], "--opening", "20 cm, 0.4")
    assert "\n     0.20  " in result.stdout


def test_an_opening_that_the_gate_has_not_is_refused(folder, call):
    result = call("rating", "canal.toml", "Middle check", "--opening", "0.2,1.3")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "--opening: Middle check opens to 1.2 m, by max_opening of the canal file." in result.stderr


def test_an_opening_below_the_closed_gate_is_refused(folder, call):
    result = call("rating", "canal.toml", "Middle check", "--opening=-0.2")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "from 0" in result.stderr


def test_a_day_file_is_not_taken_for_a_canal(folder, call):
    result = call("rating", "day.toml", "Middle check")
    assert (result.exit_code, result.stderr) == (2, "Error: day.toml is a day file: name the file of its canal.\n")


def test_the_canal_file_is_never_replaced(folder, call):
    before = (folder / "canal.toml").read_text()
    result = call("rating", "canal.toml", "Middle check", "--csv", "canal.toml", "--overwrite")
    assert (result.exit_code, (folder / "canal.toml").read_text()) == (2, before)


@pytest.mark.parametrize(
    ("option", "value", "found"),
    [
        ("--headwater", "1.4", "found 1.4 m"),
        ("--headwater", "-5", "found -5 m"),
        ("--headwater", "49.83", "found 49.83 m"),
        ("--headwater", "51.4 mm", "found 0.0514 m"),
        ("--headwater", "50,4", "found 4 m"),
        ("--headwater", "1e300", "found 1e+300 m"),
    ],
)
def test_a_headwater_at_which_no_water_reaches_the_gate_or_that_is_no_level_is_refused(
    folder, call, option, value, found
):
    result = call("rating", "canal.toml", "Middle check", f"{option}={value}")
    assert (result.exit_code, result.stdout) == (2, "")
    allowed = "allowed: levels above the datum, from the sill of Middle check, 49.84 m, to 99.84 m"
    assert result.stderr == f"Error: {option}: {found}; {allowed}\n"


def test_a_tailwater_below_the_floor_is_refused(folder, call):
    result = call("rating", "canal.toml", "Middle check", *LEVELS[:2], "--tailwater", "0.8,49.5")
    assert (result.exit_code, result.stdout) == (2, "")
    assert (
        "--tailwater: found 0.8 m; allowed: levels above the datum, from the floor below Middle check, "
        in result.stderr
    )


def test_nothing_flows_at_the_sill_and_water_flows_back_where_the_tailwater_is_higher(folder, call):
    result = call(
        "rating", "canal.toml", "Middle check", "--headwater", "49.84", "--tailwater", "49.3,51", "--opening", "0.2"
    )
    assert result.exit_code == 0
    row = result.stdout.splitlines()[5].split()
    assert (row[3], float(row[5]) < 0.0, row[6][0]) == ("0.000", True, "r")


@pytest.mark.parametrize("value", ["nan", "inf", "", ",", "51.4 meter", "51.4m3", "51,4,"])
@pytest.mark.parametrize("option", ["--headwater", "--tailwater", "--opening"])
def test_what_is_no_finite_length_is_refused(folder, call, option, value):
    result = call("rating", "canal.toml", "Middle check", option, value)
    assert (result.exit_code, result.stdout) == (2, "")
    assert f"Error: {option}: found " in result.stderr

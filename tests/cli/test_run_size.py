"""What is said before a run that will be large."""

import pytest

from toeline import load_scenario, simulate
from toeline.cli import run_size
from toeline.results.size import size_before_compression
from toeline.results.variables import growing

LINE = (
    ": up to 61 rows of values and 7 long profiles of some 9 points, 0.0 GB {where}. Ctrl-C stops it; [output] in the "
    "day file says how often values are written.\n"
)


@pytest.fixture
def any_is_large(monkeypatch):
    monkeypatch.setattr(run_size, "LARGE", 1.0)


def test_a_day_is_not_announced(folder, call):
    assert "large" not in call("run", "day.toml").stderr


def test_a_large_run_is_announced_with_its_rows_and_their_size(folder, call, any_is_large):
    told = call("run", "day.toml", "--plan", "hold").stderr
    assert told.startswith("A large run" + LINE.format(where="before they are compressed"))


def test_what_is_compared_is_announced_as_kept_in_a_file_for_a_while(folder, call, any_is_large):
    where = "before they are compressed, in a file that is removed at the end"
    assert call("compare", "day.toml").stderr.startswith("2 large runs, each" + LINE.format(where=where))


def test_what_is_announced_is_what_the_run_has(folder):
    scenario = load_scenario("day.toml", plan="raise", overrides=["period.spacing=20.0"])
    run = simulate(scenario)
    sizes, rows = run_size.sizes_of_run(scenario), run_size.rows_of_run(scenario)
    assert {name: run.sizes[name] for name in rows} == rows
    assert abs(sizes.pop("node") - run.sizes["node"]) <= 6
    assert {name: run.sizes[name] for name in sizes} == sizes
    written = [run[v.name] for dimension in rows for v in growing(dimension)]
    assert size_before_compression(run.sizes, rows) == sum(values.nbytes for values in written)

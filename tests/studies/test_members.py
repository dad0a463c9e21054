"""Runs of a study: all at the same times, whatever the day keeps."""

import pytest
from tests.canals import day, scenario_of, stepped_canal

from toeline.studies.members import sampled, with_changes


@pytest.mark.parametrize("output", [{}, {"every": "10 min", "events_every": "2 min"}], ids=["even", "thinned"])
def test_a_study_of_a_day_has_rows_at_even_times(tmp_path, output):
    scenario = scenario_of(tmp_path, stepped_canal(1, 1000.0), day(8.0, output=output))
    changed = with_changes(scenario, None, *sampled(86_400_000, scenario.day.output.every_ms)).day.output
    assert changed.finest_ms == changed.every_ms == 60_000

"""Runs of a study: the day of a scenario with some of its values set anew."""

from toeline.scenario import Scenario, load_scenario


def with_changes(scenario: Scenario, plan: str | None, *overrides: str) -> Scenario:
    """Read the files of a scenario again, with further values of the day file set anew, as 'period.spacing="50 m"'.

    The same road as `--set`: all checks hold, and settings and hash of inputs are those of the changed day. Raises
    ScenarioError where that is not right in itself.
    """
    earlier = [override.text for override in scenario.day_source.overrides]
    return load_scenario(scenario.day_path, plan=plan, overrides=[*earlier, *overrides])


def sampled(length_ms: int, every_ms: int) -> tuple[str, ...]:
    """Overrides that give a study output often enough to add up discharges, and no more long profiles than needed.

    Evenly, for the runs of a study to have the same times.

    At least 1440 output steps in `length_ms`, as every minute of a day; `every_ms` is the day's own interval.
    """
    every = min(every_ms, max(1000, length_ms // 1440 // 1000 * 1000))
    profiles = min(length_ms, 86_400_000)
    evenly = {"every": every, "events_every": every, "profiles_every": profiles}
    return tuple(f'output.{key}="{interval / 1000:g} s"' for key, interval in evenly.items())

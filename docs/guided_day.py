"""Writes the guided day: docs/guided_day.md and its figures, all numbers in it from runs made here.

python docs/guided_day.py
"""

import sys
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import xarray as xr

import toeline
from toeline.cli.rating_chart import operating_chart
from toeline.findings.incident import Incident
from toeline.findings.incidents import incidents
from toeline.findings.jumps import GateJumps, gate_jumps
from toeline.findings.limit_incidents import limit_uses
from toeline.network.rating import default_rating_levels
from toeline.report.clock import duration_text
from toeline.report.figures import jump_strip, levels, long_profile, plans, tailwater
from toeline.report.figures.files import save
from toeline.report.figures.picture import Picture
from toeline.report.run_clock import RunClock

DOCS = Path(__file__).parent
FOLDER = "guided_day"
DAY = DOCS.parent / "scenarios" / "quillmere" / "morning_increase.toml"
GATE = "Lower check"
DOTS_PER_INCH = 90

PAGE = """\
# A guided day

Written by `python docs/guided_day.py` from runs of `scenarios/quillmere/morning_increase.toml`: a test holds
numbers and figures in step with what the program finds. The canal is invented. What the colours mean is on the
page of the [figures](figures.md).

On this morning the head gate goes from 8 to 12 m³/s, for deliveries that rise until 11:00. The day file has two
ways of doing it. In plan *early* the Lower check is opened at 06:00, to make room in its pool before the water is
there. In plan *with_the_water* it follows in three steps as the water arrives. All other orders are the same.
Which plan goes out?

```
toeline run scenarios/quillmere/morning_increase.toml
toeline figures morning_increase.early.nc morning_increase.with_the_water.nc --to figures
```

## First the plans side by side

![Both plans: both hazards at every gate, margins, levels from target](guided_day/plans.png)

Both hazards stand side by side, because little of one says nothing about the other. In plan *early* the jump
below the Lower check ends beyond the protected floor for {beyond}; in plan *with_the_water* for {beyond_later}. A
drowned roller lies below that check for {roller} and {roller_later}, and below most other gates all day in both
plans: at no hour is any place below a gate safe to enter. The lower panels say why: plan *early* draws the Lower
pool down by {drawdown} and fills the Reedbed pool {rise} over its target.

## Where the jump stood

![Jump strips of all gates of plan early: distance below the gate against time](guided_day/jump_strip.png)

One strip a gate: time to the right, distance from the gate upward, the floor behind. Follow the Lower check.
Until 06:00 the jump stands on the apron. Then the check is opened for water that has not come yet: the jet grows
faster than the tailwater, and the jump runs out to {reach} at {worst_time}, where the protected floor ends at
{floor}. Minutes later the pool below has filled and the roller reaches the gate: from a hazard to the floor to a
hazard to people. The grey strip above it says when waves of a change still travel; places and levels are least
trustworthy then.

## How much was missing

![Tailwater of the lower three gates among its limits, plan early](guided_day/tailwater.png)

A jump stays where the tailwater holds it. For the Lower check the green line is the tailwater there was. Below
the black line (dash and dot) the jump ends beyond the protected floor; above the purple one it is drowned; above
the blue one the flow itself is drowned, and the gate's discharge no longer depends on headwater and opening
alone. At {worst_time} {margin} of tailwater are missing. That is the number to act on: a centimetre of tailwater
moves a toe by a metre. On the right the same path in the plane of discharge and tailwater: it runs to the right,
into the limit, before it rises.

## The canal at that time

![Long profile of plan early at the worst time, and all gates from the side](guided_day/long_profile.png)

Above the whole canal with the range of the day hatched; below every gate from the side at the worst minute. At
the Lower check the jet shoots over apron and riprap before it jumps; at the other gates the roller lies against
the leaf.

## Levels, and the limits of the owner

![Levels of all pools with targets and limits, plan early](guided_day/levels.png)

The same move empties the Lower pool. The narrow panels say how much of the owner's limits on falls is used up in
any window of the run, whenever it begins: {used} of the fall allowed in an hour. The Reedbed pool stands above
its lining in between (the hatched marks at the foot of its panel).

Found in plan *early*:

{found}

Found in plan *with_the_water*: {found_later}

## What the gate can do at all

![Operating chart of the Lower check at three headwaters: opening against tailwater](guided_day/operating_chart.png)

`toeline rating scenarios/quillmere/canal.toml "Lower check" --chart lower_check.png` shows why there was so
little room: between the jump that is drowned and the one beyond the protected floor lies a narrow band of
tailwater. The wider the gate is opened, the more tailwater it needs *first*. So the plan for this check is small
steps behind the water, and plan *with_the_water* goes to the engineer who reviews it: with {margin_later} of
tailwater to spare at the worst, which is little, and with one jump to verify in the field.

> A planning aid from idealised one-dimensional quasi-steady hydraulics; it commands nothing. A qualified
> engineer, where the law asks a licensed one, must review limits and results. Water below gates drowns people:
> no state shown here is safe to enter. A dry canal can fill without warning."""


def runs() -> tuple[xr.Dataset, xr.Dataset]:
    """Both plans of the day, run now."""
    early, later = (toeline.simulate(toeline.load_scenario(DAY, plan=plan)) for plan in ("early", "with_the_water"))
    return early, later


def pictures(early: xr.Dataset, later: xr.Dataset) -> dict[str, Picture]:
    """The figures of the page by the stems of their files."""
    canal = toeline.load_canal(DAY.with_name("canal.toml"))
    levels_of_gate = default_rating_levels(canal, GATE)
    display = toeline.load_scenario(DAY, plan="early").display
    return {
        "plans": next(plans.pictures([early, later], display)),
        "jump_strip": next(jump_strip.pictures(early, display)),
        "tailwater": list(tailwater.pictures(early, display))[-1],
        "long_profile": next(long_profile.pictures(early, display)),
        "levels": next(levels.pictures(early, display)),
        "operating_chart": operating_chart(canal, GATE, *levels_of_gate),
    }


def page(early: xr.Dataset, later: xr.Dataset) -> str:
    """The page, its numbers taken from the runs."""
    jumps, jumps_later = _at_gate(early), _at_gate(later)
    clock, display = RunClock(early), toeline.load_scenario(DAY, plan="early").display
    lowest = early["pool_target_level"] - early["pool_tail_level"].min("time")
    highest = early["pool_tail_level"].max("time") - early["pool_target_level"]
    used = next(use.share for use in limit_uses(early) if use.limit.subject == "fall in 1 h")
    return PAGE.format(
        beyond=_hours(jumps.beyond_protection_hours),
        beyond_later=_hours(jumps_later.beyond_protection_hours),
        roller=_hours(jumps.roller_hours),
        roller_later=_hours(jumps_later.roller_hours),
        drawdown=display.length(float(lowest.sel(pool="Lower pool"))),
        rise=display.length(float(highest.sel(pool="Reedbed pool"))),
        reach=display.length(jumps.jump_end_distance.value),
        worst_time=clock.at(jumps.protection_margin.time),
        floor=display.length(float(early["gate_protection_end"].sel(gate=GATE))),
        margin=display.length(-jumps.protection_margin.value),
        margin_later=display.length(jumps_later.protection_margin.value),
        used=f"{100.0 * (used or np.nan):.0f} %",
        found=_listed(incidents(early), clock),
        found_later=_listed(incidents(later), clock) or "nothing that was looked for, which makes no place safe.",
    )


def _at_gate(run: xr.Dataset) -> GateJumps:
    return next(jumps for jumps in gate_jumps(run) if jumps.gate == GATE)


def _hours(hours: float) -> str:
    return duration_text(hours * 3600.0) if hours else "no time"


def _listed(found: list[Incident], clock: RunClock) -> str:
    return "\n".join(f"- {one.where}: {one.what}, {clock.span(one.start, one.end)}" for one in found)


def write() -> None:
    """Write page and figures, these first into a folder of their own."""
    early, later = runs()
    (DOCS / FOLDER).mkdir(exist_ok=True)
    with TemporaryDirectory(dir=DOCS) as working:
        for stem, picture in pictures(early, later).items():
            save(picture, Path(working) / f"{stem}.png", DOTS_PER_INCH)
            (Path(working) / f"{stem}.png").replace(DOCS / FOLDER / f"{stem}.png")
    (DOCS / "guided_day.md").write_text(page(early, later), encoding="utf-8")


if __name__ == "__main__":
    sys.exit(write())

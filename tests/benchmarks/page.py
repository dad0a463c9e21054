"""Page of the standard day with a long profile every minute: its size, and how fast it is built, opens and moves."""

import subprocess
import sys
import time
from pathlib import Path
from statistics import median

from tests.browser import CHROMIUM, launched, open_page
from tests.canals import scenario_of, standard_day

from toeline import simulate

REPEATS = 5
FRAMES = """async () => {
  const slider = document.getElementById('moment'), frames = 100, began = performance.now();
  for (let frame = 0; frame < frames; frame++) {
    slider.value = 2 * frame;
    slider.dispatchEvent(new Event('input'));
    await new Promise(requestAnimationFrame);
  }
  return 1000 * frames / (performance.now() - began);
}"""


def time_the_page(folder: Path) -> None:
    canal, day = standard_day()
    day["output"] = {"every": "1 min", "profiles_every": "1 min"}
    run, page = folder / "standard.nc", folder / "standard.html"
    sizes = simulate(scenario_of(folder, canal, day), run).sizes
    built = [_build(run, page) for _ in range(REPEATS)]
    print(
        f"page: {sizes['time']} steps, {sizes['profile_time']} profiles, {sizes['gate']} gates, {sizes['node']} nodes"
    )
    print(f"{page.stat().st_size / 1e6:.2f} MB, built in {median(built):.2f} s ({min(built):.2f} to {max(built):.2f})")
    if CHROMIUM is None:
        print("no Chromium to open it in")
        return
    with launched() as browser:
        open_page(browser, page)
        opened, frames = zip(*(_look(browser, page) for _ in range(REPEATS)), strict=True)
    print(f"open in {median(opened):.2f} s ({min(opened):.2f} to {max(opened):.2f})")
    print(f"slider at {median(frames):.0f} frames a second ({min(frames):.0f} to {max(frames):.0f})")


def _build(run: Path, page: Path) -> float:
    began = time.perf_counter()
    command = [sys.executable, "-m", "toeline", "report", str(run), "-o", str(page), "--overwrite"]
    subprocess.run(command, check=True, capture_output=True)
    return time.perf_counter() - began


def _look(browser, page: Path) -> tuple[float, float]:
    """Seconds until the page stands, and frames a second of its slider."""
    began = time.perf_counter()
    window = open_page(browser, page)
    seconds = time.perf_counter() - began
    frames = window.evaluate(FRAMES)
    window.context.close()
    return seconds, frames

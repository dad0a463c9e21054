"""The page as a browser shows it: values read back from it, links, keyboard, print, narrow screens, accessibility."""

import json
from collections.abc import Iterator
from pathlib import Path

import numpy as np
import pytest
import xarray as xr
from tests.browser import CHROMIUM, launched, move_to, open_page

from toeline import load_scenario, simulate
from toeline.report.page.document import report_page

DAY = Path(__file__).parents[2] / "scenarios" / "quillmere" / "morning_increase.toml"
GATE = "Lower check"

pytestmark = pytest.mark.skipif(
    CHROMIUM is None, reason="no Chromium on this machine; DEVELOPERS.md says how to get one"
)


@pytest.fixture(scope="module")
def plans() -> dict[str, xr.Dataset]:
    return {plan: simulate(load_scenario(DAY, plan=plan)) for plan in ("early", "with_the_water")}


@pytest.fixture(scope="module")
def early(plans) -> xr.Dataset:
    return plans["early"]


@pytest.fixture(scope="module")
def files(plans, tmp_path_factory) -> dict[str, Path]:
    """The page of one plan, and that of both."""
    folder = tmp_path_factory.mktemp("pages")
    pages = {"one": {"early": plans["early"]}, "both": plans}
    for name, runs in pages.items():
        (folder / f"{name}.html").write_text(report_page(runs), encoding="utf-8")
    return {name: folder / f"{name}.html" for name in pages}


@pytest.fixture(scope="module")
def browser() -> Iterator:
    with launched() as chromium:
        yield chromium


@pytest.fixture(scope="module")
def page(browser, files):
    """The page of one plan; every test moves it first to where it needs it."""
    return open_page(browser, files["one"])


@pytest.fixture(scope="module")
def both(browser, files):
    """The page of both plans."""
    return open_page(browser, files["both"])


@pytest.fixture(scope="module")
def narrow(browser, files) -> dict:
    """Both pages on the screen of a phone."""
    return {name: open_page(browser, file, 380) for name, file in files.items()}


def column(page, source: str, name: str) -> np.ndarray:
    """A column that the page draws, as the browser holds it; what is no number is null there."""
    text = page.evaluate(
        "([source, name]) => JSON.stringify(Array.from(Bokeh.documents[0].get_model_by_name(source).data[name]))",
        [source, name],
    )
    return np.array([np.nan if value is None else value for value in json.loads(text)], dtype=np.float64)


def moments(run: xr.Dataset) -> dict[str, int]:
    """Labels of the slider's moments that are those of long profiles, by their row."""
    return {str(time)[11:16]: row for row, time in enumerate(run["profile_time"].values + np.timedelta64(2, "h"))}


def label(page) -> str:
    return page.locator("#clock").inner_text()


def row_of_table(page, gate: str) -> list[str]:
    return page.locator("table.now tbody tr", has_text=gate).first.locator("td").all_inner_texts()


def test_nothing_is_wrong_and_nothing_leaves_the_page(page, files):
    for moment in (0, 50, 140):
        move_to(page, moment)
    page.select_option("#gate", label="Mill check")
    assert page.told == []
    assert page.asked == [files["one"].as_uri()]


def test_the_slider_moves_the_water_line_to_the_levels_of_the_file(page, early):
    rows = moments(early)
    for moment in (10, 39, 90):
        move_to(page, moment)
        levels = early["water_level"].values[rows[label(page)]]
        assert np.array_equal(column(page, "water_0", "water_level"), levels.astype(np.float32))


def test_the_numbers_of_the_gates_are_those_of_the_file_at_that_time(page, early):
    move_to(page, 39)
    hours, minutes = map(int, label(page).split(":"))
    here = early.sel(gate=GATE).isel(time=60 * hours + minutes)
    shown = row_of_table(page, GATE)
    names = ("gate_opening", "gate_discharge", "gate_headwater_level", "gate_tailwater_level", "jump_toe_distance",
             "jump_end_distance", "protection_margin")  # fmt: skip
    decimals = (2, 3, 2, 2, 2, 2, 2)
    assert shown[2:] == [f"{float(here[name]):.{places}f}" for name, places in zip(names, decimals, strict=True)]


def test_the_traces_hold_every_output_step_of_the_file(page, early):
    gate = early.sel(gate=GATE)
    page.select_option("#gate", label=GATE)
    for name, variable in (
        ("end", "jump_end_distance"),
        ("tailwater", "gate_tailwater_level"),
        ("opening", "gate_opening"),
    ):
        assert np.array_equal(column(page, "series_0", name), gate[variable].values.astype(np.float32), equal_nan=True)


def test_an_incident_leads_to_its_time_and_gate(page):
    move_to(page, 0)
    page.select_option("#gate", label="Head gate")
    page.locator("nav a", has_text="Incidents").click()
    page.locator("table.incidents tr", has_text="jump beyond protection").locator("a").click()
    assert label(page) == "06:07"
    assert page.locator(".gate-name").first.inner_text() == GATE
    assert row_of_table(page, GATE)[0] == "beyond protection"
    assert "It ends 30.43 m from the gate; the floor is protected to 23.00 m" in page.locator(".telling").inner_text()


def test_slider_and_play_work_by_keyboard_and_focus_is_seen(page):
    page.locator("#moment").focus()
    page.keyboard.press("Home")
    page.keyboard.press("ArrowRight")
    assert label(page) == "00:10"
    assert page.evaluate("getComputedStyle(document.getElementById('moment')).outlineStyle") == "solid"
    page.locator("#play").focus()
    page.keyboard.press("Space")
    page.wait_for_function("document.getElementById('clock').textContent >= '00:30'")
    page.keyboard.press("Space")
    assert page.locator("#play").get_attribute("aria-pressed") == "false"


def test_an_incident_can_be_reached_and_followed_by_keyboard(page):
    move_to(page, 0)
    page.locator("#verdict ol a").first.focus()
    page.keyboard.press("Enter")
    assert label(page) == "06:07"


def open_folds(page, where: str = "") -> int:
    return page.locator(f"{where} details.folded[open]").count()


def test_long_tables_are_folded_under_a_line_that_says_what_is_inside(browser, files):
    page = open_page(browser, files["one"])
    assert open_folds(page) == 0
    assert page.locator("#orders summary").inner_text() == "plan early: 21 orders, by time, and what became of them"
    assert page.locator("#numbers summary").first.inner_text() == "Least margins: 6 rows"
    assert not page.locator("#numbers table").first.is_visible()


def test_a_folded_table_opens_by_keyboard_and_all_by_a_button(browser, files):
    page = open_page(browser, files["one"])
    page.locator("#numbers summary").first.focus()
    page.keyboard.press("Enter")
    assert page.locator("#numbers table").first.is_visible()
    page.locator("#unfold").focus()
    page.keyboard.press("Enter")
    assert open_folds(page, "#numbers") == page.locator("#numbers details").count() > 10
    page.keyboard.press("Enter")
    assert (open_folds(page), page.locator("#unfold").inner_text()) == (0, "Unfold all tables")


def test_a_link_to_a_folded_table_opens_it(browser, files):
    page = open_page(browser, files["one"])
    page.locator("nav a", has_text="Orders").click()
    assert page.locator("#orders table").is_visible()
    assert open_folds(page) == 1


def test_short_tables_are_printed_though_they_are_folded(browser, files):
    page = open_page(browser, files["one"])
    page.locator("#numbers summary").first.click()
    page.evaluate("document.querySelector('#orders details').classList.remove('short')")
    page.evaluate("dispatchEvent(new Event('beforeprint'))")
    page.emulate_media(media="print")
    assert open_folds(page) == page.locator("details.folded").count() - 1
    assert page.locator("#numbers table").last.is_visible()
    after = page.evaluate("getComputedStyle(document.querySelector('#orders summary'), '::after').content")
    assert after == '" (folded, not printed)"'
    page.evaluate("dispatchEvent(new Event('afterprint'))")
    assert open_folds(page) == 1


def test_where_less_motion_is_wanted_play_steps_once_a_second(browser, files):
    page = open_page(browser, files["one"], reduced_motion="reduce")
    move_to(page, 0)
    page.locator("#play").click()
    page.wait_for_timeout(700)
    assert label(page) == "00:10"


def test_it_prints_with_pictures_of_its_figures_and_without_controls(browser, files):
    page = open_page(browser, files["one"])
    assert page.pdf(format="A4").startswith(b"%PDF")
    page.emulate_media(media="print")
    pictures = page.locator("img.printed")
    assert pictures.count() == page.locator(".plot").count() == 6
    assert pictures.evaluate_all("all => all.every(each => each.naturalWidth > 300 && each.alt)")
    assert not page.locator(".controls").is_visible()


@pytest.mark.parametrize("name", ["one", "both"])
def test_at_380_pixels_nothing_is_wider_than_the_screen(narrow, name):
    page = narrow[name]
    assert page.evaluate("document.documentElement.scrollWidth") == 380
    box = page.locator("#moment").bounding_box()
    assert box["width"] > 250
    assert page.locator("#play").bounding_box()["height"] >= 24


@pytest.mark.parametrize("folds", ["folded", "unfolded"])
@pytest.mark.parametrize("name", ["one", "both"])
def test_an_accessibility_checker_finds_no_serious_fault(narrow, name, folds):
    from axe_playwright_python.sync_playwright import Axe

    narrow[name].evaluate(
        "isOpen => document.querySelectorAll('details').forEach(each => { each.open = isOpen; })", folds == "unfolded"
    )
    faults = Axe().run(narrow[name]).response["violations"]
    assert [
        (fault["id"], fault["nodes"][0]["html"]) for fault in faults if fault["impact"] in ("serious", "critical")
    ] == []


def test_plans_side_by_side_move_together(both, plans):
    rows = moments(plans["early"])
    move_to(both, 60)
    for place, run in enumerate(plans.values()):
        levels = run["water_level"].values[rows[label(both)]]
        assert np.array_equal(column(both, f"water_{place}", "water_level"), levels.astype(np.float32))
    assert "Lower check: jump beyond protection, none instead of 7 min" in both.locator(".differences").inner_text()

"""A file of results on a page."""

from toeline.report.describe import run_page


def test_the_page_says_what_the_run_says_and_what_the_file_holds(invented_run):
    page = " ".join(run_page(invented_run()).split())
    assert page.startswith(
        "Alder branch: A short morning plan raise; Sunday 2031-05-04, 06:00 to 10:00 (4 h), UTC+02:00"
    )
    assert "WHAT GOES WRONG" in page
    assert "49 output steps, 5 long profiles of 4 nodes" in page
    assert "0" * 64 in page


def test_the_page_is_in_the_units_of_the_day(invented_run):
    page = run_page(invented_run(attributes={"units_for_display": "us customary"}))
    assert "0.98 ft at 06:00" in page

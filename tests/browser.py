"""A browser to look at pages with: Chromium where this machine has one."""

import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
_OPTIONS = (
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
)  # fmt: skip


@contextmanager
def launched() -> Iterator:
    """A browser without a screen, which asks nothing of a network by itself."""
    from playwright.sync_api import sync_playwright

    with sync_playwright() as playwright:
        chromium = playwright.chromium.launch(executable_path=CHROMIUM, args=list(_OPTIONS))
        yield chromium
        chromium.close()


def open_page(browser, file: Path, width: int = 1280, **options):
    """Open a page in a window of its own; `told` gathers errors and warnings, `asked` all requests."""
    page = browser.new_context(viewport={"width": width, "height": 800}, **options).new_page()
    page.told, page.asked = [], []
    page.on("console", lambda message: page.told.append(message.text) if message.type in ("error", "warning") else None)
    page.on("pageerror", lambda error: page.told.append(str(error)))
    page.on("request", lambda request: page.asked.append(request.url))
    page.goto(file.as_uri())
    page.wait_for_function("document.documentElement.dataset.ready")
    return page


def move_to(page, moment: int) -> None:
    """Move the slider of a page of a run."""
    page.evaluate(
        "moment => { const slider = document.getElementById('moment'); slider.value = moment;"
        " slider.dispatchEvent(new Event('input')); }",
        moment,
    )

"""The report in a real browser: choosing, looking up, printing, with scripts and without."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
from datetime import date

import pytest

from sizing.documents.drawing import draw_options
from sizing.documents.plain_text import visible
from sizing.documents.report import report_bytes

ISSUED = date(2026, 3, 1)
BROWSER = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("chrome")
POPPLER = shutil.which("pdftotext")
PATIENCE = 10_000
"""Milliseconds for a step; a busy machine is slow, not wrong."""


def _driver():
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        return None
    return sync_playwright


def _need_browser():
    missing = "chromium" if BROWSER is None else "playwright" if _driver() is None else ""
    if not missing:
        return
    if os.environ.get("CI"):
        pytest.fail(f"{missing} is missing; these tests must run here")
    pytest.skip(f"{missing} is not on this machine")


@pytest.fixture(scope="module")
def browser():
    _need_browser()
    with _driver()() as start:
        running = start.chromium.launch(executable_path=BROWSER, args=["--no-sandbox"])
        yield running
        running.close()


@pytest.fixture(scope="module")
def file_of(tmp_path_factory):
    """A function that writes the report of a job and returns its address."""
    folder = tmp_path_factory.mktemp("report")

    def write(job, name):
        path = folder / f"{name}.html"
        path.write_bytes(report_bytes(job, ISSUED, draw_options(job)))
        return path.as_uri()

    return write


@pytest.fixture
def opened(browser):
    """A function that opens an address; at the end nothing may have gone wrong on the page."""
    faults: list[str] = []
    contexts = []

    def open_(address, *, scripts=True, width=1280):
        context = browser.new_context(
            java_script_enabled=scripts, offline=True, viewport={"width": width, "height": 900}
        )
        contexts.append(context)
        page = context.new_page()
        page.set_default_timeout(PATIENCE)
        page.on("console", lambda message: faults.append(message.text))
        page.on("pageerror", lambda error: faults.append(str(error)))
        page.on("dialog", lambda dialog: faults.append(dialog.message))
        page.goto(address)
        return page

    yield open_
    for context in contexts:
        context.close()
    assert not faults


def forces_of(job, combination):
    """Force of each member as printed."""
    option = job.options[0]
    c = [x.name for x in option.combinations].index(combination)
    return [f"{abs(m.forces[c]) / 1e3:.1f} {'T' if m.forces[c] > 0 else 'C'}"
            for m in option.members]  # fmt: skip


def test_a_combination_is_chosen(girder_job, file_of, opened):
    """The drawing shows forces, senses and deflected shape of the combination chosen."""
    page = opened(file_of(girder_job, "girder"))
    page.select_option("select.choose", "U1")
    before = page.locator(".chosen line[data-moved]").first.get_attribute("y2")
    page.select_option("select.choose", "U2")
    assert "Combination U2 (strength)" in page.inner_text(".chosen figcaption")
    assert page.locator(".chosen line[data-moved]").first.get_attribute("y2") != before
    expected = forces_of(girder_job, "U2")
    texts = page.locator(".chosen text[data-force]")
    assert texts.count() > 20
    for k in range(texts.count()):
        label = texts.nth(k)
        assert label.text_content() in (expected[int(label.get_attribute("data-force"))], "0")


def test_a_member_is_looked_up(girder_job, file_of, opened):
    """By mark, by pointing, by tapping its row, and by keys alone; Escape puts the card away."""
    page = opened(file_of(girder_job, "girder"))
    card = page.locator(".card")
    assert card.is_hidden()
    page.fill("input.find", "t3")
    member = next(m for m in girder_job.options[0].members if m.mark == "T3")
    assert member.designation in card.inner_text()
    assert f"{member.utilisation:.2f}" in card.inner_text()
    page.fill("input.find", "no such thing")
    assert page.inner_text(".told") == "no such mark"
    page.keyboard.press("Escape")
    assert card.is_hidden()
    page.locator(".chosen line.reach").nth(5).hover(force=True)
    assert girder_job.options[0].members[5].mark in card.inner_text()
    page.locator("tr[data-member='9']").click()
    assert girder_job.options[0].members[9].mark in card.inner_text()
    page.keyboard.press("Escape")
    page.locator(".chosen line.reach").first.focus()
    page.keyboard.press("ArrowRight")
    page.keyboard.press("ArrowRight")
    page.keyboard.press("Enter")
    assert girder_job.options[0].members[2].mark in card.inner_text()


def test_without_scripts_all_but_the_choosing_works(girder_job, file_of, opened):
    """Drawings, captions and tables stand; the dead controls do not show."""
    page = opened(file_of(girder_job, "girder"), scripts=False)
    assert page.locator(".controls").is_hidden()
    assert page.locator(".card").is_hidden()
    assert page.locator(".chosen line[data-moved]").count() == len(girder_job.options[0].members)
    assert "movements drawn" in page.inner_text(".chosen figcaption")
    assert page.locator("tr[data-member]").count() == len(girder_job.options[0].members)


@pytest.mark.parametrize("width", [390, 1280])
def test_no_page_is_wider_than_the_screen(girder_job, file_of, opened, width):
    """Wide tables and drawings scroll by themselves; the page does not."""
    page = opened(file_of(girder_job, "girder"), width=width)
    assert page.evaluate("document.documentElement.scrollWidth") <= width


def test_hostile_names_run_nothing(hostile_job, file_of, opened):
    """Whatever names hold, no dialog opens, no error is told, and look-up finds them literally."""
    page = opened(file_of(hostile_job, "hostile"))
    section = page.locator("section.option").first
    for i in (0, 2, 14):
        mark = visible(hostile_job.options[0].members[i].mark)
        section.locator("input.find").fill(mark)
        assert mark in section.locator(".card").inner_text()
    names = [visible(c.name) for c in hostile_job.options[0].combinations]
    section.locator("select.choose").select_option(index=1)
    assert names[1] in section.locator(".chosen figcaption").inner_text()


@pytest.mark.skipif(POPPLER is None, reason="pdftotext is not on this machine")
def test_printed_tables_repeat_their_heads_and_cut_no_row(large_job, file_of, opened, tmp_path):
    """On every page on which the member schedule goes on, its heads stand; each row is whole."""
    page = opened(file_of(large_job, "large"))
    path = tmp_path / "report.pdf"
    page.pdf(path=str(path), prefer_css_page_size=True)
    text = subprocess.run(
        [POPPLER, "-layout", str(path), "-"], check=True, capture_output=True, timeout=120
    ).stdout.decode("utf-8")
    found = set()
    for sheet in text.split("\f"):
        rows = re.findall(
            r"^ *([TLVD]\d+) +(?:top chord|bottom chord|posts|diagonals) ", sheet, re.M
        )
        found.update(rows)
        if rows:
            assert "Mark" in sheet
            assert "Slenderness" in sheet
    assert found == {m.mark for m in large_job.options[0].members}

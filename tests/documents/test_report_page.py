"""The report is one self-contained page with drawing, tables, worked checks and cautions."""

from __future__ import annotations

import base64
import hashlib
import math
import re
from dataclasses import replace
from datetime import date

import pint
import pytest
from defusedxml import ElementTree

from sizing.brief.model import Units
from sizing.documents.drawing import draw_options
from sizing.documents.quantities import shown_units
from sizing.documents.report import quantity_text, report_bytes

ISSUED = date(2026, 3, 1)


def _page(job) -> str:
    return report_bytes(job, ISSUED, draw_options(job)).decode("utf-8")


@pytest.fixture(scope="module")
def page(girder_job):
    return _page(girder_job)


def test_page_is_self_contained(page):
    """Nothing is loaded from elsewhere; the one address is the SVG namespace.

    The page's own script is known to the browser by its hash, and no other may run.
    """
    script = re.search(r"<script>(.*?)</script>", page, re.DOTALL).group(1)
    digest = base64.b64encode(hashlib.sha256(script.encode("utf-8")).digest()).decode("ascii")
    assert f"script-src 'sha256-{digest}'" in page
    assert not re.search(r"<script[^>]+src|@import|url\(", page)
    assert not re.findall(r"url\(|@import|<link|<img", page)
    assert set(re.findall(r"https?://[^\s\"'<]+", page)) == {"http://www.w3.org/2000/svg"}
    drawings = re.findall(r"<svg.*?</svg>", page, re.DOTALL)
    assert len(drawings) == 4  # the truss, utilisations, forces, worst deflection
    for drawing in drawings:
        ElementTree.fromstring(drawing)


def test_page_holds_what_a_checker_asks_for(page):
    """Basis, loads, combinations, restraint, reactions with uplift, worked checks, cautions."""
    for heading in (
        "Cautions", "Basis of design", "Groups, and why not lighter", "Summary by section",
        "Member schedule", "Restraint that the compression checks assume", "Deflection checks",
        "Support reactions", "Combinations, expanded", "Governing checks, line by line",
        "Member end forces at each node, for the design of joints", "Nodes and supports",
        "Load cases, before factors", "Prepared by, date", "Checked by, date",
    ):  # fmt: skip
        assert heading in page
    assert "UPLIFT" in page
    assert "licensed engineer" in page
    assert "ab" * 32 in page
    assert "cd" * 32 in page


def test_governing_checks_are_worked_line_by_line(page, girder_job):
    """Each worked check shows symbol, expression, value and clause of every step."""
    assert len(girder_job.options[0].worked) == 2
    for check in girder_job.options[0].worked:
        assert f"Member {check.mark}, {check.designation}: {check.sense}" in page
        assert f"utilisation {check.utilisation:.3f}" in page
        for step in check.steps:
            assert f'<td class="symbol">{step.symbol}</td><td>{step.expression}</td>' in page


def test_an_inadequate_design_says_so(girder_job):
    """A failing check stands out in words, not by colour alone."""
    option = girder_job.options[0]
    worst = replace(option.members[0], utilisation=1.2)
    failing = replace(option, adequate=False, members=(worst, *option.members[1:]))
    page = _page(replace(girder_job, options=(failing,)))
    assert "NOT ADEQUATE: at least one check fails" in page
    assert '<td class="n alarm">1.20</td>' in page


@pytest.mark.parametrize(
    ("value", "unit", "metric", "us"),
    [
        (123456.0, "N", "123.5 kN", "27.75 kip"),
        (355e6, "Pa", "355.0 N/mm²", "51.49 ksi"),
        (2.4, "m", "2400 mm", "94.49 in"),
        (18.7e-4, "m²", "18.70 cm²", "2.899 in²"),
        (0.8731, "-", "0.8731", "0.8731"),
        (0.0, "N", "0 kN", "0 kip"),
        (math.inf, "N", "unlimited", "unlimited"),
    ],
)
def test_worked_values_are_printed_in_trade_units(value, unit, metric, us):
    """SI values print in the trade's units, four figures; factors as pint has them."""
    assert quantity_text(value, unit, shown_units(Units())) == metric
    shown = quantity_text(value, unit, shown_units(Units(force="kip", length="ft")))
    assert shown == us
    if unit != "-" and value and math.isfinite(value):
        ureg = pint.UnitRegistry(cache_folder=None)
        number, name = shown.split(" ")
        target = name.replace("²", "**2")
        expected = (value * ureg(unit.replace("²", "**2"))).to(target).magnitude
        assert float(number) == pytest.approx(expected, rel=5e-4)


def test_same_result_same_page(girder_job, page):
    """Equal input gives equal bytes."""
    assert _page(girder_job) == page

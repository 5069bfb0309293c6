"""The hand check of the report follows from statics alone and agrees with the matrix result."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.documents.drawing import draw_options
from sizing.documents.hand_check import hand_checks
from sizing.documents.quantities import shown_units
from sizing.documents.report import report_bytes
from sizing.job import check_job

EXAMPLES = Path(__file__).parents[2] / "examples"
MARKET_HALL = {  # sections that serve here as any would
    "bottom-chord-outer": "SHS 120x120x5", "bottom-chord-inner": "SHS 120x120x6.3",
    "top-chord-outer": "SHS 120x120x5", "top-chord-inner": "SHS 120x120x5",
    "diagonals-end": "SHS 80x80x5", "diagonals-middle": "SHS 80x80x5",
    "diagonals-inner": "SHS 80x80x5", "verticals-end": "SHS 80x80x5",
    "verticals-inner": "SHS 80x80x5",
}  # fmt: skip


def test_parallel_chords_by_hand():
    """Invented girder with unit numbers worked on paper: M / h for the chord, V / sin θ else.

    Two panels of 3 m, 4 m deep, 8 kN down in the middle of the bottom: reactions 4 kN. The
    section through the first panel: top chord 4·3/4 = 3 kN, diagonal 4/(4/5) = 5 kN.
    """
    brief = read_brief_of(PAPER)
    option = check_job(brief, {"plain": {"all": "bar"}}).options[0]
    checks, why_not = hand_checks(brief, option, shown_units(brief.units))
    assert why_not == ""
    values = {check.mark: abs(check.by_hand) for check in checks}
    assert sorted(values.values()) == pytest.approx([3000.0, 5000.0], rel=1e-9)
    assert all(check.agrees for check in checks)
    words = [line for check in checks for line in check.lines]
    assert ("sin θ", "0.8000") in {(what, value) for what, _, value in words}
    assert ("Depth h", "4.000 m") in {(what, value) for what, _, value in words}


def test_inclined_chords_agree_with_the_matrix():
    """Moment about the point where the chords meet, far outside the truss."""
    brief = read_brief(EXAMPLES / "market-hall.toml")
    option = check_job(brief, {"steel": MARKET_HALL}).options[0]
    checks, _ = hand_checks(brief, option, shown_units(brief.units))
    assert len(checks) == 2
    for check in checks:
        assert check.agrees
        assert check.by_hand == pytest.approx(check.by_matrix, rel=1e-9)


def test_a_wrong_force_is_seen():
    """A member force that equilibrium does not bear out is called different."""
    brief = read_brief(EXAMPLES / "market-hall.toml")
    job = check_job(brief, {"steel": MARKET_HALL})
    option = job.options[0]
    wrong = tuple(replace(m, forces=tuple(1.01 * f for f in m.forces)) for m in option.members)
    option = replace(option, members=wrong)
    checks, _ = hand_checks(brief, option, shown_units(brief.units))
    assert not any(check.agrees for check in checks)
    job = replace(job, options=(option,))
    page = report_bytes(job, date(2026, 3, 1), draw_options(job)).decode("utf-8")
    assert "Hand and matrix result DIFFER" in page


def test_space_trusses_say_why_not(tower_job):
    """No section of three members in space, and the report says so."""
    option = tower_job.options[0]
    checks, why_not = hand_checks(tower_job.brief, option, shown_units(tower_job.brief.units))
    assert checks == ()
    assert why_not.startswith("A space truss")
    page = report_bytes(tower_job, date(2026, 3, 1), draw_options(tower_job)).decode("utf-8")
    assert why_not in page


def test_crossed_diagonals_say_why_not():
    """Four members in every section: equilibrium alone is not enough."""
    brief = read_brief_of(PAPER.replace('"B1-A2"', '"B1-A2", "A0-B1", "A1-B2"'))
    option = check_job(brief, {"plain": {"all": "bar"}}).options[0]
    checks, why_not = hand_checks(brief, option, shown_units(brief.units))
    assert checks == ()
    assert why_not.startswith("No vertical section cuts exactly three members")


PAPER = """
title = "Paper girder (invented)"
units = { force = "kN", length = "m" }

[nodes]
A0 = [0.0, 0.0]
A1 = [3.0, 0.0]
A2 = [6.0, 0.0]
B0 = [0.0, 4.0]
B1 = [3.0, 4.0]
B2 = [6.0, 4.0]

[supports]
A0 = { held = ["x", "y"] }
A2 = { held = ["y"] }

[groups.all]
members = [
    "A0-A1", "A1-A2", "B0-B1", "B1-B2", "A0-B0", "A1-B1", "A2-B2", "B0-A1", "B1-A2",
]

[cases.load]
kind = "imposed"

[cases.load.nodal]
A1 = [0, -8.0]

[[combinations]]
name = "U1"
state = "strength"
factors = { load = 1.0 }

[options.plain]
standard = "elastic"
catalogue = "bars.csv"
E = "210 GPa"
density = "7850 kg/m3"
allowable_tension = "160 N/mm2"
allowable_compression = "160 N/mm2"
buckling = "none"
"""
BARS = (
    "designation,family,area [mm2],I major [mm4],I minor [mm4],mass [kg/m]\n"
    "bar,other,1000,100000,100000,7.85\n"
)


@pytest.fixture(autouse=True)
def folder(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)


def read_brief_of(text):
    """Return the brief in ``text``; its catalogue stands beside it."""
    Path("bars.csv").write_text(BARS, encoding="utf-8")
    Path("paper.toml").write_text(text, encoding="utf-8")
    return read_brief(Path("paper.toml"))

"""The market hall worked by hand: a section cut, EN 1993-1-1 step by step, and statics.

The hand calculation uses nothing of the package but the picked sections: loads are taken from
the example's text, forces from moments about the opposite node (method of sections), and the
buckling resistance from EN 1993-1-1:2005, 6.3.1 with the section formulas of EN 10210-2 Annex A.
"""

import math
from pathlib import Path

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.job import pick_job

EXAMPLE = Path(__file__).parents[1] / "examples" / "market-hall.toml"
PANEL, HALF, G = 2.4, 6, 9.80665


@pytest.fixture(scope="module")
def answer():
    return pick_job(read_brief(EXAMPLE)).options[0]


def depth(i):
    return 1.8 + 1.2 * min(i, 12 - i) / 6


def own_weight_at(answer):
    """Half of the weight of each member at each of its ends, in kN, by node name."""
    weight = {}
    for member in answer.members:
        for node in (member.start, member.end):
            weight[node] = weight.get(node, 0.0) + 0.5 * member.mass * G / 1e3
    return weight


def top_and_bottom_load(answer, roofing, services, snow, wind, own):
    """Downward load in kN at panel point i, top and bottom node together (factors given)."""
    weight = own_weight_at(answer)
    loads = []
    for i in range(13):
        half = 0.5 if i in (0, 12) else 1.0
        point = half * (roofing * 7.20 + services * 2.16 + snow * 14.40 + wind)
        loads.append(point + own * (weight[f"A{i}"] + weight[f"B{i}"]))
    return loads


def moment_left_of(loads, at):
    """Moment in kNm about panel point `at` of the support reaction and the loads left of it."""
    reaction = sum(w * (12 - i) * PANEL for i, w in enumerate(loads)) / (12 * PANEL)
    return reaction * at * PANEL - sum(w * (at - i) * PANEL for i, w in enumerate(loads[:at]))


def member(answer, name):
    return next(m for m in answer.members if m.name == name)


def test_bottom_chord_force_in_the_middle_by_a_section_cut(answer):
    """A5-A6 in U2: its force times the depth at B5 balances the moment about B5."""
    loads = top_and_bottom_load(answer, 1.35, 1.35, 1.5, 0.9 * 4.32, 1.35)
    by_hand = moment_left_of(loads, 5) / depth(5)
    bar = member(answer, "A5-A6")
    names = [c.name for c in answer.combinations]
    assert bar.forces[names.index("U2")] / 1e3 == pytest.approx(by_hand, rel=1e-9)


def test_top_chord_force_beside_the_ridge_by_a_section_cut(answer):
    """B5-B6 in U2: the moment about A6 over the lever arm of the sloping chord, compressed."""
    loads = top_and_bottom_load(answer, 1.35, 1.35, 1.5, 0.9 * 4.32, 1.35)
    slope = math.atan((depth(6) - depth(5)) / PANEL)
    by_hand = -moment_left_of(loads, 6) / (depth(6) * math.cos(slope))
    bar = member(answer, "B5-B6")
    names = [c.name for c in answer.combinations]
    assert bar.forces[names.index("U2")] / 1e3 == pytest.approx(by_hand, rel=1e-9)


def test_uplift_compresses_the_bottom_chord_and_governs_it(answer):
    """In U6 the inner bottom chord is compressed by the net uplift, as a section cut says."""
    loads = top_and_bottom_load(answer, 1.0, 0.0, 0.0, -1.5 * 15.84, 1.0)
    by_hand = moment_left_of(loads, 5) / depth(5)
    bar = member(answer, "A5-A6")
    assert by_hand < 0
    assert bar.compression.combination == "U6"
    assert bar.compression.force / 1e3 == pytest.approx(by_hand, rel=1e-9)
    group = next(g for g in answer.groups if g.name == "bottom-chord-inner")
    assert group.governing_combination == "U6"
    assert group.governed_by.startswith("compression")


def test_buckling_resistance_of_the_bottom_chord_step_by_step(answer):
    """EN 1993-1-1 6.3.1 by hand, out of plane over 7.2 m, equals the tool to 0.1 %."""
    bar = member(answer, "A5-A6")
    b = float(bar.designation.removeprefix("SHS ").split("x")[0])
    t = float(bar.designation.split("x")[2])
    area, second = shs_hot_finished(b, t)
    fy, E, length = 355.0, 210_000.0, 7200.0
    critical = math.pi**2 * E * second / length**2
    slenderness = math.sqrt(area * fy / critical)
    phi = 0.5 * (1 + 0.21 * (slenderness - 0.2) + slenderness**2)
    chi = 1 / (phi + math.sqrt(phi**2 - slenderness**2))
    resistance = chi * area * fy / 1.0
    assert bar.compression.resistance == pytest.approx(resistance, rel=1e-3)
    assert bar.compression.utilisation == pytest.approx(
        abs(bar.compression.governing_force) / resistance, rel=1e-3
    )


def shs_hot_finished(b, t):
    """A in mm2 and I in mm4 by EN 10210-2 Annex A: outer radius 1.5 t, inner radius 1.0 t."""
    ro, ri = 1.5 * t, 1.0 * t
    ag, ax = (1 - math.pi / 4) * ro**2, (1 - math.pi / 4) * ri**2
    arm = (10 - 3 * math.pi) / (12 - 3 * math.pi)
    hg, hx = b / 2 - ro * arm, (b - 2 * t) / 2 - ri * arm
    own = 1 / 3 - math.pi / 16 - 1 / (3 * (12 - 3 * math.pi))
    area = 4 * t * (b - t) - 4 * (ag - ax)
    second = (
        (b**4 - (b - 2 * t) ** 4) / 12
        - 4 * (own * ro**4 + ag * hg**2)
        + 4 * (own * ri**4 + ax * hx**2)
    )
    return area, second


def test_reactions_carry_the_whole_load(answer):
    """In every combination the reactions and the applied loads cancel."""
    for combination in answer.combinations:
        total = [0.0, 0.0]
        for reaction in answer.reactions:
            if reaction.combination == combination.name:
                total = [a + r for a, r in zip(total, reaction.components, strict=True)]
        for applied, reacted in zip(combination.applied, total, strict=True):
            assert applied + reacted == pytest.approx(0.0, abs=1e-6)


def test_sizes_are_what_an_engineer_would_expect(answer):
    """About 5 to 15 kg per m² of roof for such a truss; half of it or so in the chords.

    10-20 kg/m² for spans of 15-30 m, common practice, from memory; lower for light roofs.
    """
    per_area = answer.mass / (28.8 * 6.0)
    assert 5.0 < per_area < 20.0
    chords = sum(g.mass for g in answer.groups if "chord" in g.name)
    assert 0.5 < chords / answer.mass < 0.85
    assert answer.status == "proven"
    assert answer.adequate

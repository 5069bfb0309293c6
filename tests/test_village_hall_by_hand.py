"""One timber tie and one timber strut of the village hall truss, worked by hand.

Forces by the method of sections from the example's loads; resistances by EN 1995-1-1:2004, step
by step, with EN 338:2016 values for C24 (ft0k 14.5, fc0k 21, E0,05 7400 N/mm2, mean density
420 kg/m3, from memory) and gamma_M 1.3, kmod 0.8 (medium-term, service class 2; Table 3.1).
"""

import math
from pathlib import Path

import pytest

from sizing.brief.toml_reader import read_brief
from sizing.job import pick_job

EXAMPLE = Path(__file__).parents[1] / "examples" / "village-hall-steel-timber.toml"
G = 9.80665


@pytest.fixture(scope="module")
def timber():
    return pick_job(read_brief(EXAMPLE), options=["solid-timber"]).options[0]


def member(answer, name):
    return next(m for m in answer.members if m.name == name)


def full_snow(answer):
    """The combination 1.35 (all permanent) + 1.5 (balanced snow)."""
    return next(
        c.name
        for c in answer.combinations
        if c.state == "strength"
        and dict(c.factors)
        == {"self-weight": 1.35, "roofing": 1.35, "ceiling": 1.35, "snow-balanced": 1.5}
    )


def loads(answer):
    """Downward kN at panel points 0 to 6, rafter and tie node together, in that combination."""
    own = {}
    for bar in answer.members:
        for node in (bar.start, bar.end):
            own[node] = own.get(node, 0.0) + 0.5 * bar.mass * G / 1e3
    points = []
    for i in range(7):
        half = 0.5 if i in (0, 6) else 1.0
        weight = own[f"A{i}"] + (own[f"B{i}"] if 0 < i < 6 else 0.0)
        points.append(half * (1.35 * (3.3 + 1.2) + 1.5 * 6.0) + 1.35 * weight)
    return points


def moment(points, at):
    """Moment about panel point `at` of everything left of it, kNm."""
    reaction = sum(w * (6 - i) for i, w in enumerate(points)) / 6
    return reaction * at * 2.0 - sum(w * (at - i) * 2.0 for i, w in enumerate(points[:at]))


def size(bar):
    return (float(x) for x in bar.designation.split("x"))


def test_tie_by_hand(timber):
    """A0-A1: force from the moment about B1; 6.1.2 with kh (3.2) and 60 % of the section left."""
    bar = member(timber, "A0-A1")
    force = moment(loads(timber), 1) / 1.0
    assert bar.tension.combination == full_snow(timber)
    assert bar.tension.force / 1e3 == pytest.approx(force, rel=1e-6)
    b, h = size(bar)
    widest = max(b, h)
    kh = min((150 / widest) ** 0.2, 1.3) if widest < 150 else 1.0
    resistance = 0.8 * kh * 14.5 / 1.3 * 0.6 * b * h / 1e3
    assert bar.tension.resistance / 1e3 == pytest.approx(resistance, rel=1e-3)
    assert bar.tension.utilisation == pytest.approx(force / resistance, rel=1e-3)


def test_rafter_by_hand(timber):
    """A0-B1: force from the joint at A0; 6.3.2 about the weaker axis over its own length."""
    bar = member(timber, "A0-B1")
    points = loads(timber)
    reaction = sum(points) / 2
    force = (reaction - points[0]) / math.sin(math.atan(0.5))
    assert bar.compression.force / 1e3 == pytest.approx(-force, rel=1e-6)
    b, h = size(bar)
    length = math.hypot(2000.0, 1000.0)
    slenderness = length / (min(b, h) / math.sqrt(12))
    relative = slenderness / math.pi * math.sqrt(21 / 7400)
    k = 0.5 * (1 + 0.2 * (relative - 0.3) + relative**2)
    kc = 1 / (k + math.sqrt(k**2 - relative**2))
    resistance = kc * 0.8 * 21 / 1.3 * b * h / 1e3
    assert bar.compression.resistance / 1e3 == pytest.approx(resistance, rel=1e-3)
    assert bar.compression.utilisation == pytest.approx(force / resistance, rel=1e-3)


def test_final_sag_is_creep_on_the_long_term_part(timber):
    """Final sag is the elastic one plus kdef 0.8 (service class 2) times the permanent part's.

    EN 1995-1-1 2.2.3(5) with psi2 = 0 for snow below 1000 m (EN 1990 Table A1.1).
    """
    permanent = {"self-weight": 1.0, "roofing": 1.0, "ceiling": 1.0}
    by_factors = {frozenset(dict(c.factors).items()): i for i, c in enumerate(timber.combinations)}
    alone = by_factors[frozenset(permanent.items())]
    snowed = by_factors[frozenset({**permanent, "snow-balanced": 1.0}.items())]
    names = [node.name for node in read_brief(EXAMPLE).nodes]
    at = names.index("A3")
    elastic = timber.displacements[snowed][at][1]
    lasting = timber.displacements[alone][at][1]
    final = next(
        d.value
        for d in timber.deflections
        if d.node == "A3" and d.combination == timber.combinations[snowed].name
    )
    assert elastic < lasting < 0.0
    assert final == pytest.approx(elastic + 0.8 * lasting, rel=1e-9)

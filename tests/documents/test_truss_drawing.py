"""The drawing is true to shape, tells tension from compression, and its labels stay apart."""

from __future__ import annotations

import math
import random

import pytest
from defusedxml import ElementTree

from sizing.documents import view_drawing
from sizing.documents.drawing import draw_options, svg_bytes
from sizing.documents.label_layout import Box, Layout
from sizing.documents.projection import views_of
from sizing.documents.view_drawing import COMPRESSION, NONE, TENSION, line_width

SVG = "{http://www.w3.org/2000/svg}"


def _root(job):
    return ElementTree.fromstring(svg_bytes(job, draw_options(job)))


def _member_lines(root):
    inks = {TENSION[0], COMPRESSION[0], NONE[0]}
    lines = [e for e in root.iter(f"{SVG}line") if e.get("stroke") in inks]
    return lines[:-3]  # the last three are the samples of the legend


def test_members_are_drawn_to_scale(girder_job):
    """All members share one scale: px over m is the same for chords, posts and diagonals."""
    lines = _member_lines(_root(girder_job))
    members = girder_job.options[0].members
    assert len(lines) == len(members)
    scales = [
        math.dist(
            (float(e.get("x1")), float(e.get("y1"))), (float(e.get("x2")), float(e.get("y2")))
        )
        / member.length
        for e, member in zip(lines, members, strict=True)
    ]
    assert max(scales) == pytest.approx(min(scales), rel=2e-3)  # coordinates have one decimal


def test_line_style_tells_the_governing_sense(girder_job):
    """Tension is solid, compression dashed, no force dotted, so that ink is not needed."""
    looks = {"tension": TENSION, "compression": COMPRESSION, None: NONE}
    lines = _member_lines(_root(girder_job))
    for element, member in zip(lines, girder_job.options[0].members, strict=True):
        ink, dash = looks[member.governing]
        assert element.get("stroke") == ink
        assert element.get("stroke-dasharray", "") == dash
    assert len({dash for _, dash in looks.values()}) == 3


def test_line_weight_grows_with_area(girder_job):
    """A heavier section has a heavier line."""
    areas = sorted({m.area for m in girder_job.options[0].members})
    widths = [line_width(a, areas[-1]) for a in areas]
    assert widths == sorted(set(widths))


def test_every_mark_node_and_section_is_named(girder_job, tower_job, large_job):
    """Nothing stays without its name, however many members there are."""
    for job in (girder_job, tower_job, large_job):
        words = {e.text for e in _root(job).iter() if e.text}
        together = " ".join(sorted(words))
        for option in job.options:
            for member in option.members:
                assert member.mark in words or f"{member.mark}," in together
                assert member.designation in words
        for node in job.brief.nodes:
            assert node.name in words or f"{node.name}," in together


@pytest.mark.parametrize("job", ["girder_job", "tower_job", "large_job"])
def test_labels_do_not_lie_on_one_another(job, request, monkeypatch):
    """At most one label in a hundred touches another one, also with 300 members."""
    papers = []

    class Kept(Layout):
        def __init__(self):
            super().__init__()
            self.texts = []
            papers.append(self)

        def add(self, box, kind):
            super().add(box, kind)
            if kind == "text":
                self.texts.append(box)

    monkeypatch.setattr(view_drawing, "Layout", Kept)
    draw_options(request.getfixturevalue(job))
    texts = sum(len(paper.texts) for paper in papers)
    touching = sum(paper.clashes(box, ("text",)) - 1 for paper in papers for box in paper.texts)
    assert texts > 20
    assert touching / 2 <= 0.01 * texts


def test_space_trusses_are_shown_from_four_sides(tower_job):
    """Elevations and plan drop one coordinate each; the general view keeps all nodes apart."""
    general, front, side, plan = views_of(tower_job.brief)
    assert len({(round(x, 6), round(y, 6)) for x, y in general.points}) == 12
    for node, f, s, p in zip(
        tower_job.brief.nodes, front.points, side.points, plan.points, strict=True
    ):
        x, y, z = node.position
        assert (f, s, p) == ((x, z), (y, z), (x, y))


def test_caution_title_and_units_are_on_the_drawing(tower_job):
    """The drawing says what it shows, in which unit, and who must check it."""
    text = " ".join(e.text for e in _root(tower_job).iter() if e.text)
    assert "Signal mast, tower T2 (invented)" in text
    assert "dimensions in ft" in text
    assert "19.685 ft" in text  # 6 m: 6 / 0.3048, exact by definition of the foot (1959)
    assert "licensed engineer" in text


def test_boxes_meet_where_points_are_shared():
    """The overlap test agrees with trying many points of one rectangle in the other."""
    random.seed(7)

    def holds(box, x, y):
        c, s = math.cos(box.angle), math.sin(box.angle)
        u = (x - box.x) * c + (y - box.y) * s
        v = (y - box.y) * c - (x - box.x) * s
        return abs(u) <= box.width / 2 and abs(v) <= box.height / 2

    for _ in range(300):
        a, b = (
            Box(random.uniform(0, 30), random.uniform(0, 30), random.uniform(4, 20),
                random.uniform(4, 20), random.uniform(-3, 3))
            for _ in range(2)
        )  # fmt: skip
        shared = any(
            holds(b, *point)
            for i in range(40)
            for j in range(40)
            for point in [_inside(a, (i + 0.5) / 40, (j + 0.5) / 40)]
        )
        assert a.meets(b) == b.meets(a)
        if shared:
            assert a.meets(b)
        elif a.meets(b):  # a corner only: then a slightly smaller one must be free
            smaller = Box(a.x, a.y, a.width * 0.8, a.height * 0.8, a.angle)
            assert not smaller.meets(b)


def _inside(box, s, t):
    (ax, ay), (bx, by), _, (dx, dy) = box.corners
    return ax + s * (bx - ax) + t * (dx - ax), ay + s * (by - ay) + t * (dy - ay)

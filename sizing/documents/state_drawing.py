"""Small drawings of the state of a truss: utilisations; forces and deflected shape.

Forces are drawn for one combination; :func:`state_data` holds what the page needs to redraw
them for any other, computed here, so that the page itself computes nothing.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any
from xml.etree import ElementTree as Xml

from sizing.brief.model import Brief
from sizing.documents.label_layout import Box, Layout, Point, segment_box, text_width
from sizing.documents.plain_text import visible
from sizing.documents.projection import View, oblique, views_of
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.svg_paper import QUIET, Paper, number, svg_document
from sizing.documents.view_drawing import COMPRESSION, NONE, TENSION, draw_supports
from sizing.documents.view_names import beside
from sizing.documents.wording import met
from sizing.results import OptionResult

WIDTH, MARGIN, HIGHEST = 1180.0, 46.0, 620.0
"""Extent of the drawing in px; a tall truss is drawn smaller instead of longer than a page."""

TYPE, SMALL_TYPE, MANY_MEMBERS = 10.0, 8.0, 90
SHOWN_MOVEMENT = 0.05
"""Greatest movement as drawn over the greater extent of the truss: plain, yet still a truss."""

NO_FORCE = 1e-9
"""Share of the greatest force below which a force is rounding."""

MOVED_INK = "#5a2d82"
STEPS = ((0.5, "#9fb4c4"), (0.8, "#5d87a8"), (0.95, "#2c5a7d"), (math.inf, "#12293d"))
"""Utilisation up to which an ink is used; the darker, the more used."""
FAILED_INK = "#c2500a"


@dataclass(frozen=True, kw_only=True)
class _Scene:
    """The view of the truss on paper."""

    view: View
    points: tuple[Point, ...]
    scale: float
    width: float
    height: float

    def moved(self, movement: Sequence[float]) -> Point:
        """Return the px that a movement in m takes on paper, to the right and down."""
        across, up = movement if len(movement) == 2 else oblique(tuple(movement))
        return across * self.scale, -up * self.scale


def _scene(brief: Brief) -> _Scene:
    view = views_of(brief)[0]
    left, bottom, right, top = view.box
    wide, high = right - left, top - bottom
    scale = min(
        (WIDTH - 2 * MARGIN) / wide if wide else math.inf,
        (HIGHEST - 2 * MARGIN) / high if high else math.inf,
    )
    return _Scene(
        view=view,
        points=tuple(
            (MARGIN + (x - left) * scale, MARGIN + (top - y) * scale) for x, y in view.points
        ),
        scale=scale,
        width=max(wide * scale, 120.0) + 2 * MARGIN,
        height=high * scale + 2 * MARGIN,
    )


def utilisation_drawing(brief: Brief, option: OptionResult) -> Xml.Element:
    """Return the truss with the greatest utilisation of every member."""
    scene = _scene(brief)
    labels = [
        f"{m.utilisation:.2f}" if math.isfinite(m.utilisation) else "no resistance"
        for m in option.members
    ]
    inks = [
        next(ink for limit, ink in STEPS if m.utilisation <= limit)
        if met(m.utilisation)
        else FAILED_INK
        for m in option.members
    ]
    widths = [2.0 + 3.0 * min(m.utilisation, 1.0) for m in option.members]
    paper, layout = Paper(), Layout()
    for i, member in enumerate(brief.members):
        a, b = scene.points[member.start], scene.points[member.end]
        line = paper.line(a, b, ink=inks[i], width=widths[i])
        line.set("data-member", str(i))
        layout.add(segment_box(a, b, 2.5), "line")
    draw_supports(paper, layout, brief, scene.view, scene.points)
    _labels(paper, layout, brief, scene, labels, attribute=None)
    return _document(scene, paper, "Utilisation of the members")


def force_drawing(
    brief: Brief, option: OptionResult, units: ShownUnits, combination: int
) -> Xml.Element:
    """Return the truss with the forces and the deflected shape of one combination."""
    scene = _scene(brief)
    force = _force(option, units)
    paper, layout = Paper(), Layout()
    for i, member in enumerate(brief.members):
        a, b = scene.points[member.start], scene.points[member.end]
        ink, dash = _look(option, i, combination)
        line = paper.line(a, b, ink=ink, width=2.2, dash=dash)
        line.set("data-member", str(i))
        line.set("data-sense", "")
        layout.add(segment_box(a, b, 2.5), "line")
    draw_supports(paper, layout, brief, scene.view, scene.points)
    moves = _moves(option, scene, combination)[0]
    for i, member in enumerate(brief.members):
        ends = [
            (scene.points[n][0] + moves[n][0], scene.points[n][1] + moves[n][1])
            for n in (member.start, member.end)
        ]
        moved = paper.line(ends[0], ends[1], ink=MOVED_INK, width=1.0)
        moved.set("data-moved", str(i))
    labels = [_force_text(option, force, i, combination) for i in range(len(brief.members))]
    widest = [
        max((_force_text(option, force, i, c) for c in range(len(option.combinations))), key=len)
        for i in range(len(brief.members))
    ]
    _labels(paper, layout, brief, scene, labels, attribute="data-force", room=widest)
    return _document(scene, paper, "Forces and deflected shape")


def caption(brief: Brief, option: OptionResult, units: ShownUnits, combination: int) -> str:
    """Return what stands below the drawing of forces of one combination."""
    force = _force(option, units)
    greatest = max(math.dist((0.0,) * len(u), u) for u in option.displacements[combination])
    times = _moves(option, _scene(brief), combination)[1]
    of = option.combinations[combination]
    return (
        f"Combination {visible(of.name)} ({of.state}): member forces in {force.unit}, tension T, "
        f"compression C. Thin line: deflected shape, movements drawn {times:g} times; greatest "
        f"movement {units.movement.text(greatest)}."
    )


def state_data(brief: Brief, option: OptionResult, units: ShownUnits) -> dict[str, Any]:
    """Return, for every combination: force texts and senses, moved points, and caption."""
    scene = _scene(brief)
    force = _force(option, units)
    members = range(len(brief.members))
    inks = {name: list(look) for name, look in
            (("T", TENSION), ("C", COMPRESSION), ("", NONE))}  # fmt: skip
    states = []
    for c in range(len(option.combinations)):
        moves = _moves(option, scene, c)[0]
        states.append(
            {
                "caption": caption(brief, option, units, c),
                "forces": [_force_text(option, force, i, c) for i in members],
                "moved": [
                    [number(p[0] + m[0]), number(p[1] + m[1])]
                    for p, m in zip(scene.points, moves, strict=True)
                ],
            }
        )
    return {
        "inks": inks,
        "marks": [visible(m.mark) for m in option.members],
        "ends": [[m.start, m.end] for m in brief.members],
        "states": states,
    }


def deciding_combination(option: OptionResult) -> int:
    """Return the index of the combination that governs the most used member."""
    names = [c.name for c in option.combinations]
    worst = max(option.members, key=lambda m: m.utilisation, default=None)
    return names.index(worst.governing_combination) if worst and worst.governing else 0


def most_deflected(option: OptionResult) -> int | None:
    """Return the index of the combination of the most used deflection limit, None without one."""
    names = [c.name for c in option.combinations]
    worst = max(option.deflections, key=lambda d: d.utilisation, default=None)
    return names.index(worst.combination) if worst else None


def _force(option: OptionResult, units: ShownUnits) -> Quantity:
    return units.force.fitted(f for m in option.members for f in m.forces)


def _sense(option: OptionResult, member: int, combination: int) -> str:
    greatest = max((abs(m.forces[combination]) for m in option.members), default=0.0)
    force = option.members[member].forces[combination]
    return "" if abs(force) <= NO_FORCE * greatest else "T" if force > 0.0 else "C"


def _look(option: OptionResult, member: int, combination: int) -> tuple[str, str]:
    sense = _sense(option, member, combination)
    return {"T": TENSION, "C": COMPRESSION}.get(sense, NONE)


def _force_text(option: OptionResult, force: Quantity, member: int, combination: int) -> str:
    value = force.of(option.members[member].forces[combination])
    text = f"{abs(value):.{force.places}f}"
    return "0" if float(text) == 0.0 else f"{text} {'T' if value > 0.0 else 'C'}"


def _moves(option: OptionResult, scene: _Scene, combination: int) -> tuple[list[Point], float]:
    """Return the movement of every node in px as drawn, and how many times it is drawn."""
    plain = [scene.moved(u) for u in option.displacements[combination]]
    greatest = max((math.hypot(*move) for move in plain), default=0.0)
    left, bottom, right, top = scene.view.box
    wanted = SHOWN_MOVEMENT * max(right - left, top - bottom) * scene.scale
    times = _round_number(wanted / greatest) if greatest > 0.0 else 1.0
    return [(x * times, y * times) for x, y in plain], times


def _round_number(value: float) -> float:
    """Return the greatest of 1, 2, 5, 10, 20 ... that is not above ``value``."""
    power = 10.0 ** math.floor(math.log10(value))
    return power * max((k for k in (1.0, 2.0, 5.0) if k * power <= value), default=1.0)


def _labels(
    paper: Paper,
    layout: Layout,
    brief: Brief,
    scene: _Scene,
    labels: Sequence[str],
    *,
    attribute: str | None,
    room: Sequence[str] | None = None,
) -> None:
    """Write labels beside the members, longest lines first, where there is room."""
    size = TYPE if len(brief.members) <= MANY_MEMBERS else SMALL_TYPE
    ends = [(scene.points[m.start], scene.points[m.end]) for m in brief.members]
    for i in sorted(range(len(ends)), key=lambda k: -math.dist(*ends[k])):
        if math.dist(*ends[i]) < size:
            continue
        boxes: list[Box] = beside(ends[i], text_width((room or labels)[i], size), size)
        free = layout.first_free(boxes)
        if free is None:
            continue
        layout.add(boxes[free], "text")
        written = paper.text_in(labels[i], boxes[free], size=size, ink=QUIET, halo=True)
        if attribute is not None:
            written.set(attribute, str(i))


def _document(scene: _Scene, paper: Paper, title: str) -> Xml.Element:
    return svg_document(
        paper, scene.width, scene.height, title=title, text=f"{scene.view.title}, to scale."
    )

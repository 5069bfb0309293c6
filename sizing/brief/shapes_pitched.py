"""Pitched roof trusses: king post, queen post, Fink, fan, Howe, Pratt; and the scissors truss.

Bottom nodes A0 to An from eaves to eaves, rafter nodes B1 to the one before the last between
them; the rafters run A0-B1..-An with the ridge in the middle. Every truss is symmetric.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import Any

from sizing.brief.shapes_actions import (
    ROOF_PARAMETERS,
    add_limit,
    add_options,
    add_roof_actions,
    add_sag,
)
from sizing.brief.shapes_parameters import Parameter, Values
from sizing.brief.shapes_sketch import Pair, Sketch, pairs, restrained
from sizing.errors import InputError, Problem

ZONED = 8
USUAL_RESTRAINT = 4.5
"""m. A binder along every bottom chord node or second one (common practice)."""
LEAST_PITCH, GREATEST_PITCH = 5.0, 60.0
HALVES = {"left": "left", "right": "right"}

SPAN = Parameter(
    name="span", kind="length", usual="9 m", least=2.0, greatest=60.0, words="between the bearings"
)
PITCH = Parameter(
    name="pitch", kind="degrees", usual="25", least=LEAST_PITCH, greatest=GREATEST_PITCH,
    words="slope of the rafters in degrees, unless the rise is given",
)  # fmt: skip
RISE = Parameter(
    name="rise", kind="length", least=0.1, greatest=40.0, words="height of the ridge over the eaves"
)
RESTRAINT = Parameter(
    name="restraint", kind="length", least=0.3, greatest=60.0,
    words="greatest distance of the points that hold the bottom chord sideways; usually half the "
    "span, up to 4.5 m",
)  # fmt: skip
PLAIN = (SPAN, PITCH, RISE, RESTRAINT, *ROOF_PARAMETERS)
PANELLED = (
    SPAN, PITCH, RISE,
    Parameter(
        name="panels", kind="even", usual="6", least=4, greatest=24,
        words="panels from eaves to eaves, an even number",
    ),
    RESTRAINT, *ROOF_PARAMETERS,
)  # fmt: skip
SCISSORS = (
    SPAN, PITCH, RISE,
    Parameter(
        name="ceiling", kind="length", least=0.05, greatest=20.0,
        words="height of the crossing of the ties over the eaves; usually a third of the rise",
    ),
    *ROOF_PARAMETERS,
)  # fmt: skip


def king_post(values: Values) -> Sketch:
    """Draw a post under the ridge and a strut from its foot to the middle of each rafter."""
    sketch, span, rise = _start("King post truss", values)
    _nodes(sketch, span, rise, bottom=[0, 1 / 2, 1], top=[1 / 4, 1 / 2, 3 / 4])
    _chords(sketch, "king-post", values, ["A0..A2"], "A0-B1..B3-A2")
    sketch.group("post", ["A1-B2"])
    sketch.group("struts", ["A1-B1", "A1-B3"])
    return _finish(sketch, values, "A0-B1..B3-A2", "A0..A2")


def queen_post(values: Values) -> Sketch:
    """Draw two posts at the thirds, a straining beam, and crossed braces between the posts."""
    sketch, span, rise = _start("Queen post truss", values)
    thirds = [0, 1 / 3, 2 / 3, 1]
    _nodes(sketch, span, rise, bottom=thirds, top=[1 / 3, 1 / 2, 2 / 3])
    _chords(sketch, "queen-post", values, ["A0..A3"], "A0-B1..B3-A3")
    sketch.group("posts", ["A1-B1", "A2-B3"])
    sketch.group("straining-beam", ["B1-B3"])
    sketch.group("braces", ["A1-B3", "A2-B1"])
    sketch.comments[("groups", "braces")] = (
        "Crossed, so that one-sided load does not fold the middle panel; not joined where they "
        "cross."
    )
    return _finish(sketch, values, "A0-B1..B3-A3", "A0..A3")


def fink(values: Values) -> Sketch:
    """Draw the W web: the rafters in halves, the bottom chord in thirds."""
    sketch, span, rise = _start("Fink truss", values)
    _nodes(sketch, span, rise, bottom=[0, 1 / 3, 2 / 3, 1], top=[1 / 4, 1 / 2, 3 / 4])
    _chords(sketch, "fink", values, ["A0..A3"], "A0-B1..B3-A3")
    sketch.group("struts", ["A1-B1", "A2-B3"])
    sketch.group("ties", ["A1-B2", "A2-B2"])
    return _finish(sketch, values, "A0-B1..B3-A3", "A0..A3")


def fan(values: Values) -> Sketch:
    """Draw three web members that fan out from each third of the bottom chord to the rafter."""
    sketch, span, rise = _start("Fan truss", values)
    sixths = [1 / 6, 1 / 3, 1 / 2, 2 / 3, 5 / 6]
    _nodes(sketch, span, rise, bottom=[0, 1 / 3, 2 / 3, 1], top=sixths)
    _chords(sketch, "fan", values, ["A0..A3"], "A0-B1..B5-A3")
    sketch.group("struts", ["A1-B1", "A2-B5"])
    sketch.group("verticals", ["A1-B2", "A2-B4"])
    sketch.group("ties", ["A1-B3", "A2-B3"])
    return _finish(sketch, values, "A0-B1..B5-A3", "A0..A3")


def howe_roof(values: Values) -> Sketch:
    """Draw verticals at all nodes and struts that fall towards the middle."""
    return _with_verticals("howe-roof", "Howe roof truss", values, falling=True)


def pratt_roof(values: Values) -> Sketch:
    """Draw verticals at all nodes and ties that rise towards the middle."""
    return _with_verticals("pratt-roof", "Pratt roof truss", values, falling=False)


def bowstring(values: Values) -> Sketch:
    """Draw a top chord on a parabola over a straight bottom chord, with verticals and diagonals."""
    span = values["span"]
    rise = values["rise"] or span / 6
    sketch = Sketch(title=_title("Bowstring truss", span, rise))
    n = values["panels"]
    along = [k / n for k in range(n + 1)]
    for k, t in enumerate(along):
        sketch.node(f"A{k}", t * span, 0.0)
    for k, t in list(enumerate(along))[1:-1]:
        sketch.node(f"B{k}", t * span, 4.0 * rise * t * (1.0 - t))
    _hold(sketch, n)
    _bottom(sketch, "bowstring", values, n)
    _upright_webs(sketch, n, falling=False)
    chord = f"A0-B1..B{n - 1}-A{n}"
    sketch.group("top-chord", [chord])
    return _finish(sketch, values, chord, f"A0..A{n}")


BOWSTRING = (
    Parameter(
        name="span", kind="length", usual="24 m", least=2.0, greatest=100.0,
        words="between the bearings",
    ),
    Parameter(
        name="rise", kind="length", least=0.1, greatest=40.0,
        words="height of the crown; usually a sixth of the span",
    ),
    Parameter(
        name="panels", kind="even", usual="8", least=4, greatest=40,
        words="panels from end to end, an even number",
    ),
    RESTRAINT, *ROOF_PARAMETERS,
)  # fmt: skip


def scissors(values: Values) -> Sketch:
    """Draw ties that cross under the ridge and run on to the middle of the other rafter."""
    sketch, span, rise = _start("Scissors truss", values)
    ceiling = values["ceiling"] or rise / 3
    if ceiling > 0.6 * rise:
        raise InputError(
            [
                Problem(
                    file="shape scissors",
                    place="ceiling",
                    found=f"{ceiling:g} m",
                    expected=f"at most 0.6 of the rise, {0.6 * rise:.3f} m",
                    fix="Raise the ridge or lower the ceiling.",
                )
            ]
        )
    _nodes(sketch, span, rise, bottom=[0, 1 / 2, 1], top=[1 / 4, 1 / 2, 3 / 4])
    sketch.node("A1", span / 2, ceiling)
    sketch.group("rafters", ["A0-B1..B3-A2"])
    sketch.group("ties-lower", ["A0-A1-A2"])
    sketch.group("ties-upper", ["A1-B1", "A1-B3"])
    sketch.group("post", ["A1-B2"])
    _finish(sketch, values, "A0-B1..B3-A2", "A0..A2")
    spread = {"name": "spread of the bearing", "nodes": ["A2"], "direction": "x", "limit": "40 mm"}
    add_limit(sketch, spread, "40 mm")
    return sketch


def _start(words: str, values: Values) -> tuple[Sketch, float, float]:
    span = values["span"]
    rise = values["rise"] or span / 2 * math.tan(math.radians(values["pitch"]))
    return Sketch(title=_title(words, span, rise)), span, rise


def _title(words: str, span: float, rise: float) -> str:
    return f"{words}, span {span:g} m, rise {round(rise, 3):g} m (loads invented)"


def _nodes(
    sketch: Sketch, span: float, rise: float, *, bottom: Sequence[float], top: Sequence[float]
) -> None:
    """Set the nodes at parts of the span, the same from both ends to the last decimal."""
    for letter, first, parts in (("A", 0, bottom), ("B", 1, top)):
        for k, t in enumerate(parts, start=first):
            near = round(min(t, 1.0 - t) * span, 4)
            y = 0.0 if letter == "A" else near / (span / 2) * rise
            sketch.node(f"{letter}{k}", near if t <= 0.5 else span - near, y)
    _hold(sketch, len(bottom) - 1)


def _hold(sketch: Sketch, last: int) -> None:
    sketch.supports["A0"] = {"held": ["x", "y"]}
    sketch.supports[f"A{last}"] = {"held": ["y"]}


def _chords(
    sketch: Sketch, shape: str, values: Values, bottom: Sequence[str], rafters: str
) -> None:
    last = int(bottom[0].rsplit("A", 1)[1])
    _bottom(sketch, shape, values, last)
    sketch.group("rafters", [rafters])
    sketch.comments[("groups", "rafters")] = "Purlins at every rafter node hold it sideways."


def _bottom(sketch: Sketch, shape: str, values: Values, last: int) -> None:
    names = [f"A{k}" for k in range(last + 1)]
    along = [sketch.nodes[name][0] for name in names]
    longest = max(b - a for a, b in pairwise(along))
    usual = max(min(along[-1] / 2, USUAL_RESTRAINT), longest)
    held = restrained(shape, names, along, values["restraint"] or usual)
    more: dict[str, Any] = {"buckling": {"in_plane": 1.0}, "restrained_nodes": held}
    if last < ZONED:
        sketch.group("bottom-chord", [f"A0..A{last}"], **more)
        first = "bottom-chord"
    else:
        q = round(last / 4)
        outer = [f"A0..A{q}", f"A{last - q}..A{last}"]
        first = "bottom-chord-outer"
        sketch.group(first, outer, **more, continues_in=["bottom-chord-inner"])
        sketch.group(
            "bottom-chord-inner", [f"A{q}..A{last - q}"], **more,
            continues_in=["bottom-chord-outer"],
        )  # fmt: skip
    sketch.comments[("groups", first)] = (
        "The restrained nodes are held sideways by bracing that must be drawn and built; uplift "
        "compresses this chord."
    )


def _with_verticals(shape: str, words: str, values: Values, *, falling: bool) -> Sketch:
    sketch, span, rise = _start(words, values)
    n = values["panels"]
    parts = [k / n for k in range(n + 1)]
    _nodes(sketch, span, rise, bottom=parts, top=parts[1:-1])
    _bottom(sketch, shape, values, n)
    chord = f"A0-B1..B{n - 1}-A{n}"
    if n < ZONED:
        sketch.group("rafters", [chord])
    else:
        q, m = n // 4, n // 2
        sketch.group("rafters-lower", [f"A0-B1..B{q}", f"B{n - q}..B{n - 1}-A{n}"])
        sketch.group("rafters-upper", [f"B{q}..B{m}", f"B{m}..B{n - q}"])
    _upright_webs(sketch, n, falling=falling)
    return _finish(sketch, values, chord, f"A0..A{n}")


def _upright_webs(sketch: Sketch, n: int, *, falling: bool) -> None:
    """Set verticals at the inner nodes and a diagonal in each panel but the end ones."""
    half = n // 2
    top_first = [(k, k + 1) if falling else (k + 1, k) for k in range(1, half)]
    left: list[Pair] = [(("B", b), ("A", a)) for b, a in top_first]
    right: list[Pair] = [(("B", n - b), ("A", n - a)) for b, a in reversed(top_first)]
    sketch.group("diagonals", pairs(left) + pairs(right))
    upright: list[Pair] = [(("A", k), ("B", k)) for k in range(1, n)]
    sketch.group("verticals", pairs(upright))


def _finish(sketch: Sketch, values: Values, chord: str, soffit: str) -> Sketch:
    add_roof_actions(sketch, values, chord, soffit=soffit, halves=HALVES, pitched=True)
    add_sag(sketch, [soffit])
    add_options(sketch)
    return sketch

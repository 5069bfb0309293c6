"""Trusses with parallel chords, of one span or several: Pratt, Howe, Warren and K bracing.

Bottom nodes A0 to An, top nodes B0 to Bn above them, panels numbered from 0. Each span is
symmetric about its middle. Under downward load the diagonals of a Pratt girder are in tension,
those of a Howe girder in compression.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import accumulate, pairwise
from typing import Any

from sizing.brief.shapes_actions import (
    ROOF_PARAMETERS,
    add_options,
    add_roof_actions,
    add_sag,
)
from sizing.brief.shapes_parameters import Parameter, Values
from sizing.brief.shapes_sketch import (
    Pair,
    Sketch,
    pairs,
    restrained,
    restrained_places,
    runs,
    stepped,
)

SLIM = 12.0
"""Usual span over depth of a parallel girder (10 to 15, common practice)."""
ZONED = 8
"""Panels of a span from which chords and webs are grouped by zone."""
PANELS_PER_RESTRAINT = 3

PARAMETERS = (
    Parameter(
        name="span", kind="lengths", usual="24 m", least=2.0, greatest=150.0,
        words="span, or several of a continuous girder",
    ),
    Parameter(
        name="depth", kind="length", least=0.2, greatest=20.0,
        words="between the axes of the chords; usually a twelfth of the longest span",
    ),
    Parameter(
        name="panels", kind="even", least=4, greatest=40,
        words="panels of each span, an even number; usually about as long as the girder is deep",
    ),
    Parameter(
        name="restraint", kind="length", least=0.3, greatest=60.0,
        words="greatest distance of the points that hold the bottom chord sideways; usually "
        "three panels",
    ),
    *ROOF_PARAMETERS,
)  # fmt: skip


@dataclass(frozen=True, kw_only=True)
class _Girder:
    """Set-out of a girder: spans in m, panels per span, depth, greatest restraint distance."""

    name: str
    spans: tuple[float, ...]
    panels: int
    depth: float
    restraint: float

    @property
    def total(self) -> int:
        return self.panels * len(self.spans)

    @property
    def x(self) -> list[float]:
        """Places of the nodes 0 to n, the same from both ends of a span."""
        places = [0.0]
        for end, span in zip(accumulate(self.spans), self.spans, strict=True):
            places += [end - span + span * k / self.panels for k in range(1, self.panels + 1)]
        return [round(x, 4) for x in places]

    @property
    def supports(self) -> list[int]:
        return list(range(0, self.total + 1, self.panels))

    def from_end(self, panel: int) -> int:
        """Return how many panels lie between this one and the nearer support."""
        k = panel % self.panels
        return min(k, self.panels - 1 - k)

    def left_half(self, panel: int) -> bool:
        return panel % self.panels < self.panels // 2


Diagonal = Callable[[_Girder, int], Pair]
"""Gives the diagonal of a girder in a panel."""


def pratt_girder(values: Values) -> Sketch:
    """Draw verticals at all nodes and diagonals that fall towards the middle of each span."""
    girder = _girder("pratt-girder", values)
    return _with_verticals(girder, values, "Pratt girder", _pratt)


def howe_girder(values: Values) -> Sketch:
    """Draw verticals at all nodes and diagonals that rise towards the middle of each span."""
    girder = _girder("howe-girder", values)
    return _with_verticals(girder, values, "Howe girder", _howe)


def warren_girder_with_verticals(values: Values) -> Sketch:
    """Draw diagonals that fall and rise in turn, and verticals at all nodes."""
    girder = _girder("warren-girder-with-verticals", values)
    return _with_verticals(girder, values, "Warren girder with verticals", _alternating)


def warren_girder(values: Values) -> Sketch:
    """Draw triangles below a top chord that bears at its ends; no verticals."""
    girder = _girder("warren-girder", values)
    sketch = Sketch(title=_title("Warren girder", girder))
    x, n = girder.x, girder.total
    for k in range(n):
        sketch.node(f"A{k + 1}", (x[k] + x[k + 1]) / 2, 0.0)
    for k in range(n + 1):
        sketch.node(f"B{k}", x[k], girder.depth)
    _hold(sketch, "B", girder)
    names = [f"A{k}" for k in range(1, n + 1)]
    _bottom_chord(sketch, girder, range(1, n), names, [(x[k] + x[k + 1]) / 2 for k in range(n)])
    _top_chord(sketch, girder)
    rising: list[tuple[int, Pair]] = [(k, (("A", k + 1), ("B", k + 1))) for k in range(n)]
    _web_by_zone(sketch, girder, [[(k, _falling(k)) for k in range(n)], rising], "diagonals")
    _finish(sketch, girder, values, soffit=f"A1..A{n}")
    return sketch


def k_girder(values: Values) -> Sketch:
    """Draw two half diagonals in each panel, from the middle of a vertical to both chords.

    The verticals have a node C in the middle, but for the one in the middle of each span.
    """
    girder = _girder("k-girder", values)
    sketch = _frame("K girder", girder)
    n, half = girder.total, girder.panels // 2
    middles = [k for k in range(n + 1) if k % girder.panels != half]
    for k in middles:
        sketch.node(f"C{k}", girder.x[k], girder.depth / 2)
    _bottom_chord(sketch, girder, range(n), [f"A{k}" for k in range(n + 1)], girder.x)
    _top_chord(sketch, girder)
    rows: list[list[tuple[int, Pair]]] = []
    for letter in "AB":
        near = [k if girder.left_half(k) else k + 1 for k in range(n)]
        far = [k + 1 if girder.left_half(k) else k for k in range(n)]
        rows.append([(k, (("C", near[k]), (letter, far[k]))) for k in range(n)])
    _web_by_zone(sketch, girder, rows, "diagonals")
    lower: list[Pair] = [(("A", k), ("C", k)) for k in middles]
    upper: list[Pair] = [(("C", k), ("B", k)) for k in middles]
    at_support = [k in girder.supports for k in middles]
    for name, wanted in (("verticals-end", True), ("verticals-inner", False)):
        chosen = [i for i, end in enumerate(at_support) if end is wanted]
        words = pairs([lower[i] for i in chosen]) + pairs([upper[i] for i in chosen])
        sketch.group(name, words, {"in_plane": 1.0, "out_of_plane": 2.0})
    whole: list[Pair] = [(("A", k), ("B", k)) for k in range(n + 1) if k not in middles]
    sketch.group("verticals-middle", pairs(whole))
    sketch.comments[("groups", "verticals-inner")] = (
        "Nothing holds the middle node of a vertical out of plane: twice the length of a half."
    )
    _finish(sketch, girder, values, soffit=f"A0..A{n}")
    return sketch


def _girder(name: str, values: Values) -> _Girder:
    spans: tuple[float, ...] = values["span"]
    depth = values["depth"] or round(max(spans) / SLIM, 2)
    panels = values["panels"] or min(max(4, 2 * round(max(spans) / depth / 2)), 40)
    restraint = values["restraint"] or PANELS_PER_RESTRAINT * max(spans) / panels
    return _Girder(name=name, spans=spans, panels=panels, depth=depth, restraint=restraint)


def _title(words: str, girder: _Girder) -> str:
    spans = " + ".join(f"{span:g}" for span in girder.spans)
    return f"{words}, span {spans} m, {girder.depth:g} m deep (loads invented)"


def _frame(words: str, girder: _Girder) -> Sketch:
    """Return the sketch with the nodes of both chords and the supports below."""
    sketch = Sketch(title=_title(words, girder))
    for letter, y in (("A", 0.0), ("B", girder.depth)):
        for k, x in enumerate(girder.x):
            sketch.node(f"{letter}{k}", x, y)
    _hold(sketch, "A", girder)
    return sketch


def _hold(sketch: Sketch, letter: str, girder: _Girder) -> None:
    for k in girder.supports:
        sketch.supports[f"{letter}{k}"] = {"held": ["x", "y"] if k == 0 else ["y"]}


def _with_verticals(girder: _Girder, values: Values, words: str, diagonal: Diagonal) -> Sketch:
    sketch = _frame(words, girder)
    n = girder.total
    _bottom_chord(sketch, girder, range(n), [f"A{k}" for k in range(n + 1)], girder.x)
    _top_chord(sketch, girder)
    _web_by_zone(sketch, girder, [[(k, diagonal(girder, k)) for k in range(n)]], "diagonals")
    upright: list[Pair] = [(("A", k), ("B", k)) for k in range(n + 1)]
    sketch.group("verticals-end", pairs([upright[k] for k in girder.supports]))
    sketch.group(
        "verticals-inner", pairs([p for k, p in enumerate(upright) if k not in girder.supports])
    )
    _finish(sketch, girder, values, soffit=f"A0..A{n}")
    return sketch


def _falling(k: int) -> Pair:
    return (("B", k), ("A", k + 1))


def _rising(k: int) -> Pair:
    return (("A", k), ("B", k + 1))


def _pratt(girder: _Girder, panel: int) -> Pair:
    return _falling(panel) if girder.left_half(panel) else _rising(panel)


def _howe(girder: _Girder, panel: int) -> Pair:
    return _rising(panel) if girder.left_half(panel) else _falling(panel)


def _alternating(girder: _Girder, panel: int) -> Pair:
    """Fall from the top at a support and rise in the next panel; mirrored from the other end."""
    k = panel % girder.panels
    if not girder.left_half(panel):
        k = girder.panels - 1 - k
    falls = (k % 2 == 0) == girder.left_half(panel)
    return _falling(panel) if falls else _rising(panel)


def _zone(girder: _Girder, panel: int, *, set_off: bool = False) -> str:
    """Return ``outer`` in the quarters next to the supports, ``inner`` between them.

    ``set_off``: the member k of the chord lies half a panel to the left of panel k.
    """
    k = panel % girder.panels
    from_end = min(k, girder.panels - k) - 1 if set_off else girder.from_end(panel)
    return "outer" if from_end < round(girder.panels / 4) else "inner"


def _chord(
    sketch: Sketch,
    girder: _Girder,
    name: str,
    letter: str,
    panels: Sequence[int],
    *,
    set_off: bool = False,
    **more: Any,
) -> None:
    """Set the groups of a chord, by zone in long spans."""
    if girder.panels < ZONED:
        sketch.group(name, runs(letter, panels), **more)
        return
    for zone in ("outer", "inner"):
        other = f"{name}-{'inner' if zone == 'outer' else 'outer'}"
        chain = {"continues_in": [other]} if "restrained_nodes" in more else {}
        chosen = [k for k in panels if _zone(girder, k, set_off=set_off) == zone]
        sketch.group(f"{name}-{zone}", runs(letter, chosen), **more, **chain)


def _top_chord(sketch: Sketch, girder: _Girder) -> None:
    _chord(sketch, girder, "top-chord", "B", range(girder.total))
    first = next(name for name in sketch.groups if name.startswith("top-chord"))
    sketch.comments[("groups", first)] = "Purlins at every top node hold the chord sideways."


def _bottom_chord(
    sketch: Sketch,
    girder: _Girder,
    panels: Sequence[int],
    names: Sequence[str],
    along: Sequence[float],
) -> None:
    held = _held_sideways(girder, names, along)
    buckling = {"in_plane": 1.0}
    set_off = len(names) != girder.total + 1
    _chord(
        sketch, girder, "bottom-chord", "A", panels, set_off=set_off, buckling=buckling,
        restrained_nodes=held,
    )  # fmt: skip
    first = next(name for name in sketch.groups if name.startswith("bottom-chord"))
    sketch.comments[("groups", first)] = (
        "The restrained nodes are held sideways by bracing that must be drawn and built; uplift "
        "compresses this chord."
    )


def _held_sideways(girder: _Girder, names: Sequence[str], along: Sequence[float]) -> list[str]:
    """Return the restrained nodes: span by span where the chord has nodes at the supports."""
    if len(names) != girder.total + 1:
        return restrained(girder.name, names, along, girder.restraint)
    held: set[int] = set()
    for first, last in pairwise(girder.supports):
        places = restrained_places(girder.name, along[first : last + 1], girder.restraint)
        held |= {first + place for place in places}
    return stepped(names, sorted(held))


def _web_by_zone(
    sketch: Sketch, girder: _Girder, rows: Sequence[Sequence[tuple[int, Pair]]], name: str
) -> None:
    """Set the groups of a web from rows of (panel, member), end panels in a group of their own."""
    words: dict[str, list[str]] = {"end": [], "outer": [], "inner": []}
    for row in rows:
        for zone in words:
            words[zone] += pairs([pair for k, pair in row if _web_zone(girder, k) == zone])
    for zone, found in words.items():
        sketch.group(f"{name}-{zone}", found)


def _web_zone(girder: _Girder, panel: int) -> str:
    if girder.from_end(panel) == 0:
        return "end"
    return _zone(girder, panel) if girder.panels >= ZONED else "inner"


def _finish(sketch: Sketch, girder: _Girder, values: Values, soffit: str) -> None:
    n = girder.total
    halves = {"left": f"B0..B{n // 2}", "right": f"B{n // 2}..B{n}"}
    add_roof_actions(sketch, values, f"B0..B{n}", soffit=soffit, halves=halves)
    add_sag(sketch, [soffit])
    add_options(sketch)

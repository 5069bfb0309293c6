"""Roof trusses of one slope: the mono-pitch truss and the cantilever canopy."""

from __future__ import annotations

import math

from sizing.brief.shapes_actions import ROOF_PARAMETERS, add_options, add_roof_actions, add_sag
from sizing.brief.shapes_parameters import Parameter, Values
from sizing.brief.shapes_sketch import Pair, Sketch, pairs, restrained, runs

ZONED = 8
USUAL_RESTRAINT = 4.5
"""m (common practice)."""
SLIM = 12.0
"""Usual span over depth of the mono-pitch truss in its middle (common practice)."""
CANOPY_SLIM = 6.0
"""Usual reach of a canopy over its depth at the wall (common practice)."""

MONO_PITCH = (
    Parameter(
        name="span", kind="length", usual="15 m", least=2.0, greatest=60.0,
        words="between the bearings",
    ),
    Parameter(
        name="pitch", kind="degrees", usual="5", least=1.0, greatest=45.0,
        words="slope of the roof in degrees",
    ),
    Parameter(
        name="depth", kind="length", least=0.2, greatest=20.0,
        words="between the chords at the low end; usually such that the middle is a twelfth of "
        "the span deep, but at least 0.5 m",
    ),
    Parameter(
        name="panels", kind="even", usual="8", least=4, greatest=40,
        words="panels from end to end, an even number",
    ),
    Parameter(
        name="restraint", kind="length", least=0.3, greatest=60.0,
        words="greatest distance of the points that hold the bottom chord sideways; usually half "
        "the span, up to 4.5 m",
    ),
    *ROOF_PARAMETERS,
)  # fmt: skip
CANOPY = (
    Parameter(
        name="reach", kind="length", usual="6 m", least=1.0, greatest=30.0,
        words="from the wall to the tip",
    ),
    Parameter(
        name="depth", kind="length", least=0.2, greatest=10.0,
        words="between the chords at the wall; usually a sixth of the reach",
    ),
    Parameter(
        name="panels", kind="count", usual="4", least=2, greatest=20,
        words="panels from the wall to the tip",
    ),
    Parameter(
        name="restraint", kind="length", least=0.3, greatest=30.0,
        words="greatest distance of the points that hold the bottom chord sideways; usually two "
        "panels",
    ),
    *ROOF_PARAMETERS,
)  # fmt: skip


def mono_pitch(values: Values) -> Sketch:
    """Draw a level bottom chord, a rising top chord, diagonals towards the middle."""
    span, n = values["span"], values["panels"]
    slope = math.tan(math.radians(values["pitch"]))
    depth = values["depth"] or max(0.5, round(span / SLIM - slope * span / 2, 2))
    title = f"Mono-pitch truss, span {span:g} m, {values['pitch']:g} degrees (loads invented)"
    sketch = Sketch(title=title)
    for letter in "AB":
        for k in range(n + 1):
            x = round(k / n * span, 4)
            sketch.node(f"{letter}{k}", x, depth + slope * x if letter == "B" else 0.0)
    sketch.supports = {"A0": {"held": ["x", "y"]}, f"A{n}": {"held": ["y"]}}
    names = [f"A{k}" for k in range(n + 1)]
    along = [sketch.nodes[name][0] for name in names]
    usual = max(min(span / 2, USUAL_RESTRAINT), span / n)
    held = restrained("mono-pitch", names, along, values["restraint"] or usual)
    sketch.group("bottom-chord", [f"A0..A{n}"], {"in_plane": 1.0}, restrained_nodes=held)
    sketch.comments[("groups", "bottom-chord")] = BRACED
    sketch.group("top-chord", [f"B0..B{n}"])
    diagonals: list[Pair] = [
        (("B", k), ("A", k + 1)) if k < n // 2 else (("A", k), ("B", k + 1)) for k in range(n)
    ]
    last = n - 1
    sketch.group("diagonals-end", pairs([diagonals[0]]) + pairs([diagonals[last]]))
    sketch.group("diagonals-inner", pairs(diagonals[1:last]))
    upright: list[Pair] = [(("A", k), ("B", k)) for k in range(n + 1)]
    sketch.group("verticals-end", pairs([upright[0]]) + pairs([upright[n]]))
    sketch.group("verticals-inner", pairs(upright[1:n]))
    add_roof_actions(sketch, values, f"B0..B{n}", soffit=f"A0..A{n}")
    add_sag(sketch, [f"A0..A{n}"])
    add_options(sketch)
    return sketch


BRACED = (
    "The restrained nodes are held sideways by bracing that must be drawn and built; uplift "
    "compresses this chord."
)


def canopy(values: Values) -> Sketch:
    """Draw a level top chord and a bottom chord that rises from the wall to the tip."""
    reach, n = values["reach"], values["panels"]
    depth = values["depth"] or round(reach / CANOPY_SLIM, 2)
    sketch = Sketch(title=f"Cantilever canopy, reach {reach:g} m (loads invented)")
    for k in range(n):
        sketch.node(f"A{k}", k / n * reach, -depth * (n - k) / n)
    for k in range(n + 1):
        sketch.node(f"B{k}", k / n * reach, 0.0)
    sketch.supports = {"A0": {"held": ["x", "y"]}, "B0": {"held": ["x", "y"]}}
    names = [*(f"A{k}" for k in range(n)), f"B{n}"]
    panel = math.hypot(reach, depth) / n
    along = [panel * k for k in range(n + 1)]
    held = restrained("canopy", names, along, values["restraint"] or 2 * panel)
    chain = [f"{word}-B{n}" for word in runs("A", range(n - 1))]
    sketch.group("bottom-chord", chain, {"in_plane": 1.0}, restrained_nodes=held)
    sketch.comments[("groups", "bottom-chord")] = (
        "Compressed by every load from above: the restrained nodes are held sideways by bracing "
        "that must be drawn and built."
    )
    sketch.group("top-chord", [f"B0..B{n}"])
    falling: list[Pair] = [(("B", k), ("A", k + 1)) for k in range(n - 1)]
    sketch.group("diagonals", pairs(falling))
    upright: list[Pair] = [(("A", k), ("B", k)) for k in range(1, n)]
    sketch.group("verticals", pairs(upright))
    add_roof_actions(sketch, values, f"B0..B{n}")
    elastic, final = (f"{round(1000 * reach / part):d} mm" for part in (125, 100))
    add_sag(sketch, [f"B{n}"], elastic, final)  # twice what a span may, EN 1995-1-1 Table 7.2
    add_options(sketch)
    return sketch

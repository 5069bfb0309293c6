"""Space trusses: lattice towers, square and triangular on plan, and the double-layer grid."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

from sizing.brief.shapes_actions import (
    INVENTED,
    ROOF_PARAMETERS,
    SNOW,
    SNOW_OTHER_SIDE,
    WIND_LIFT,
    WIND_PRESS,
    add_limit,
    add_options,
    add_sag,
    add_self_weight,
    kilo,
)
from sizing.brief.shapes_parameters import Parameter, Values
from sizing.brief.shapes_sketch import Sketch

LEVELS_IN_TWO_ZONES = 4

TOWER = (
    Parameter(
        name="height", kind="length", usual="20 m", least=2.0, greatest=150.0,
        words="from the feet to the head",
    ),
    Parameter(
        name="foot", kind="length", usual="2.4 m", least=0.2, greatest=30.0,
        words="width of a face at the feet",
    ),
    Parameter(
        name="head", kind="length", usual="0.8 m", least=0.1, greatest=30.0,
        words="width of a face at the head",
    ),
    Parameter(
        name="bays", kind="count", usual="8", least=1, greatest=40, words="bays over the height"
    ),
    Parameter(
        name="bracing", kind="choice", usual="single", choices=("single", "crossed"),
        words="diagonals of each bay of a face",
    ),
    Parameter(
        name="equipment", kind="force", usual="6 kN", least=10.0, greatest=1e6,
        words="weight of what stands on the head (invented)",
    ),
    Parameter(
        name="equipment-wind", kind="force", usual="4 kN", least=0.0, greatest=1e6,
        words="wind force on what stands on the head (invented)",
    ),
    Parameter(
        name="wind", kind="line load", usual="0.3 kN/m", least=1.0, greatest=50e3,
        words="wind load of one leg with its share of the bracing, per m of height (invented)",
    ),
)  # fmt: skip
GRID = (
    Parameter(
        name="bays-x", kind="count", usual="6", least=2, greatest=20, words="squares along x"
    ),
    Parameter(
        name="bays-y", kind="count", usual="4", least=2, greatest=20, words="squares along y"
    ),
    Parameter(
        name="square", kind="length", usual="3 m", least=0.5, greatest=10.0,
        words="side of a square",
    ),
    Parameter(
        name="depth", kind="length", least=0.3, greatest=10.0,
        words="between the layers; usually the side over the root of 2, so that all members are "
        "of one length",
    ),
    *(p for p in ROOF_PARAMETERS if p.name != "spacing"),
)  # fmt: skip


def square_tower(values: Values) -> Sketch:
    """Draw four legs A to D, braced faces, a square at each level and bracing across the head."""
    return _tower("Lattice tower, square on plan", values, "ABCD")


def triangular_tower(values: Values) -> Sketch:
    """Draw three legs A to C, braced faces and a triangle at each level."""
    return _tower("Lattice tower, triangular on plan", values, "ABC")


def _tower(words: str, values: Values, legs: str) -> Sketch:
    height, bays = values["height"], values["bays"]
    sketch = Sketch(title=f"{words}, {height:g} m high (loads invented)")
    for level in range(bays + 1):
        part = level / bays
        width = values["foot"] + (values["head"] - values["foot"]) * part
        for leg, (x, y) in zip(legs, _corners(len(legs), width), strict=True):
            sketch.node(f"{leg}{level}", x, y, part * height)
    sketch.supports = {f"{leg}0": {"held": ["x", "y", "z"]} for leg in legs}
    _tower_groups(sketch, values, legs)
    _tower_actions(sketch, values, legs)
    head = [f"{leg}{bays}" for leg in legs]
    for axis in "xy":
        sway = {
            "name": f"sway along {axis}", "nodes": head, "direction": axis, "limit": "height/100",
        }  # fmt: skip
        add_limit(sketch, sway, "height/100")
    add_options(sketch, "circular-hollow-sections")
    return sketch


def _corners(count: int, width: float) -> list[tuple[float, float]]:
    """Return the corners of a square, or of a triangle with one leg on the x axis."""
    if count == 4:
        half = width / 2
        return [(-half, -half), (half, -half), (half, half), (-half, half)]
    radius = width / math.sqrt(3.0)
    return [(radius, 0.0), (-radius / 2, width / 2), (-radius / 2, -width / 2)]


def _tower_groups(sketch: Sketch, values: Values, legs: str) -> None:
    bays = values["bays"]
    faces = list(pairwise(legs + legs[0]))
    split = bays // 2 if bays >= LEVELS_IN_TWO_ZONES else bays
    zones = {"lower": (0, split), "upper": (split, bays)} if split < bays else {"": (0, bays)}
    for what in ("legs", "diagonals"):
        for zone, (low, high) in zones.items():
            name = f"{what}-{zone}" if zone else what
            if what == "legs":
                sketch.group(name, [_leg(leg, low, high) for leg in legs])
            else:
                crossed = values["bracing"] == "crossed"
                sketch.group(name, _diagonals(faces, low, high, crossed=crossed))
    ring = "-".join
    sketch.group(
        "horizontals",
        [ring([f"{leg}{k}" for leg in legs + legs[0]]) for k in range(1, bays + 1)],
    )
    if len(legs) == 4:
        sketch.group("plan-bracing", [f"A{bays}-C{bays}"])
        sketch.comments[("groups", "plan-bracing")] = "Keeps the head square."


def _leg(leg: str, low: int, high: int) -> str:
    return f"{leg}{low}-{leg}{high}" if high == low + 1 else f"{leg}{low}..{leg}{high}"


def _diagonals(faces: list[tuple[str, str]], low: int, high: int, *, crossed: bool) -> list[str]:
    """Return the diagonals of all faces: one in each bay, turned in each next one, or both."""
    words = []
    for k in range(low, high):
        for a, b in faces:
            rising, falling = f"{a}{k}-{b}{k + 1}", f"{b}{k}-{a}{k + 1}"
            words += [rising, falling] if crossed else [rising if k % 2 == 0 else falling]
    return words


def _tower_actions(sketch: Sketch, values: Values, legs: str) -> None:
    bays, count = values["bays"], len(legs)
    head = [f"{leg}{bays}" for leg in legs]
    add_self_weight(sketch)
    each = values["equipment"] / count / 1e3
    sketch.case("equipment", "permanent", nodal={node: [0, 0, round(-each, 6)] for node in head})
    sketch.comments[("cases", "equipment")] = f"On the head. {INVENTED}"
    part = values["equipment-wind"] / count / 1e3
    ways = {"x": (1, 0), "y": (0, 1), "xy": (1, 1)}
    for name, (x, y) in ways.items():
        for sign, word in ((1, "along"), (-1, "against")):
            way = [sign * x, sign * y, 0]
            size = math.hypot(x, y)
            force = [round(part * c / size, 6) for c in way]
            lines = [
                {
                    "load": kilo(values["wind"], "kN/m"), "along": "height",
                    "chord": _leg(leg, 0, bays), "direction": way,
                }
                for leg in legs
            ]  # fmt: skip
            sketch.case(f"wind-{word}-{name}", "wind", line_loads=lines)
            if part:
                sketch.cases[f"wind-{word}-{name}"]["nodal"] = dict.fromkeys(head, force)
    sketch.comments[("cases", "wind-along-x")] = (
        f"Wind on each leg with its share of the bracing, and on the equipment. {INVENTED}"
    )


def double_layer_grid(values: Values) -> Sketch:
    """Draw squares over squares set off by half a side, joined by four diagonals at each node.

    Top nodes T row_column, bottom nodes B row_column under the middles of the top squares; rows
    count along y, columns along x. The edge of the top layer is held up all round.
    """
    nx, ny, side = values["bays-x"], values["bays-y"], values["square"]
    depth = values["depth"] or round(side / math.sqrt(2.0), 3)
    title = f"Double-layer grid, {nx * side:g} m by {ny * side:g} m (loads invented)"
    sketch = Sketch(title=title)
    for j in range(ny + 1):
        for i in range(nx + 1):
            sketch.node(f"T{j}_{i}", i * side, j * side, depth)
    for j in range(ny):
        for i in range(nx):
            sketch.node(f"B{j}_{i}", (i + 0.5) * side, (j + 0.5) * side, 0.0)
    _grid_supports(sketch, nx, ny)
    _grid_groups(sketch, nx, ny)
    _grid_actions(sketch, values, nx, ny, side)
    add_sag(sketch, ["B*"], span=f"{min(nx, ny) * side:.10g} m")
    sketch.comments[("deflection_limits",)] = "The span is the shorter side between the edges."
    add_options(sketch, "circular-hollow-sections")
    return sketch


def _grid_supports(sketch: Sketch, nx: int, ny: int) -> None:
    def between(first: str, last: str) -> str:
        return first if first == last else f"{first}..{last}"

    up: dict[str, Any] = {"held": ["z"]}
    sketch.supports = {"T0_0": {"held": ["x", "y", "z"]}, f"T0_{nx}": {"held": ["y", "z"]}}
    sketch.supports |= {f"T{ny}_0": dict(up), f"T{ny}_{nx}": dict(up)}
    for j in (0, ny):
        sketch.supports[between(f"T{j}_1", f"T{j}_{nx - 1}")] = dict(up)
    for i in (0, nx):
        sketch.supports[between(f"T1_{i}", f"T{ny - 1}_{i}")] = dict(up)
    sketch.comments[("supports",)] = (
        "Bearings all round the edge; only two corners are held sideways, so that the grid is "
        "free to lengthen."
    )


def _grid_groups(sketch: Sketch, nx: int, ny: int) -> None:
    edge = [f"T{j}_0..T{j}_{nx}" for j in (0, ny)] + [f"T0_{i}..T{ny}_{i}" for i in (0, nx)]
    sketch.group("top-chords-edge", edge)
    sketch.group("top-chords-x", [f"T{j}_0..T{j}_{nx}" for j in range(1, ny)])
    sketch.group("top-chords-y", [f"T0_{i}..T{ny}_{i}" for i in range(1, nx)])
    sketch.group("bottom-chords-x", [_row(f"B{j}_0", f"B{j}_{nx - 1}", nx - 1) for j in range(ny)])
    sketch.group("bottom-chords-y", [_row(f"B0_{i}", f"B{ny - 1}_{i}", ny - 1) for i in range(nx)])
    end: list[str] = []
    inner: list[str] = []
    for j in range(ny):
        for dj, di in ((0, 0), (0, 1), (1, 0), (1, 1)):
            for i in range(nx):
                at_edge = j + dj in (0, ny) or i + di in (0, nx)
                (end if at_edge else inner).append(f"B{j}_{i}-T{j + dj}_{i + di}")
    sketch.group("diagonals-edge", end)
    sketch.group("diagonals-inner", inner)


def _row(first: str, last: str, steps: int) -> str:
    return f"{first}-{last}" if steps == 1 else f"{first}..{last}"


def _grid_actions(sketch: Sketch, values: Values, nx: int, ny: int, side: float) -> None:
    def rows(pressure: str, on: str, first: float, second: float) -> list[dict[str, Any]]:
        """Return a load on each row of top nodes, the edge rows with half a side."""
        middle = nx // 2
        loads: list[dict[str, Any]] = []
        for j in range(ny + 1):
            width = side / 2 if j in (0, ny) else side
            load: dict[str, Any] = {"pressure": pressure, "on": on, "chord": f"T{j}_0..T{j}_{nx}",
                    "spacing": f"{width:.10g} m"}  # fmt: skip
            if first == second:
                load |= {"coefficient": first} if first != 1.0 else {}
            else:
                parts = [
                    _row(f"T{j}_0", f"T{j}_{middle}", middle),
                    _row(f"T{j}_{middle}", f"T{j}_{nx}", nx - middle),
                ]
                load["coefficients"] = dict(zip(parts, (first, second), strict=True))
            loads.append(load)
        return loads

    snow, wind = kilo(values["snow"], "kN/m2"), kilo(values["wind"], "kN/m2")
    add_self_weight(sketch)
    roofing = rows(kilo(values["roofing"], "kN/m2"), "slope", 1.0, 1.0)
    sketch.case("roofing", "permanent", area_loads=roofing)
    sketch.comments[("cases", "roofing")] = f"Each row of top nodes carries its width. {INVENTED}"
    for name, first, second in (
        ("snow-full", SNOW, SNOW),
        ("snow-one-side", SNOW, SNOW_OTHER_SIDE),
    ):
        sketch.case(name, "snow", area_loads=rows(snow, "plan", first, second))
        sketch.comments[("cases", name)] = INVENTED
    for name, factor in (("wind-uplift", WIND_LIFT), ("wind-pressure", WIND_PRESS)):
        sketch.case(name, "wind", area_loads=rows(wind, "plan", factor, factor))
        sketch.comments[("cases", name)] = f"A negative coefficient lifts the roof. {INVENTED}"

"""Area and line loads as an engineer gives them, shared out to the nodes of a chord.

A pressure p on a width s (the spacing of the trusses) loads a straight panel of the chord by
p s l, half of it at either end, so that each inner node takes half of the panels beside it and
the end nodes half a panel (common practice, purlins at the nodes). The length l is

* on plan: the horizontal length of the panel; the load acts downwards (snow, imposed);
* on slope: the true length; the load acts downwards (roofing);
* normal to slope: the true length; the load acts square to the panel, a positive pressure onto
  it from above, a negative one away from it (wind).

``coefficients`` give parts of the chord their own factor on the pressure.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.chains import chain_named
from sizing.brief.findings import Findings, KeyPath, Quantities, listed, quoted, shown
from sizing.brief.model import StatedLoad
from sizing.brief.nodes_and_supports import NodeTable
from sizing.brief.raw_tables import RawAreaLoad, RawLineLoad, read_entry
from sizing.brief.stated_loads import force_text, lengths_text, number_with_unit
from sizing.units import Kind

FloatArray = NDArray[np.float64]

GREATEST_PRESSURE = 100e3
"""Pa. Ten metres of water: no roof or deck carries it, so it is in another unit."""
GREATEST_LINE_LOAD = 10e6
"""N/m. Heavy railway bridges stay below 0.2 MN/m."""
GREATEST_SPACING = 100.0
"""m between trusses."""
GREATEST_COEFFICIENT = 10.0
"""Pressure coefficients of roofs lie between -3 and 2, drifted snow below 5."""
UPRIGHT = 1e-3
"""Horizontal over true length below which a panel has no side above."""
HALVES = ("left", "right")


@dataclass(kw_only=True)
class SpreadLoads:
    """What the nodes get, and a row for each load as stated. ``good``: all could be read."""

    nodal: dict[int, FloatArray] = field(default_factory=dict)
    stated: list[StatedLoad] = field(default_factory=list)
    good: bool = True

    def add(self, node: int, force: FloatArray) -> None:
        """Add a force in N at a node."""
        self.nodal[node] = self.nodal[node] + force if node in self.nodal else force


@dataclass(frozen=True, kw_only=True)
class _Reader:
    nodes: NodeTable
    findings: Findings
    quantities: Quantities

    def position(self, node: int) -> FloatArray:
        return np.array(self.nodes.nodes[node].position)

    def chain(self, path: KeyPath, text: str) -> list[int] | None:
        names = chain_named(path, text, self.nodes.names, self.findings)
        if names is None or any(name not in self.nodes.names.index for name in names):
            return None
        return [self.nodes.names.index[name] for name in names]

    def bounded(self, path: KeyPath, value: Any, kind: Kind, greatest: float) -> float | None:
        number = self.quantities.read(path, value, kind)
        if number is not None and abs(number) > greatest:
            most = number_with_unit(greatest, kind, self.quantities.units)
            self.findings.add(
                path,
                found=shown(value),
                expected=f"at most {most}",
                fix="" if kind == "dimensionless" else "Check the unit.",
            )
            return None
        return number


def read_spread_loads(
    path: KeyPath,
    area_loads: Sequence[Any],
    line_loads: Sequence[Any],
    nodes: NodeTable,
    findings: Findings,
    quantities: Quantities,
) -> SpreadLoads:
    """Return the nodal shares of one load case's area and line loads."""
    reader = _Reader(nodes=nodes, findings=findings, quantities=quantities)
    loads = SpreadLoads()
    for place, value in enumerate(area_loads, start=1):
        if not _area_load((*path, "area_loads", place), value, reader, loads):
            loads.good = False
    for place, value in enumerate(line_loads, start=1):
        if not _line_load((*path, "line_loads", place), value, reader, loads):
            loads.good = False
    return loads


def _area_load(path: KeyPath, value: Any, reader: _Reader, loads: SpreadLoads) -> bool:
    what = 'a table such as { pressure = "0.8 kN/m2", on = "plan", chord = ..., spacing = "6 m" }'
    entry, faulty = read_entry(RawAreaLoad, value, path, reader.findings, what)
    if entry is None:
        return False
    before = len(reader.findings)
    pressure = spacing = chain = None
    if "pressure" not in faulty:
        pressure = reader.bounded(
            (*path, "pressure"), entry.pressure, "pressure", GREATEST_PRESSURE
        )
    if "spacing" not in faulty:
        spacing = _spacing((*path, "spacing"), entry.spacing, reader)
    if "chord" not in faulty:
        chain = reader.chain((*path, "chord"), entry.chord)
    if chain is None:
        return False
    factors = _panel_factors(path, entry, chain, reader)
    if factors is None or pressure is None or spacing is None or faulty:
        return False
    lengths, directions = [], []
    for a, b in pairwise(chain):
        length, direction = _panel((*path, "on"), a, b, entry.on, reader)
        lengths.append(length)
        directions.append(direction)
    if len(reader.findings) > before:
        return False
    shares = [pressure * f * spacing * length for f, length in zip(factors, lengths, strict=True)]
    applied = _share_out(chain, shares, directions, loads)
    given = pressure * spacing * _whole(chain, factors, lengths, entry.on, reader)
    units = reader.quantities.units
    width = number_with_unit(spacing, "length", units)
    text = (
        f"area load {path[-1]} on {entry.chord}: {number_with_unit(pressure, 'pressure', units)} "
        f"{_ON[entry.on]} × {lengths_text(factors, lengths, units)} × {width} = "
        f"{force_text(given, units)}; at the nodes {force_text(applied, units)}"
    )
    _state(loads, text, given, applied)
    return True


_ON = {"plan": "on plan", "slope": "on slope", "normal to slope": "normal to slope"}


def _spacing(path: KeyPath, value: Any, reader: _Reader) -> float | None:
    spacing = reader.bounded(path, value, "length", GREATEST_SPACING)
    if spacing is not None and spacing <= 0.0:
        reader.findings.add(path, found=shown(value), expected="a width above 0")
        return None
    return spacing


def _panel(path: KeyPath, a: int, b: int, on: str, reader: _Reader) -> tuple[float, FloatArray]:
    """Return the loaded length of a panel in m and the direction of a positive pressure."""
    axis = reader.position(b) - reader.position(a)
    true = float(np.linalg.norm(axis))
    plan = float(np.linalg.norm(axis[:-1]))
    down = np.zeros_like(axis)
    down[-1] = -1.0
    if on == "plan":
        return plan, down
    if on == "slope":
        return true, down
    names = f"{reader.nodes.nodes[a].name}-{reader.nodes.nodes[b].name}"
    if len(axis) == 3:
        reader.findings.add(
            path,
            found='"normal to slope" in a space truss',
            expected='"plan" or "slope"',
            fix="Give the components of the wind as nodal or line loads.",
        )
        return true, down
    if plan <= UPRIGHT * true:
        reader.findings.add(
            path,
            found=f'"normal to slope" on the upright panel {names}, which has no side above',
            expected="panels that slope",
            fix='Give wind on a wall as a line load, along = "height", direction = "x" or "-x".',
        )
        return true, down
    return true, _onto(axis)


def _onto(axis: FloatArray) -> FloatArray:
    """Return the unit vector square to a panel of a plane truss that points down."""
    x, y = axis / np.linalg.norm(axis)
    return np.array([y, -x]) if x > 0.0 else np.array([-y, x])


def _whole(
    chain: Sequence[int],
    factors: Sequence[float],
    lengths: Sequence[float],
    on: str,
    reader: _Reader,
) -> FloatArray:
    """Return the resultant per unit of pressure and width, from whole parts of the chord.

    The resultant of a uniform pressure square to a line is the same for every line between the
    same two ends: that square to the straight line, times its length. Written for each run of
    panels with one factor and one way across the paper.
    """
    d = reader.nodes.dimensions
    total = np.zeros(d)
    if on != "normal to slope":
        total[-1] = -math.fsum(f * length for f, length in zip(factors, lengths, strict=True))
        return total
    start = 0
    panels = [reader.position(b) - reader.position(a) for a, b in pairwise(chain)]
    for k in range(1, len(panels) + 1):
        same = k < len(panels) and factors[k] == factors[start]
        if same and (panels[k][0] > 0.0) == (panels[start][0] > 0.0):
            continue
        axis = reader.position(chain[k]) - reader.position(chain[start])
        total += factors[start] * _onto(axis) * float(np.linalg.norm(axis))
        start = k
    return total


def _panel_factors(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: _Reader
) -> list[float] | None:
    """Return the factor of each panel of the chain; None with the mistake recorded."""
    place = (*path, "coefficients")
    if not entry.coefficients:
        if entry.ridge is not None:
            reader.findings.add(
                (*path, "ridge"),
                found="a ridge without coefficients",
                expected="coefficients = { left = ..., right = ... } beside it",
            )
        given = 1.0 if entry.coefficient is None else entry.coefficient
        factor = reader.bounded(
            (*path, "coefficient"), given, "dimensionless", GREATEST_COEFFICIENT
        )
        return None if factor is None else [factor] * (len(chain) - 1)
    if entry.coefficient is not None:
        reader.findings.add(
            (*path, "coefficient"),
            found="a coefficient beside coefficients",
            expected="one of the two",
        )
        return None
    parts = _parts(path, entry, chain, reader)
    if parts is None:
        return None
    factors: dict[frozenset[int], float] = {}
    panels = [frozenset(pair) for pair in pairwise(chain)]
    before = len(reader.findings)
    for name, (nodes, value) in parts.items():
        factor = reader.bounded((*place, name), value, "dimensionless", GREATEST_COEFFICIENT)
        for a, b in pairwise(nodes):
            panel = frozenset((a, b))
            label = f"{reader.nodes.nodes[a].name}-{reader.nodes.nodes[b].name}"
            if panel not in panels or panel in factors:
                twice = panel in factors
                reader.findings.add(
                    (*place, name),
                    found=f"panel {label} {'for the second time' if twice else 'off the chord'}",
                    expected=f"each panel of {entry.chord} once",
                )
            factors[panel] = 1.0 if factor is None else factor
    missing = [
        f"{reader.nodes.nodes[a].name}-{reader.nodes.nodes[b].name}"
        for a, b in pairwise(chain)
        if frozenset((a, b)) not in factors
    ]
    if missing and len(reader.findings) == before:
        reader.findings.add(
            place,
            found=f"no coefficient for {listed(missing)}",
            expected=f"each panel of {entry.chord} once",
            fix="Write 0.0 for a part without load.",
        )
    return None if len(reader.findings) > before else [factors[panel] for panel in panels]


def _parts(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: _Reader
) -> dict[str, tuple[list[int], Any]] | None:
    """Return the parts of the chord that the coefficients name, by that name."""
    place = (*path, "coefficients")
    if any(name in HALVES for name in entry.coefficients):
        strangers = [name for name in entry.coefficients if name not in HALVES]
        if strangers or len(entry.coefficients) != 2:
            reader.findings.add(
                place,
                found=listed([quoted(name) for name in entry.coefficients]),
                expected="both left and right, or parts of the chord",
            )
            return None
        halves = _halves(path, entry, chain, reader)
        return (
            None
            if halves is None
            else {name: (halves[name], entry.coefficients[name]) for name in HALVES}
        )
    if entry.ridge is not None:
        reader.findings.add(
            (*path, "ridge"),
            found="a ridge beside coefficients of parts",
            expected="it beside left and right only",
            fix="Delete it.",
        )
        return None
    found = {name: reader.chain((*place, name), name) for name in entry.coefficients}
    if any(nodes is None for nodes in found.values()):
        return None
    return {
        name: (nodes, entry.coefficients[name])
        for name, nodes in found.items()
        if nodes is not None
    }


def _halves(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: _Reader
) -> Mapping[str, list[int]] | None:
    """Return the nodes left and right of the ridge, the highest node unless it is named."""
    inner = list(chain[1:-1])
    if entry.ridge is not None:
        ridge = reader.nodes.names.resolve((*path, "ridge"), entry.ridge)
        if ridge is not None and ridge not in inner:
            reader.findings.add(
                (*path, "ridge"),
                found=f"node {entry.ridge}",
                expected=f"a node between the ends of {entry.chord}",
            )
            return None
    else:
        height = {node: float(reader.position(node)[-1]) for node in chain}
        top = [node for node in chain if height[node] == max(height.values())]
        ridge = top[0] if len(top) == 1 and top[0] in inner else None
        if ridge is None:
            reader.findings.add(
                (*path, "coefficients"),
                found=f"left and right, but {entry.chord} has no single highest node inside",
                expected="a ridge",
                fix="Name it: ridge = ...",
            )
    if ridge is None:
        return None
    at = list(chain).index(ridge)
    first, second = list(chain[: at + 1]), list(chain[at:])
    rightwards = reader.position(chain[-1])[0] >= reader.position(chain[0])[0]
    return dict(zip(HALVES, (first, second) if rightwards else (second, first), strict=True))


def _line_load(path: KeyPath, value: Any, reader: _Reader, loads: SpreadLoads) -> bool:
    what = 'a table such as { load = "1.5 kN/m", along = "plan", chord = "B0..B12" }'
    entry, faulty = read_entry(RawLineLoad, value, path, reader.findings, what)
    if entry is None:
        return False
    load = chain = None
    if "load" not in faulty:
        load = reader.bounded((*path, "load"), entry.load, "line load", GREATEST_LINE_LOAD)
    if "chord" not in faulty:
        chain = reader.chain((*path, "chord"), entry.chord)
    direction = _direction((*path, "direction"), entry.direction, reader)
    if load is None or chain is None or direction is None or faulty:
        return False
    lengths = []
    for a, b in pairwise(chain):
        axis = reader.position(b) - reader.position(a)
        measured = {"plan": axis[:-1], "chord": axis, "height": axis[-1:]}[entry.along]
        lengths.append(float(np.linalg.norm(measured)))
    shares = [load * length for length in lengths]
    applied = _share_out(chain, shares, [direction] * len(lengths), loads)
    given = load * math.fsum(lengths) * direction
    units = reader.quantities.units
    text = (
        f"line load {path[-1]} on {entry.chord}: {number_with_unit(load, 'line load', units)} "
        f"along the {entry.along} × {lengths_text([1.0] * len(lengths), lengths, units)} = "
        f"{force_text(given, units)}; at the nodes {force_text(applied, units)}"
    )
    _state(loads, text, given, applied)
    return True


def _direction(path: KeyPath, value: Any, reader: _Reader) -> FloatArray | None:
    """Return the unit vector of ``down``, ``up``, an axis with or without minus, or a vector."""
    axes = reader.nodes.axes
    if not axes:
        return None
    words = {"down": (len(axes) - 1, -1.0), "up": (len(axes) - 1, 1.0)}
    for k, axis in enumerate(axes):
        words |= {axis: (k, 1.0), f"+{axis}": (k, 1.0), f"-{axis}": (k, -1.0)}
    if isinstance(value, str) and value.replace("\u2212", "-").lower() in words:
        axis_index, sign = words[value.replace("\u2212", "-").lower()]
        return np.asarray(sign * np.eye(len(axes))[axis_index])
    if isinstance(value, list) and len(value) == len(axes):
        vector = np.array(reader.quantities.vector(path, value, "dimensionless"))
        size = float(np.linalg.norm(vector))
        if math.isfinite(size) and size > 0.0:
            return vector / size
        if not math.isfinite(size):
            return None
    signed = [word for axis in axes for word in (axis, f"-{axis}")]
    reader.findings.add(
        path,
        found=shown(value),
        expected=f'"down", "up", one of {listed(signed)}, or a vector of {len(axes)} numbers',
    )
    return None


def _share_out(
    chain: Sequence[int],
    shares: Sequence[float],
    directions: Sequence[FloatArray],
    loads: SpreadLoads,
) -> FloatArray:
    """Put half of each panel's load (N) at either end; return the sum of what was put."""
    at: dict[int, FloatArray] = {}
    for (a, b), share, direction in zip(pairwise(chain), shares, directions, strict=True):
        for node in (a, b):
            at[node] = at.get(node, np.zeros(len(direction))) + 0.5 * share * direction
    for node, force in at.items():
        loads.add(node, force)
    return np.asarray(np.sum(list(at.values()), axis=0))


def _state(loads: SpreadLoads, text: str, given: FloatArray, applied: FloatArray) -> None:
    loads.stated.append(
        StatedLoad(text=text, given=tuple(given.tolist()), applied=tuple(applied.tolist()))
    )

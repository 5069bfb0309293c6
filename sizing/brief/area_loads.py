"""Area loads: a pressure on plan, on slope or normal to slope, over the spacing of the trusses.

* on plan: the horizontal length of a panel counts; the load acts downwards (snow, imposed);
* on slope: the true length counts; the load acts downwards (roofing);
* normal to slope: the true length; the load acts square to the panel, a positive pressure onto
  it from above, a negative one away from it (wind).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.area_coefficients import panel_factors
from sizing.brief.findings import KeyPath, shown
from sizing.brief.load_shares import LoadReader, SpreadLoads, share_out
from sizing.brief.raw_tables import RawAreaLoad, read_entry
from sizing.brief.stated_loads import force_text, lengths_text, number_with_unit

FloatArray = NDArray[np.float64]

GREATEST_PRESSURE = 100e3
"""Pa. Ten metres of water: no roof or deck carries it, so it is in another unit."""
GREATEST_SPACING = 100.0
"""m between trusses."""
UPRIGHT = 1e-3
"""Horizontal over true length below which a panel has no side above."""
WORDS = {"plan": "on plan", "slope": "on slope", "normal to slope": "normal to slope"}


def read_area_load(path: KeyPath, value: Any, reader: LoadReader, loads: SpreadLoads) -> bool:
    """Add one area load; return False, with the mistake recorded, when it cannot be read."""
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
    factors = panel_factors(path, entry, chain, reader)
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
    applied = share_out(chain, shares, directions, loads)
    given = pressure * spacing * _whole(chain, factors, lengths, entry.on, reader)
    units = reader.quantities.units
    width = number_with_unit(spacing, "length", units)
    text = (
        f"area load {path[-1]} on {entry.chord}: {number_with_unit(pressure, 'pressure', units)} "
        f"{WORDS[entry.on]} × {lengths_text(factors, lengths, units)} × {width} = "
        f"{force_text(given, units)}; at the nodes {force_text(applied, units)}"
    )
    loads.state(text, given, applied)
    return True


def _spacing(path: KeyPath, value: Any, reader: LoadReader) -> float | None:
    spacing = reader.bounded(path, value, "length", GREATEST_SPACING)
    if spacing is not None and spacing <= 0.0:
        reader.findings.add(path, found=shown(value), expected="a width above 0")
        return None
    return spacing


def _panel(path: KeyPath, a: int, b: int, on: str, reader: LoadReader) -> tuple[float, FloatArray]:
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
            found=f'"normal to slope" on the upright panel {reader.panel(a, b)}, which has no '
            "side above",
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
    reader: LoadReader,
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

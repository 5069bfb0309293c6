"""Line loads: a load per length along plan, along the chord or along the height."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.findings import KeyPath, listed, shown
from sizing.brief.load_shares import LoadReader, SpreadLoads, share_out
from sizing.brief.raw_tables import RawLineLoad, read_entry
from sizing.brief.stated_loads import force_text, lengths_text, number_with_unit

FloatArray = NDArray[np.float64]

GREATEST_LINE_LOAD = 10e6
"""N/m. Heavy railway bridges stay below 0.2 MN/m."""


def read_line_load(path: KeyPath, value: Any, reader: LoadReader, loads: SpreadLoads) -> bool:
    """Add one line load; return False, with the mistake recorded, when it cannot be read."""
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
    applied = share_out(chain, shares, [direction] * len(lengths), loads)
    given = load * math.fsum(lengths) * direction
    units = reader.quantities.units
    text = (
        f"line load {path[-1]} on {entry.chord}: {number_with_unit(load, 'line load', units)} "
        f"along the {entry.along} × {lengths_text([1.0] * len(lengths), lengths, units)} = "
        f"{force_text(given, units)}; at the nodes {force_text(applied, units)}"
    )
    loads.state(text, given, applied)
    return True


def _direction(path: KeyPath, value: Any, reader: LoadReader) -> FloatArray | None:
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

"""A section catalogue as arrays: one entry per row of the supplier's table, SI units."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import SourceFile

FloatArray = NDArray[np.float64]

ABOUT_THE_FILE = frozenset({"header", "columns", "remarks"})
"""Fields of a catalogue that are not one entry per row."""


@dataclass(frozen=True, kw_only=True)
class Catalogue:
    """The rows of one section catalogue, all arrays of length s (sections), SI units.

    ``row`` is the line number in the file, for traceability. Axis words: *major* is the axis
    of the greater second moment among the two geometric axes, *minor* the other, *least* the
    principal axis of the smallest second moment (differs from *minor* for angles only).

    ``family`` is one word per row: ``SHS``, ``RHS``, ``CHS``, ``angle``, ``I``, ``rectangle``
    (solid timber, glulam) or ``other``. ``product`` is the product standard as the file states
    it (``EN 10210-2``: hot finished, ``EN 10219-2``: cold formed, ``ASTM A500``, ``EN 14080``).
    Missing dimensions are NaN: ``depth`` is the overall dimension across the major axis,
    ``width`` the other, ``thickness`` the wall, web or leg, ``flange`` the flange thickness,
    ``root_radius`` the root radius. ``surface`` is m² of outer surface per m.
    ``price`` is per m in the user's currency, NaN where not given.

    ``mass`` is kg per m, and NaN in a timber catalogue whose header says ``density = from
    grade``: the mass is then area × density of the grade (``Standard.material.density``), which
    the formulation puts in. ``plies`` counts the boards side by side across ``width`` (1 for
    every section in one piece; empty means 1 throughout). The ``product`` of a built-up row always
    holds the word ``built-up``; it states ``width`` as the overall width, but second moments as
    if the boards slipped freely on one another: what their nails or bolts add is for the
    standard to say.

    Of supply: ``stock_lengths`` in m (empty where not stated), ``available`` (rows that are not
    are never picked), ``preferred`` (None where not stated) and ``lead_time`` as text; an empty
    tuple says nothing of any row.

    ``columns`` pairs every column head of the file with what it was taken for. ``remarks`` says,
    in sentences, what was detected, assumed or found odd while reading.
    """

    name: str
    source: SourceFile
    header: tuple[str, ...]
    designation: tuple[str, ...]
    row: tuple[int, ...]
    family: tuple[str, ...]
    product: tuple[str, ...]
    area: FloatArray
    i_major: FloatArray
    i_minor: FloatArray
    i_least: FloatArray
    mass: FloatArray
    depth: FloatArray
    width: FloatArray
    thickness: FloatArray
    flange: FloatArray
    root_radius: FloatArray
    surface: FloatArray
    price: FloatArray
    plies: tuple[int, ...] = ()
    stock_lengths: tuple[tuple[float, ...], ...] = ()
    available: tuple[bool, ...] = ()
    preferred: tuple[bool | None, ...] = ()
    lead_time: tuple[str, ...] = ()
    columns: tuple[tuple[str, str], ...] = ()
    remarks: tuple[str, ...] = ()

    def __len__(self) -> int:
        return len(self.designation)

    @property
    def r_major(self) -> FloatArray:
        """Radius of gyration about the major axis, m."""
        return np.sqrt(self.i_major / self.area)

    @property
    def r_minor(self) -> FloatArray:
        """Radius of gyration about the minor axis, m."""
        return np.sqrt(self.i_minor / self.area)

    @property
    def r_least(self) -> FloatArray:
        """Radius of gyration about the least axis, m."""
        return np.sqrt(self.i_least / self.area)

    def only(self, section: int) -> Catalogue:
        """Return the catalogue of the single row ``section``."""
        picked: dict[str, Any] = {}
        for field in fields(self):
            value = getattr(self, field.name)
            if isinstance(value, (np.ndarray, tuple)) and field.name not in ABOUT_THE_FILE:
                picked[field.name] = value[section : section + 1]
        return replace(self, **picked)

"""What was understood of a catalogue, as rows of text for the screen or a sheet."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

import numpy as np

from sizing.brief.sections import Catalogue, FloatArray

INCH = 0.0254
_METRIC = {
    "area": ("cm2", 1e4),
    "radius": ("cm", 1e2),
    "length": ("mm", 1e3),
    "mass": ("kg/m", 1.0),
}
_US = {"area": ("in2", INCH**-2), "radius": ("in", 1 / INCH), "length": ("in", 1 / INCH),
       "mass": ("lb/ft", 0.3048 / 0.45359237)}  # fmt: skip

Row = tuple[str, str]


def inspect_catalogue(catalogue: Catalogue) -> tuple[Row, ...]:
    """Return (what, finding) rows: file, columns as understood, ranges, gaps and oddities.

    Figures are in the file's own kind of units: US where its area is in square inches.
    """
    units = _US if _is_us(catalogue) else _METRIC
    rows: list[Row] = [
        ("catalogue", catalogue.name),
        ("file", f"{catalogue.source.path.name}, SHA-256 {catalogue.source.sha256}"),
        ("sections", str(len(catalogue))),
        ("lines", f"{min(catalogue.row)} to {max(catalogue.row)}"),
        ("families", _counted(catalogue.family)),
        ("products", _counted(catalogue.product)),
    ]
    rows += [("column", f"{head}: {meaning}") for head, meaning in catalogue.columns]
    rows += _ranges(catalogue, units)
    rows += [("gap", text) for text in _gaps(catalogue)]
    rows += [("header", text) for text in catalogue.header]
    rows += [("remark", text) for text in catalogue.remarks]
    return tuple(rows)


def _is_us(catalogue: Catalogue) -> bool:
    return any(
        meaning.startswith("area in ") and "in" in meaning.removeprefix("area in ")
        for _, meaning in catalogue.columns
    )


def _counted(words: Sequence[str]) -> str:
    return ", ".join(f"{word or 'not stated'} ({n})" for word, n in sorted(Counter(words).items()))


def _ranges(catalogue: Catalogue, units: dict[str, tuple[str, float]]) -> list[Row]:
    quantities: tuple[tuple[str, FloatArray, str], ...] = (
        ("area", catalogue.area, "area"),
        ("mass", catalogue.mass, "mass"),
        ("radius of gyration, major", catalogue.r_major, "radius"),
        ("radius of gyration, minor", catalogue.r_minor, "radius"),
        ("radius of gyration, least", catalogue.r_least, "radius"),
        ("depth", catalogue.depth, "length"),
        ("width", catalogue.width, "length"),
        ("thickness", catalogue.thickness, "length"),
    )
    rows = []
    for name, values, quantity in quantities:
        unit, factor = units[quantity]
        known = np.flatnonzero(np.isfinite(values))
        if known.size:
            low, high = known[np.argmin(values[known])], known[np.argmax(values[known])]
            rows.append(
                (
                    name,
                    f"{values[low] * factor:.4g} ({catalogue.designation[low]}) to "
                    f"{values[high] * factor:.4g} {unit} ({catalogue.designation[high]})",
                )
            )
    return rows


def _gaps(catalogue: Catalogue) -> list[str]:
    """Say what the rows leave open, and what cannot be done for want of it."""
    gaps = []
    walls = [i for i, family in enumerate(catalogue.family) if family not in {"rectangle", "other"}]
    needed = (
        ("depth", catalogue.depth, "local buckling"),
        ("width", catalogue.width, "local buckling"),
        ("thickness", catalogue.thickness, "local buckling"),
    )
    for name, values, use in needed:
        without = sum(bool(np.isnan(values[i])) for i in walls)
        if without:
            gaps.append(f"{without} of {len(catalogue)} rows without {name}: {use} needs it")
    for name, values, use in (
        ("mass", catalogue.mass, "taken as area × density of the grade"),
        ("surface", catalogue.surface, "no painted area in the schedule"),
        ("price", catalogue.price, "cannot minimise cost"),
    ):
        without = int(np.isnan(values).sum())
        if without:
            gaps.append(f"{without} of {len(catalogue)} rows without {name}: {use}")
    hollow = sum(
        family in {"SHS", "RHS", "CHS"} and not product
        for family, product in zip(catalogue.family, catalogue.product, strict=True)
    )
    if hollow:
        gaps.append(
            f"{hollow} hollow sections without product standard: hot finished and cold formed "
            "ones buckle on different curves"
        )
    return gaps

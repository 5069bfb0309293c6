"""Small numbers with bounds that several tables share: slenderness limits and fractions."""

from __future__ import annotations

from typing import Any

from sizing.brief.findings import Findings, KeyPath, Quantities
from sizing.brief.model import SlendernessLimits
from sizing.brief.raw_tables import RawSlenderness, read_entry

GREATEST_SLENDERNESS = 1_000.0
"""L/i. Codes and advice stop at 350 (BS 5950-1:1990 4.7.3.2); beyond 1000 it is a slip."""


def read_slenderness(
    path: KeyPath, raw: dict[str, Any], findings: Findings, quantities: Quantities
) -> SlendernessLimits:
    """Return the limits on L/i; a key left out sets no limit."""
    entry, _ = read_entry(RawSlenderness, raw, path, findings, "a table of limits")
    if entry is None:
        return SlendernessLimits()
    values: dict[str, float | None] = {}
    for key in ("compression", "tension"):
        given = getattr(entry, key)
        value = None if given is None else quantities.read((*path, key), given, "dimensionless")
        if value is not None and not 0.0 < value <= GREATEST_SLENDERNESS:
            findings.add(
                (*path, key),
                found=f"{value:g}",
                expected=f"a slenderness L/i above 0 and up to {GREATEST_SLENDERNESS:g}",
            )
        values[key] = value
    return SlendernessLimits(compression=values["compression"], tension=values["tension"])


def read_fraction(
    path: KeyPath, given: object, findings: Findings, quantities: Quantities
) -> float:
    """Return a number above 0 and up to 1; 1 when faulty, with the mistake recorded."""
    value = quantities.read(path, given, "dimensionless")
    if value is None:
        return 1.0
    if not 0.0 < value <= 1.0:
        findings.add(path, found=f"{value:g}", expected="a number above 0 and up to 1")
    return value

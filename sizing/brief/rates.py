"""What material costs and what it emits: the user's own rates, each with source and date.

No rate is built in: prices and carbon factors differ several-fold between suppliers, routes and
years, so an answer without rates stays unpriced rather than wrong.
"""

from __future__ import annotations

import math
from typing import Any

from sizing.brief.findings import Findings, KeyPath, Quantities
from sizing.brief.model import CarbonFactors, CostRates
from sizing.brief.raw_tables import RawCarbon, RawCost, read_entry

KG_PER_POUND = 0.45359237
"""International avoirdupois pound, exact by definition (1959 agreement)."""

METRES_PER_FOOT = 0.3048
"""International foot, exact by definition (1959 agreement)."""


def read_cost(
    path: KeyPath, raw: dict[str, Any] | None, findings: Findings, quantities: Quantities
) -> CostRates | None:
    """Return the cost rates of an option, None where none are given."""
    if raw is None:
        return None
    entry, _ = read_entry(RawCost, raw, path, findings, "a table of rates")
    if entry is None:
        return None
    rate = {
        key: _rate((*path, key), getattr(entry, key), findings, quantities)
        for key in ("per_kg", "per_lb", "per_metre", "per_foot", "per_piece")
    }
    _only_one(path, entry, ("per_kg", "per_lb"), findings)
    _only_one(path, entry, ("per_metre", "per_foot"), findings)
    if not entry.catalogue_price and all(value is None for value in rate.values()):
        findings.add(
            path,
            found="no rate",
            expected="per_kg, per_metre, per_piece or catalogue_price = true",
        )
    return CostRates(
        currency=entry.currency.strip(),
        per_kg=_converted(rate["per_kg"], rate["per_lb"], KG_PER_POUND),
        per_metre=_converted(rate["per_metre"], rate["per_foot"], METRES_PER_FOOT),
        per_piece=rate["per_piece"] or 0.0,
        catalogue_price=entry.catalogue_price,
        source=entry.source.strip(),
        date=entry.date.strip(),
    )


def read_carbon(
    path: KeyPath, raw: dict[str, Any] | None, findings: Findings, quantities: Quantities
) -> CarbonFactors | None:
    """Return the carbon factors of an option, None where none are given."""
    if raw is None:
        return None
    entry, _ = read_entry(RawCarbon, raw, path, findings, "a table of factors")
    if entry is None:
        return None
    factor = _rate((*path, "a1_a3"), entry.a1_a3, findings, quantities)
    stored = (
        None
        if entry.biogenic is None
        else quantities.read((*path, "biogenic"), entry.biogenic, "dimensionless")
    )
    if stored is not None and stored > 0.0:
        findings.add(
            (*path, "biogenic"),
            found=f"{stored:g}",
            expected="carbon stored in the material as a negative number, in kgCO2e per kg",
        )
    return CarbonFactors(
        a1_a3=factor or 0.0,
        biogenic=stored,
        source=entry.source.strip(),
        date=entry.date.strip(),
    )


def _rate(path: KeyPath, given: object, findings: Findings, quantities: Quantities) -> float | None:
    if given is None:
        return None
    value = quantities.read(path, given, "dimensionless")
    if value is not None and not 0.0 <= value < math.inf:
        findings.add(path, found=f"{value:g}", expected="a rate of 0 or more")
    return value


def _only_one(path: KeyPath, entry: RawCost, keys: tuple[str, str], findings: Findings) -> None:
    if all(getattr(entry, key) is not None for key in keys):
        findings.add(path, found=f"both {keys[0]} and {keys[1]}", expected="one of the two")


def _converted(metric: float | None, imperial: float | None, unit: float) -> float:
    if metric is not None:
        return metric
    return 0.0 if imperial is None else imperial / unit

"""What the checker found of a certificate, in sentences."""

from __future__ import annotations

from sizing.brief.model import Brief
from sizing.documents.plain_text import visible
from sizing.documents.quantities import shown_units
from sizing.verification import Verification

UNITS = {"mass": "", "cost": " (cost)", "carbon": " kgCO2e"}


def verification_lines(brief: Brief, found: Verification) -> list[str]:
    """Return the verdict on the bound, on the design, and on the files, one sentence each."""
    name = visible(found.about.option)
    if not found.accepted:
        return [
            f"Option {name}: REFUSED. The certificate does not prove its bound: {found.reason}.",
            "Nothing is proven by it.",
        ]
    lines = [
        f"Option {name}: accepted, {found.nodes} nodes checked.",
        f"No choice of sections that passes every check totals less than "
        f"{_amount(brief, found, found.bound)}.",
    ]
    if found.adequate:
        lines.append(
            f"The design named in it passes every check and totals "
            f"{_amount(brief, found, found.objective)}: gap {100.0 * found.gap:.4f} %."
        )
    else:
        lines.append("The design named in it does NOT pass every check.")
    if not found.unchanged:
        lines.append(
            "The brief or its catalogue has changed since the certificate was made; the verdict is "
            "for the files as they are now."
        )
    lines.append("A licensed engineer must check the brief and the design before use.")
    return lines


def _amount(brief: Brief, found: Verification, value: float) -> str:
    if found.about.minimise == "mass":
        return shown_units(brief.units).mass.text(value)
    return f"{value:.2f}{UNITS.get(found.about.minimise, '')}"

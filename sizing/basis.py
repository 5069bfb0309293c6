"""The basis of design of one answer: standard, catalogue, analysis, rates, what was left out."""

from __future__ import annotations

import numpy as np

from sizing.brief.model import Option
from sizing.check import ADEQUATE
from sizing.formulation import GRAVITY, Formulation


def left_out(formulation: Formulation) -> tuple[tuple[str, str], ...]:
    """Return (designation, reason) of sections with a note for some member, each reason once."""
    table, names = formulation.table, formulation.catalogue.designation
    rows: list[tuple[str, str]] = []
    for s, name in enumerate(names):
        reasons = {table.reasons[k] for k in np.unique(table.notes[:, s]) if table.reasons[k]}
        rows.extend((name, reason) for reason in sorted(reasons))
    return tuple(rows)


def basis_of(formulation: Formulation) -> tuple[tuple[str, str], ...]:
    """Return (what, value) rows: everything that the answer rests on."""
    catalogue, option = formulation.catalogue, formulation.option
    return (
        ("Standard", f"{formulation.standard.name} ({formulation.standard.edition})"),
        *formulation.standard.basis(),
        ("Catalogue", f"{catalogue.name}, {len(catalogue)} rows, file {catalogue.source.name}"),
        ("Catalogue SHA-256", catalogue.source.sha256),
        *((f"Catalogue remark {k}", text) for k, text in enumerate(catalogue.remarks, start=1)),
        ("Analysis", "linear elastic direct stiffness, pin-ended two-force members, small "
         "displacements"),
        ("Gravity", f"{GRAVITY} m/s2"),
        *_rates(option),
        ("Connection allowance on self-weight", f"{option.connection_allowance:.1%}"),
        ("Adequate means", f"every utilisation at most {ADEQUATE:.9f}"),
        ("Sign", "tension positive, compression negative"),
    )  # fmt: skip


def _rates(option: Option) -> list[tuple[str, str]]:
    """Return the user's rates with their source and date, as rows of the basis."""
    rows = []
    if option.cost is not None:
        rates = option.cost
        parts = [
            f"{rates.per_kg:g} {rates.currency} per kg" if rates.per_kg else "",
            f"{rates.per_metre:g} {rates.currency} per m" if rates.per_metre else "",
            f"{rates.per_piece:g} {rates.currency} per piece" if rates.per_piece else "",
            "the catalogue's price per m" if rates.catalogue_price else "",
        ]
        given = ", ".join(part for part in parts if part)
        rows.append(("Cost rates", f"{given}; {rates.source}, {rates.date}"))
    if option.carbon is not None:
        factors = option.carbon
        stored = "" if factors.biogenic is None else f", biogenic {factors.biogenic:g} apart"
        rows.append(
            (
                "Embodied carbon factor",
                f"{factors.a1_a3:g} kgCO2e per kg, modules A1 to A3{stored}; {factors.source}, "
                f"{factors.date}",
            )
        )
    return rows

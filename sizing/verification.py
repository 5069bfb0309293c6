"""Re-checking a certificate against the brief, without any of the search code.

The problem is formulated anew from the brief and its catalogue; the checker of
:mod:`sizing.selection.certificate` follows the proof node by node; the design named in the file is
checked by :mod:`sizing.check`. What remains to be trusted is that formulation and these two.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np

from sizing.brief.model import Brief
from sizing.certificate_file import About, read_certificate
from sizing.check import check_design
from sizing.errors import InputError, Problem
from sizing.formulation import Formulation, formulate
from sizing.selection.certificate import verify


@dataclass(frozen=True, kw_only=True, slots=True)
class Verification:
    """What the checker found. ``accepted``: the bound is proven for the brief as it is now.

    ``adequate``: the design named in the file passes every check. ``unchanged``: brief and
    catalogue are the files that the certificate was made for.
    """

    about: About
    accepted: bool
    reason: str
    nodes: int
    bound: float
    objective: float
    adequate: bool
    unchanged: bool

    @property
    def gap(self) -> float:
        """(objective - bound) / objective, at least 0."""
        return max(0.0, (self.objective - self.bound) / self.objective)


def verify_certificate(brief: Brief, path: Path) -> Verification:
    """Check the certificate at ``path`` for one option of the brief.

    Raises :class:`InputError` for a file that is no certificate or belongs to another option.
    """
    certificate, facts = read_certificate(path)
    option = next((o for o in brief.options if o.name == facts.option), None)
    if option is None:
        raise InputError(
            [
                Problem(
                    file=str(path),
                    place="option",
                    found=f"the option {facts.option!r}",
                    expected="one of " + ", ".join(o.name for o in brief.options),
                    fix="Name the brief that the certificate was made for.",
                )
            ]
        )
    formulation = formulate(brief, option)
    verdict = verify(formulation.problem, certificate)
    rows = _rows(formulation, facts, path)
    checked = check_design(brief, option, formulation.standard, formulation.catalogue, rows)
    return Verification(
        about=facts,
        accepted=verdict.accepted,
        reason=verdict.reason,
        nodes=verdict.nodes,
        bound=certificate.bound,
        objective=formulation.problem.objective(np.asarray(rows)),
        adequate=checked.adequate,
        unchanged=brief.source.sha256 == facts.brief_sha256
        and formulation.catalogue.source.sha256 == facts.catalogue_sha256,
    )


def _rows(formulation: Formulation, facts: About, path: Path) -> list[int]:
    index = {name: row for row, name in enumerate(formulation.catalogue.designation)}
    missing = [
        group.name
        for group in formulation.brief.groups
        if facts.sections.get(group.name) not in index
    ]
    if missing:
        raise InputError(
            [
                Problem(
                    file=str(path),
                    place=f"sections of {', '.join(missing)}",
                    found="no section of this catalogue",
                    expected=f"designations of catalogue {formulation.catalogue.name}",
                    fix="Name the brief that the certificate was made for.",
                )
            ]
        )
    return [index[facts.sections[group.name]] for group in formulation.brief.groups]

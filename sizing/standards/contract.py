"""What every standard must offer, and the records that pass to and fro.

A member carries axial force only, so a standard comes down to two numbers for each member,
section and load duration: tension resistance and compression resistance. Sizes: m members,
s sections, k load durations. SI units throughout (N, m, Pa, kg).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal, Protocol

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.formula import Formula

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]
Sense = Literal["tension", "compression"]


class SettingsError(ValueError):
    """A setting, grade or section that the standard does not accept.

    ``key`` is the key inside the option's table; ``expected`` and ``fix`` complete the message
    (see :class:`sizing.errors.Problem`). The formulation adds file and option name.
    """

    def __init__(self, *, key: str, found: str, expected: str, fix: str = "") -> None:
        self.key, self.found, self.expected, self.fix = key, found, expected, fix
        super().__init__(f"{key}: found {found}; expected {expected}. {fix}".strip())


@dataclass(frozen=True, kw_only=True)
class MemberConditions:
    """What a standard must know of each member; arrays of length m.

    ``length``: node to node, m. ``in_plane``, ``out_of_plane``: buckling lengths, m.
    ``depth_in_plane``: section depth lies in the plane of the truss (in-plane buckling is then
    about the major axis). ``net_factor``: net over gross area at the joints.
    ``max_slenderness_compression``, ``max_slenderness_tension``: limits on L/i, inf for none.
    ``role``: the group's name, for presets and messages.
    """

    length: FloatArray
    in_plane: FloatArray
    out_of_plane: FloatArray
    depth_in_plane: BoolArray
    net_factor: FloatArray
    max_slenderness_compression: FloatArray
    max_slenderness_tension: FloatArray
    role: tuple[str, ...]


@dataclass(frozen=True, kw_only=True)
class ResistanceTable:
    """Resistances in N, all >= 0, with the clause that governs each.

    ``tension``, ``compression``: (m, s, k). ``tension_clause``, ``compression_clause``:
    (m, s, k) indices into ``clauses`` (short texts such as ``6.3.1 buckling in plane``).
    ``slenderness_in``, ``slenderness_out``: (m, s), L/i in and out of plane as the standard
    forms it. ``usable``: (m, s), False where the section may not be used for the member at
    all (for instance beyond the tension slenderness limit). ``notes``: (m, s) indices into
    ``reasons``: why a compression resistance is zero or a section unusable; reason 0 is empty.
    """

    durations: tuple[LoadDuration, ...]
    clauses: tuple[str, ...]
    reasons: tuple[str, ...]
    tension: FloatArray
    compression: FloatArray
    tension_clause: IntArray
    compression_clause: IntArray
    slenderness_in: FloatArray
    slenderness_out: FloatArray
    usable: BoolArray
    notes: IntArray


@dataclass(frozen=True, kw_only=True, slots=True)
class Step:
    """One line of a worked check: ``symbol`` = ``expression`` = ``value`` ``unit``, by ``clause``.

    ``value`` is SI; ``unit`` is the SI unit as text (``N``, ``m``, ``Pa``, ``-``). ``expression``
    is the formula in the symbols of the earlier lines, for print, or the origin of an input.
    ``formula`` is the same formula in a form that can be worked again; None for an input.
    """

    symbol: str
    expression: str
    value: float
    unit: str
    clause: str
    meaning: str = ""
    formula: Formula | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Material:
    """Stiffness and density that the analysis uses: ``E`` in Pa, ``density`` in kg/m³.

    ``E`` is the modulus for forces and deflections (mean value for timber). ``creep`` is the
    extra deflection per unit of elastic deflection under long-term load: kdef of EN 1995-1-1,
    Kcr − 1 of NDS, 0 for steel.
    """

    name: str
    E: float
    density: float
    creep: float = 0.0


class Standard(Protocol):
    """A design standard with its grade and settings already chosen."""

    @property
    def name(self) -> str:
        """Name as in the registry."""

    @property
    def edition(self) -> str:
        """Edition or method, for print beside the name."""

    @property
    def material(self) -> Material:
        """Stiffness and density of the chosen grade."""

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the resistances of every section for every member and load duration."""

    def working(
        self,
        catalogue: Catalogue,
        section: int,
        members: MemberConditions,
        member: int,
        duration: LoadDuration,
        sense: Sense,
    ) -> tuple[Step, ...]:
        """Return the worked lines that lead to one resistance; the last line is the resistance."""

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""

    def cautions(self) -> tuple[str, ...]:
        """Return what this standard's check leaves out, in plain sentences."""


class StandardFactory(Protocol):
    """Build a standard from an option's grade and settings; raise :class:`SettingsError`."""

    def __call__(self, grade: str | None, settings: Mapping[str, Any]) -> Standard:
        """Return the standard with its choices made."""

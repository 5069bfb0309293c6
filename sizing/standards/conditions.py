"""Members that differ in nothing a standard looks at, and the table that serves them all.

A truss of 200 members has a few dozen distinct conditions at most. Standards compute on the
distinct ones (u) and spread the answer over members and load durations as views.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import (
    BoolArray,
    FloatArray,
    IntArray,
    MemberConditions,
    ResistanceTable,
)

LIMIT_ROUNDING = 1e-9
"""Relative excess over a limit that still counts as met: unit conversion rounds in the 16th
digit, while dimensions and limits are given to four digits."""


@dataclass(frozen=True, kw_only=True)
class Resistances:
    """What a standard finds for distinct members u and sections s, independent of duration.

    All arrays are (u, s) and mean what they mean in
    :class:`~sizing.standards.contract.ResistanceTable`.
    """

    tension: FloatArray
    compression: FloatArray
    tension_clause: IntArray
    compression_clause: IntArray
    slenderness_in: FloatArray
    slenderness_out: FloatArray
    usable: BoolArray
    notes: IntArray


class Reasons:
    """Collects reason texts; index 0 is the empty reason."""

    def __init__(self) -> None:
        self._index = {"": 0}

    def index(self, text: str) -> int:
        """Return the index of ``text``, adding it when it is new."""
        return self._index.setdefault(text, len(self._index))

    def texts(self) -> tuple[str, ...]:
        """Return all reasons in the order of their indices."""
        return tuple(self._index)


def distinct_members(members: MemberConditions) -> tuple[MemberConditions, IntArray]:
    """Return the distinct conditions (u) and the one that belongs to each member (m,)."""
    roles = {role: i for i, role in enumerate(dict.fromkeys(members.role))}
    columns = np.column_stack(
        [
            members.length,
            members.in_plane,
            members.out_of_plane,
            members.depth_in_plane,
            members.net_factor,
            members.max_slenderness_compression,
            members.max_slenderness_tension,
            [roles[role] for role in members.role],
        ]
    )
    _, first, inverse = np.unique(columns, axis=0, return_index=True, return_inverse=True)
    return take_members(members, first), np.asarray(inverse, dtype=np.intp).reshape(-1)


def take_members(members: MemberConditions, index: IntArray) -> MemberConditions:
    """Return the conditions of the members ``index``."""
    return MemberConditions(
        length=members.length[index],
        in_plane=members.in_plane[index],
        out_of_plane=members.out_of_plane[index],
        depth_in_plane=members.depth_in_plane[index],
        net_factor=members.net_factor[index],
        max_slenderness_compression=members.max_slenderness_compression[index],
        max_slenderness_tension=members.max_slenderness_tension[index],
        role=tuple(members.role[int(i)] for i in index),
    )


def take_section(catalogue: Catalogue, section: int) -> Catalogue:
    """Return a catalogue that holds row ``section`` only."""
    return catalogue.only(section)


def limit_slenderness(
    found: Resistances,
    slenderness: FloatArray,
    members: MemberConditions,
    reasons: Reasons,
    clause: int,
) -> Resistances:
    """Apply the limits on L/i (u, s): no compression beyond one, not usable beyond the other.

    A section is used for a member only within ``max_slenderness_tension``; it resists
    compression only within ``max_slenderness_compression``, and ``clause`` is then the index of
    its clause. Reasons already given stand.
    """
    too_slender = beyond(slenderness, members.max_slenderness_compression[:, None])
    unusable = beyond(slenderness, members.max_slenderness_tension[:, None])
    notes = found.notes.copy()
    governs = too_slender & (notes == 0)
    for u in np.flatnonzero(too_slender.any(axis=1)):
        limit = float(members.max_slenderness_compression[u])
        text = f"slenderness L/i exceeds {limit:g}, the limit for members in compression"
        notes[u] = np.where(governs[u], reasons.index(text), notes[u])
    for u in np.flatnonzero(unusable.any(axis=1)):
        limit = float(members.max_slenderness_tension[u])
        text = f"slenderness L/i exceeds {limit:g}, the limit for members in tension"
        notes[u] = np.where(unusable[u] & found.usable[u], reasons.index(text), notes[u])
    return Resistances(
        tension=found.tension,
        compression=np.where(too_slender, 0.0, found.compression),
        tension_clause=found.tension_clause,
        compression_clause=np.where(governs, clause, found.compression_clause),
        slenderness_in=found.slenderness_in,
        slenderness_out=found.slenderness_out,
        usable=found.usable & ~unusable,
        notes=notes,
    )


def beyond(value: FloatArray, limit: FloatArray | float) -> BoolArray:
    """Return where ``value`` exceeds ``limit`` by more than rounding."""
    return np.asarray(value > np.asarray(limit) * (1.0 + LIMIT_ROUNDING))


def spread(
    found: Resistances,
    inverse: IntArray,
    durations: Sequence[LoadDuration],
    clauses: tuple[str, ...],
    reasons: tuple[str, ...],
) -> ResistanceTable:
    """Return the table members × sections × durations; the duration axis is a read-only view."""
    shape = (inverse.size, found.tension.shape[1], len(durations))

    def over_durations(values: FloatArray) -> FloatArray:
        return np.broadcast_to(values[inverse][:, :, None], shape)

    def clause_over_durations(values: IntArray) -> IntArray:
        return np.broadcast_to(values[inverse][:, :, None], shape)

    return ResistanceTable(
        durations=tuple(durations),
        clauses=clauses,
        reasons=reasons,
        tension=over_durations(found.tension),
        compression=over_durations(found.compression),
        tension_clause=clause_over_durations(found.tension_clause),
        compression_clause=clause_over_durations(found.compression_clause),
        slenderness_in=found.slenderness_in[inverse],
        slenderness_out=found.slenderness_out[inverse],
        usable=found.usable[inverse],
        notes=found.notes[inverse],
    )

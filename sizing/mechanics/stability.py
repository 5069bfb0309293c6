"""Whether a truss stands: the count of redundants, and what to say when it does not."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sizing.errors import UnstableTrussError
from sizing.mechanics.geometry import FloatArray, Geometry
from sizing.mechanics.mechanisms import Mechanisms, find_mechanisms
from sizing.mechanics.movement import STOPS, Mechanism

AXES = "xyz"
NAMED_NODES = 6
"""Nodes named in one line; more are counted."""

SHOWN = 8
"""Movements described one by one; more are counted."""

ALONG = 0.9995
"""Cosine above which a direction is called by its axis: within two degrees."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Determinacy:
    """The count: redundants − mechanisms = members − free displacements (Maxwell, Calladine)."""

    members: int
    free_displacements: int
    mechanisms: int
    redundants: int

    @property
    def determinate(self) -> bool:
        """Whether equilibrium alone gives every member force."""
        return self.mechanisms == 0 and self.redundants == 0


def determinacy(geometry: Geometry, mechanisms: Mechanisms | None = None) -> Determinacy:
    """Return the count for a truss; ``mechanisms`` may bring what was already found."""
    found = find_mechanisms(geometry) if mechanisms is None else mechanisms
    return Determinacy(
        members=geometry.members,
        free_displacements=int(geometry.free.size),
        mechanisms=len(found.found),
        redundants=found.redundants,
    )


def require_stable(geometry: Geometry, node_names: Sequence[str]) -> Mechanisms:
    """Return what ``find_mechanisms`` found when the truss stands.

    Raises ``UnstableTrussError`` when any movement strains no member; the message names the
    nodes, their directions and what would stop each movement.
    """
    found = find_mechanisms(geometry)
    if found.found:
        raise UnstableTrussError(mechanism_text(geometry, found, node_names))
    return found


def mechanism_text(geometry: Geometry, found: Mechanisms, node_names: Sequence[str]) -> str:
    """Return the movements as lines of text, smallest culprit first; empty when there is none."""
    count = len(found.found)
    if count == 0:
        return ""
    moves = "one movement strains" if count == 1 else f"{count} independent movements strain"
    lines = [f"The truss is a mechanism: {moves} no member."]
    described = _node_lines(geometry, found, node_names)
    described += [_rigid_line(m, node_names) for m in found.found if m.kind == "rigid"]
    described += [_linkage_line(m, node_names) for m in found.found if m.kind == "linkage"]
    lines += [f"- {line}" for line in described[:SHOWN]]
    if len(described) > SHOWN:
        lines.append(f"- and {len(described) - SHOWN} more.")
    return "\n".join(lines)


def nearly_flat_text(found: Mechanisms, node_names: Sequence[str]) -> tuple[str, ...]:
    """Return one caution per node whose members almost lie in one line or plane."""
    return tuple(
        f"Node {node_names[node]} is nearly unstable: its members lie in one line or plane to "
        f"within {sine:.1e} of their length, and no support holds it across that."
        for node, sine in found.nearly_flat
    )


def _node_lines(geometry: Geometry, found: Mechanisms, names: Sequence[str]) -> list[str]:
    """Return one line per direction in which single nodes are loose, and one for bare nodes."""
    joined = np.zeros(geometry.nodes, dtype=np.bool_)
    joined[geometry.start] = joined[geometry.end] = True
    bare: dict[int, None] = {}
    by_way: dict[str, list[int]] = {}
    for mechanism in found.found:
        if mechanism.kind == "node":
            (node,) = mechanism.nodes
            if joined[node]:
                by_way.setdefault(direction_text(mechanism.movement[node]), []).append(node)
            else:
                bare[node] = None
    lines = []
    if bare:
        have, them = ("has", "it") if len(bare) == 1 else ("have", "them")
        who = _capital(_named(list(bare), names))
        lines.append(f"{who} {have} no member. Join {them} to the truss or take {them} out.")
    for way, nodes in by_way.items():
        each, all_, it = (
            ("", "every member there stands", "it")
            if len(nodes) == 1
            else ("each ", "every member at them stands", "each of them")
        )
        who = _named(nodes, names)
        lines.append(
            f"{_capital(who)} can {each}move {way}: {all_} square to that. Add a member at {it} "
            f"with a component {way}, or hold {it} {way}."
        )
    return lines


def _capital(text: str) -> str:
    return text[0].upper() + text[1:]


def _rigid_line(mechanism: Mechanism, names: Sequence[str]) -> str:
    what = (
        "The whole truss"
        if mechanism.whole
        else f"The separate part with {_named(mechanism.nodes, names)}"
    )
    moves = mechanism.movement[list(mechanism.nodes)]
    size = np.linalg.norm(mechanism.movement, axis=1)
    still = [int(i) for i in np.flatnonzero(size <= STOPS)]
    if np.abs(moves - moves[0]).max() <= STOPS and not (mechanism.whole and still):
        way = direction_text(moves[0])
        return f"{what} can slide {way}: no support stops it. Hold a node {way}."
    about = f" about {_named(still, names)}" if mechanism.whole and still else ""
    far = mechanism.nodes[int(np.argmax(np.linalg.norm(moves, axis=1)))]
    way = direction_text(mechanism.movement[far])
    return f"{what} can turn{about}: too few supports. Hold, for example, {names[far]} {way}."


def _linkage_line(mechanism: Mechanism, names: Sequence[str]) -> str:
    parts = [
        f"{names[i]} {direction_text(mechanism.movement[i])}" for i in mechanism.nodes[:NAMED_NODES]
    ]
    more = len(mechanism.nodes) - len(parts)
    tail = f" and {more} more" if more else ""
    text = f"Nodes move together without straining any member ({', '.join(parts)}{tail})"
    if mechanism.panel is not None and mechanism.stop is not None:
        a, b, c, e = (names[i] for i in mechanism.panel)
        return (
            f"{text}: the panel {a}-{b}-{c}-{e} has no diagonal. "
            f"Add a member {a}-{c} or {b}-{e}, or a support."
        )
    if mechanism.stop is not None:
        a, c = (names[i] for i in mechanism.stop)
        return f"{text}. A member {a}-{c} would stop it; so would a support in its way."
    return f"{text}. Add a member or a support."


def direction_text(vector: FloatArray) -> str:
    """Return ``along x``, or ``along (0.71, -0.71)`` for a direction between the axes."""
    unit = vector / np.linalg.norm(vector)
    axis = int(np.argmax(np.abs(unit)))
    if abs(unit[axis]) >= ALONG:
        return f"along {AXES[axis]}"
    return f"along ({', '.join(f'{round(float(v), 2) + 0.0:g}' for v in unit)})"


def _named(nodes: Sequence[int], names: Sequence[str]) -> str:
    shown = ", ".join(names[i] for i in nodes[:NAMED_NODES])
    more = len(nodes) - NAMED_NODES
    word = "node" if len(nodes) == 1 else "nodes"
    return f"{word} {shown}" + (f" and {more} more" if more > 0 else "")

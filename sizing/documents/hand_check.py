"""A hand check beside the matrix result: plane trusses cut in two by a vertical section.

Where a vertical section cuts three members, equilibrium of the part to its left gives each of
them without any stiffness (method of sections, Ritter 1862): a chord from the moment about the
point where the other two meet, over its distance (moment / depth); a diagonal between parallel
chords from the shear (shear / sin θ), between inclined ones from the moment about the point
where the chords meet.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from sizing.brief.model import Brief
from sizing.check import factored_loads
from sizing.documents.plain_text import visible
from sizing.documents.quantities import ShownUnits
from sizing.formulation import GRAVITY
from sizing.results import OptionResult

PARALLEL = 1e-6
"""Sine of the angle below which two lines count as parallel: their meeting point is far away."""

SAME_PLACE = 1e-6
"""Share of the span within which nodes stand on one vertical line (rounded coordinates)."""

AGREES = 1e-6
"""Share of the greatest member force up to which hand and matrix result are one number."""

Vector = tuple[float, float]


@dataclass(frozen=True, kw_only=True, slots=True)
class HandCheck:
    """One member worked by hand: ``lines`` of (what, how, value), and whether both agree.

    ``by_hand`` and ``by_matrix`` are its force in N, tension positive.
    """

    heading: str
    lines: tuple[tuple[str, str, str], ...]
    mark: str
    by_hand: float
    by_matrix: float
    agrees: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class _Cut:
    """A vertical section at ``x`` through three members (indices)."""

    x: float
    members: tuple[int, int, int]


@dataclass(frozen=True, kw_only=True, slots=True)
class _Part:
    """What acts on the part left of the cut: (place, force) of loads and reactions."""

    loads: tuple[tuple[Vector, Vector], ...]
    reactions: tuple[tuple[Vector, Vector], ...]

    def total(self) -> Vector:
        """Return the sum of all forces."""
        forces = [force for _, force in (*self.loads, *self.reactions)]
        return math.fsum(f[0] for f in forces), math.fsum(f[1] for f in forces)

    def moment(self, about: Vector) -> float:
        """Return the moment of all forces about a point, anticlockwise positive."""
        acting = (*self.loads, *self.reactions)
        return math.fsum(_cross((p[0] - about[0], p[1] - about[1]), f) for p, f in acting)


def hand_checks(
    brief: Brief, option: OptionResult, units: ShownUnits
) -> tuple[tuple[HandCheck, ...], str]:
    """Return the hand check of a chord and of a diagonal, or why there is none."""
    if brief.dimensions != 2:
        return (), "A space truss: a section cuts more members than equilibrium alone can give."
    cuts = list(_cuts(brief))
    if not cuts:
        return (), (
            "No vertical section cuts exactly three members that do not meet in one point "
            "(crossed diagonals, or a statically indeterminate web)."
        )
    found = []
    for chord in (True, False):
        at = _most_loaded(brief, option, cuts, chord=chord)
        if at is not None:
            found.append(_worked(brief, option, units, *at))
    return tuple(found), "" if found else "No member at such a section carries a force."


def _cuts(brief: Brief) -> Iterator[_Cut]:
    """Find the vertical sections between neighbouring columns of nodes that cut three members."""
    xs = sorted({node.position[0] for node in brief.nodes})
    near = SAME_PLACE * (xs[-1] - xs[0])
    for left, right in pairwise(xs):
        if right - left <= near:
            continue
        x = 0.5 * (left + right)
        crossing = [
            i for i, m in enumerate(brief.members)
            if (_place(brief, m.start)[0] < x) != (_place(brief, m.end)[0] < x)
        ]  # fmt: skip
        if len(crossing) == 3:
            a, b, c = crossing
            if _solvable(brief, (a, b, c)):
                yield _Cut(x=x, members=(a, b, c))


def _solvable(brief: Brief, members: tuple[int, int, int]) -> bool:
    """Return whether the three are neither all parallel nor through one point."""
    for i in members:
        others = [k for k in members if k != i]
        start, along = _line(brief, i)
        meeting = _meeting(brief, *others)
        if meeting is None:
            across = _normal(_line(brief, others[0])[1])
            if abs(_dot(along, across)) <= PARALLEL:
                return False
        elif abs(_cross(_minus(start, meeting), along)) <= PARALLEL * brief.members[i].length:
            return False
    return True


def _most_loaded(
    brief: Brief, option: OptionResult, cuts: list[_Cut], *, chord: bool
) -> tuple[_Cut, int, int] | None:
    """Return the cut, member and strength combination with the greatest force of a chord or web.

    The web member of a cut is the steepest of the three.
    """
    strength = brief.combinations_of("strength")
    best: tuple[float, _Cut, int, int] | None = None
    for cut in cuts:
        web = max(cut.members, key=lambda i: abs(_line(brief, i)[1][1]))
        for i in (m for m in cut.members if (m != web) == chord):
            for c in strength:
                size = abs(option.members[i].forces[c])
                if size > 0.0 and (best is None or size > best[0]):
                    best = (size, cut, i, c)
    return None if best is None else best[1:]


def _part(brief: Brief, option: OptionResult, cut: _Cut, combination: int) -> _Part:
    weight = np.array([m.mass_per_metre for m in option.members])
    weight = weight * GRAVITY * (1.0 + option.connection_allowance)
    acting = factored_loads(brief, weight, [brief.combinations[combination].factors])[:, :, 0]
    name = option.combinations[combination].name
    index = {node.name: i for i, node in enumerate(brief.nodes)}
    loads = [
        (_place(brief, n), (float(force[0]), float(force[1])))
        for n, force in enumerate(acting)
        if _place(brief, n)[0] < cut.x and np.any(force)
    ]
    reactions = [
        (_place(brief, index[r.node]), (r.components[0], r.components[1]))
        for r in option.reactions
        if r.combination == name and _place(brief, index[r.node])[0] < cut.x
    ]
    return _Part(loads=tuple(loads), reactions=tuple(reactions))


def _worked(
    brief: Brief, option: OptionResult, units: ShownUnits, cut: _Cut, i: int, c: int
) -> HandCheck:
    part = _part(brief, option, cut, c)
    others = [k for k in cut.members if k != i]
    names = [visible(option.members[k].mark) for k in (i, *others)]
    start, along = _line(brief, i)
    meeting = _meeting(brief, *others)
    force, length = units.force, units.length
    total = part.total()
    lines = [
        (
            "Section", "vertical, through three members",
            f"x = {length.text(cut.x)}: {', '.join(names)}",
        ),
        ("Loads left of it", f"{len(part.loads)} nodes, member weight included",
         _sum_text(part.loads, units)),
        ("Reactions left of it", "as listed", _sum_text(part.reactions, units)),
    ]  # fmt: skip
    if meeting is None:
        across = _normal(_line(brief, others[0])[1])
        across = across if across[1] >= 0.0 else (-across[0], -across[1])
        shear, sine = _dot(total, across), _dot(along, across)
        by_hand = -shear / sine
        lines += [
            ("Shear V", f"sum of forces across {names[1]} and {names[2]}", force.text(abs(shear))),
            ("sin θ", f"of {names[0]} to the chords", f"{abs(sine):.4f}"),
            (f"Force in {names[0]}", "V / sin θ, sense from equilibrium", _sense(by_hand, units)),
        ]
    else:
        moment = part.moment(meeting)
        arm = _cross(_minus(start, meeting), along)
        by_hand = -moment / arm
        factor = force.scale * length.scale
        where = f"x = {length.text(meeting[0])}, y = {length.text(meeting[1])}"
        lines += [
            ("Moment M", f"about the point where {names[1]} and {names[2]} meet ({where})",
             f"{moment * factor:.{force.places}f} {force.unit} {length.unit}"),
            ("Depth h", f"from that point to {names[0]}", length.text(abs(arm))),
            (f"Force in {names[0]}", "|M| / h, sense from equilibrium", _sense(by_hand, units)),
        ]  # fmt: skip
    by_matrix = option.members[i].forces[c]
    greatest = max(abs(m.forces[c]) for m in option.members)
    lines.append(("Matrix result", "stiffness method", _sense(by_matrix, units)))
    lines.append(("Difference", "hand less matrix", force.text(by_hand - by_matrix)))
    return HandCheck(
        heading=f"Member {names[0]}, combination {visible(option.combinations[c].name)}",
        lines=tuple(lines),
        mark=names[0],
        by_hand=by_hand,
        by_matrix=by_matrix,
        agrees=abs(by_hand - by_matrix) <= AGREES * greatest,
    )


def _sum_text(acting: tuple[tuple[Vector, Vector], ...], units: ShownUnits) -> str:
    along = math.fsum(force[0] for _, force in acting)
    up = math.fsum(force[1] for _, force in acting)
    return f"Σ x {units.force.text(along)}, Σ y {units.force.text(up)}"


def _sense(force: float, units: ShownUnits) -> str:
    return f"{units.force.text(abs(force))} {'T' if force > 0.0 else 'C'}"


def _place(brief: Brief, node: int) -> Vector:
    x, y = brief.nodes[node].position
    return x, y


def _line(brief: Brief, i: int) -> tuple[Vector, Vector]:
    """Return the left end of a member and its direction, to the right, as a unit vector."""
    member = brief.members[i]
    a, b = _place(brief, member.start), _place(brief, member.end)
    if a[0] > b[0]:
        a, b = b, a
    length = math.dist(a, b)
    return a, ((b[0] - a[0]) / length, (b[1] - a[1]) / length)


def _meeting(brief: Brief, i: int, k: int) -> Vector | None:
    """Return where the lines of two members meet, None where they are parallel."""
    (p, d), (q, e) = _line(brief, i), _line(brief, k)
    turn = _cross(d, e)
    if abs(turn) <= PARALLEL:
        return None
    t = _cross(_minus(q, p), e) / turn
    return p[0] + t * d[0], p[1] + t * d[1]


def _minus(a: Vector, b: Vector) -> Vector:
    return a[0] - b[0], a[1] - b[1]


def _normal(a: Vector) -> Vector:
    return -a[1], a[0]


def _dot(a: Vector, b: Vector) -> float:
    return a[0] * b[0] + a[1] * b[1]


def _cross(a: Vector, b: Vector) -> float:
    return a[0] * b[1] - a[1] * b[0]

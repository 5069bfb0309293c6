"""From a checked design to the pieces to be sawn: order lengths, runs of chords, splices."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from sizing.brief.model import Brief, Group
from sizing.cutting_runs import FITS, Run, runs_of, splices_of
from sizing.results import MemberResult

NOTHING = 1e-9
"""Part of a rounding step by which a length may exceed a multiple and still counts as it."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Piece:
    """One piece of one truss: its ``mark`` and order length in m."""

    mark: str
    length: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Pieces:
    """The pieces of one group, and (run, where) of its splices in words."""

    pieces: tuple[Piece, ...]
    splices: tuple[tuple[str, str], ...]


def rounded_up(length: float, step: float | None) -> float:
    """Return the least multiple of ``step`` that is not below ``length``; the length for None."""
    return length if step is None else math.ceil(length / step - NOTHING) * step


def with_order_lengths(brief: Brief, members: tuple[MemberResult, ...]) -> tuple[MemberResult, ...]:
    """Return the members with their order length where their group says what is deducted.

    Members of a run of several are not sawn one by one and keep None.
    """
    alone: set[int] = set()
    for g, group in enumerate(brief.groups):
        if group.end_deduction is not None:
            runs = runs_of(brief, g) if group.continuous else ()
            joined = {i for run in runs if len(run.members) > 1 for i in run.members}
            alone |= set(group.members) - joined
    return tuple(
        replace(m, order_length=_order_length(brief.groups[brief.members[i].group], m.length))
        if i in alone
        else m
        for i, m in enumerate(members)
    )


def _order_length(group: Group, system_length: float) -> float:
    start, end = group.end_deduction or (0.0, 0.0)
    return rounded_up(system_length - start - end, group.order_step)


def pieces_of(brief: Brief, group: int, stock: Sequence[float], longest: float | None) -> Pieces:
    """Return the pieces of a group cut from bars of usable lengths ``stock`` (m).

    ``longest``: the longest piece that can be carried, m. A group that allows splices between
    nodes divides what is longer than every bar, or than that, into the fewest equal pieces.
    """
    this = brief.groups[group]
    most = min([max(stock, default=math.inf), *([] if longest is None else [longest])])
    runs = (
        runs_of(brief, group)
        if this.continuous
        else tuple(Run(members=(i,), nodes=()) for i in this.members)
    )
    pieces: list[Piece] = []
    splices: list[tuple[str, str]] = []
    for run in runs:
        lengths = _deducted(brief, this, run)
        places = splices_of(lengths, stock, most) if len(lengths) > 1 else []
        marks = [brief.members[i].mark for i in run.members]
        if places:
            nodes = ", ".join(brief.nodes[run.nodes[k]].name for k in places)
            splices.append((_span(marks), f"at {nodes}"))
        for start, end in zip([0, *places], [*places, len(lengths)], strict=True):
            mark = _span(marks[start:end])
            length = rounded_up(math.fsum(lengths[start:end]), this.order_step)
            parts = math.ceil((length - FITS) / most) if this.splices else 1
            if parts > 1:
                splices.append((mark, f"between nodes, into {parts} equal pieces"))
            part = rounded_up(length / parts, this.order_step) if parts > 1 else length
            pieces += [Piece(mark=mark, length=part)] * parts
    return Pieces(pieces=tuple(pieces), splices=tuple(splices))


def _deducted(brief: Brief, group: Group, run: Run) -> list[float]:
    """Return the run's member lengths in m, its ends less what the joints there take off.

    The run's first node is the start of its first member, as listed in the brief or turned round.
    """
    lengths = [brief.members[i].length for i in run.members]
    first, last = group.end_deduction or (0.0, 0.0)
    if run.nodes and brief.members[run.members[0]].start != run.nodes[0]:
        first, last = last, first
    lengths[0] -= first
    lengths[-1] -= last
    return lengths


def _span(marks: Sequence[str]) -> str:
    return marks[0] if len(marks) == 1 else f"{marks[0]} to {marks[-1]}"

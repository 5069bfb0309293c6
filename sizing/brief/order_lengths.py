"""Keys of a group about cutting: what its joints take off each member, and how it is rounded."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from pydantic import Field

from sizing.brief.findings import Findings, KeyPath, Quantities
from sizing.brief.raw_tables import RawGroup, RawTable, read_entry

COARSEST_STEP = 1.0
"""m. Order lengths are rounded to some millimetres or centimetres (common practice)."""


class RawDeduction(RawTable):
    """``end_deduction`` as a table."""

    REQUIRED = ("start", "end")
    start: Any = Field(None, description='a length, such as "35 mm"')
    end: Any = Field(None, description='a length, such as "35 mm"')


def read_end_deduction(
    path: KeyPath,
    entry: RawGroup,
    lengths: Sequence[float],
    findings: Findings,
    quantities: Quantities,
) -> tuple[float, float] | None:
    """Return what is taken off a member at its first and second node, in m; None if not given.

    ``lengths`` are the system lengths of the group's members, of which something must be left.
    A deduction below 0 adds: the member runs past its node.
    """
    given, place = entry.end_deduction, (*path, "end_deduction")
    if given is None:
        return None
    if isinstance(given, dict):
        table, faulty = read_entry(RawDeduction, given, place, findings, "a table")
        if table is None or faulty:
            return None
        start = quantities.read((*place, "start"), table.start, "length")
        end = quantities.read((*place, "end"), table.end, "length")
    else:
        start = end = quantities.read(place, given, "length")
    if start is None or end is None:
        return None
    shortest = min(lengths, default=1.0)
    if abs(start) + abs(end) >= shortest:
        findings.add(
            place,
            found=f"{abs(start) + abs(end):.4g} m at both ends together",
            expected=f"less than the shortest member of the group, {shortest:.4g} m",
        )
        return None
    return start, end


def read_order_step(
    path: KeyPath, entry: RawGroup, findings: Findings, quantities: Quantities
) -> float | None:
    """Return the step in m to whose multiples order lengths are rounded up; None if not given."""
    place = (*path, "order_length")
    if entry.order_length is None:
        return None
    step = quantities.read(place, entry.order_length, "length")
    if step is not None and not 0.0 < step <= COARSEST_STEP:
        findings.add(
            place,
            found=f"{step:g} m",
            expected='a step that order lengths are rounded up to, such as "5 mm"',
        )
        return None
    if step is not None and entry.end_deduction is None:
        findings.add(
            place,
            found="order_length without end_deduction",
            expected="end_deduction in the same group",
            fix="Write end_deduction = 0 where nothing is taken off.",
        )
    return step

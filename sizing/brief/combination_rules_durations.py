"""Usual load durations of each kind of action, and the part of a load that acts for long.

EN 1995-1-1 Table 2.2 leaves snow (medium or short) and wind (short or instantaneous) to the
national annex; the longer and safer one is usual here. NDS Table 2.3.2: dead load permanent,
occupancy ten years, snow two months, roof live load seven days, wind ten minutes. The model's
five classes of EN 1995-1-1 Table 2.1 hold the five of NDS: ten years is *long*, two months
*medium*, seven days *short*, ten minutes *instantaneous*. Both tables recalled.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping, Sequence

from sizing.brief.model import ActionKind, LoadCase, LoadDuration

LONGEST_FIRST: tuple[LoadDuration, ...] = (
    "permanent",
    "long",
    "medium",
    "short",
    "instantaneous",
)

UsualDurations = Mapping[ActionKind, LoadDuration]

EN_DURATIONS: UsualDurations = {
    "permanent": "permanent",
    "settlement": "permanent",
    "imposed": "medium",
    "imposed roof": "short",
    "snow": "medium",
    "wind": "short",
    "temperature": "medium",
    "other": "permanent",
}
US_DURATIONS: UsualDurations = {
    "permanent": "permanent",
    "settlement": "permanent",
    "imposed": "long",
    "imposed roof": "short",
    "snow": "medium",
    "wind": "instantaneous",
    "temperature": "medium",
    "other": "permanent",
}


def usual_durations(standards: Iterable[str]) -> UsualDurations:
    """Return the usual durations for a brief whose options use ``standards`` (their names).

    NDS alone takes the American table, everything else the European; where both timber
    standards are asked for, the longer duration of each kind, which is on the safe side.
    """
    names = [name.casefold() for name in standards]
    american, european = any("nds" in name for name in names), ask_en1995(names)
    if american and european:
        return {
            kind: min(EN_DURATIONS[kind], US_DURATIONS[kind], key=LONGEST_FIRST.index)
            for kind in EN_DURATIONS
        }
    return US_DURATIONS if american else EN_DURATIONS


def ask_en1995(standards: Iterable[str]) -> bool:
    """Return whether EN 1995-1-1 is among the names of standards."""
    names = ["".join(name.casefold().split()) for name in standards]
    return any("1995" in name or "eurocode5" in name or name == "ec5" for name in names)


def shortest_duration(
    of: Collection[int], cases: Sequence[LoadCase], usual: UsualDurations
) -> LoadDuration:
    """Return the shortest load duration of the cases ``of`` (EN 1995-1-1 3.1.3(2), NDS 2.3.2)."""
    found: list[LoadDuration] = [cases[q].duration or usual[cases[q].kind] for q in of]
    return max(found, key=LONGEST_FIRST.index, default="permanent")

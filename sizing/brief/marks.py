"""Short member marks for the schedule: the group's initials and a running number."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from itertools import chain, count

RULE_PREFIXES = frozenset("US")
"""Combination rules name what they make U1, U2, ... and S1, S2, ...; no member is called so."""


def mark_prefixes(
    groups: Sequence[str], sizes: Sequence[int] | None = None, reserved: Iterable[str] = ()
) -> tuple[str, ...]:
    """Return one distinct prefix per group name: ``bottom-chord`` gives ``BC``.

    A name that ends in a number keeps it, followed by a point (``diagonals-2`` gives ``D2.``).
    Where two names share their initials, the later takes more letters of its first word, and
    at last a further letter. So does one whose marks up to its number of members (``sizes``)
    would meet a name in ``reserved`` (of a node or a combination), in capitals or not.
    """
    names = frozenset(name.casefold() for name in reserved)
    taken = set(RULE_PREFIXES)
    prefixes = []
    for name, size in zip(groups, sizes or [0] * len(groups), strict=True):
        prefix = next(
            p for p in _candidates(name) if p not in taken and names.isdisjoint(_marks(p, size))
        )
        taken.add(prefix)
        prefixes.append(prefix)
    return tuple(prefixes)


def member_marks(
    groups: Sequence[str], sizes: Sequence[int], reserved: Iterable[str] = ()
) -> tuple[tuple[str, ...], ...]:
    """Return the marks of the members of each group, numbered from 1 in the group's order.

    None of them is a name in ``reserved``; see :func:`mark_prefixes`.
    """
    return tuple(
        tuple(f"{prefix}{number}" for number in range(1, size + 1))
        for prefix, size in zip(mark_prefixes(groups, sizes, reserved), sizes, strict=True)
    )


def _marks(prefix: str, size: int) -> Iterator[str]:
    """Yield the marks as they are compared with other names."""
    return (f"{prefix}{number}".casefold() for number in range(1, size + 1))


def _candidates(name: str) -> Iterator[str]:
    words = re.findall(r"[^\W\d_]+|\d+", name) or ["M"]
    first = words[0]
    rest = "".join(w if w.isdigit() else w[0].upper() for w in words[1:])
    heads = [first] if first.isdigit() else [first[:n].upper() for n in range(1, len(first) + 1)]
    initials = heads[0] + rest
    further = (initials + _letters(number) for number in count(1))
    for prefix in chain((head + rest for head in heads), further):
        yield prefix + "." if prefix[-1].isdigit() else prefix


def _letters(number: int) -> str:
    """Return A, B, ..., Z, AA, AB, ... for 1, 2, ..."""
    text = ""
    while number:
        number, place = divmod(number - 1, 26)
        text = chr(ord("A") + place) + text
    return text

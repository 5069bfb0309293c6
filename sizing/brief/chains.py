"""Many members in one word: chains along nodes, and members between two ranges.

* ``A0-A1``: one member;
* ``A0-B1-A2-B3``: a chain, the members between consecutive nodes;
* ``A0..A8``: the chain along a range; names and ranges may be joined, ``A0-B1..B7-A8``;
* ``A1..A7 to B1..B7``: a member from each node of the first range to the one in the same place
  of the second (verticals, or diagonals with ``B0..B5 to A1..A6``).
"""

from __future__ import annotations

import re
from itertools import pairwise

from sizing.brief.findings import Findings, KeyPath, Names, counted, quoted
from sizing.brief.name_ranges import RANGE, is_pattern, nodes_named

_OTHER_HYPHENS = str.maketrans({"\u2010": "-", "\u2011": "-", "\u2013": "-", "\u2212": "-"})
_PAIRED = re.compile(r"(?P<one>.*\S)\s+to\s+(?P<other>\S.*)")
MEMBER_EXAMPLE = 'two node names joined by a hyphen, such as "A0-A1", or a chain such as "A0..A8"'
CHAIN_EXAMPLE = 'a chain of nodes, such as "B0..B8" or "A0-B1..B7-A8"'

Ends = tuple[str, str]


def members_named(path: KeyPath, text: str, names: Names, findings: Findings) -> list[Ends] | None:
    """Return the two end nodes of each member that one word means; None when it cannot be used.

    The mistake is then recorded. All names are declared, but a node's own mistake may keep it
    out of ``names.index``.
    """
    paired = _PAIRED.fullmatch(text.strip())
    if paired is not None:
        return _between(path, text, paired["one"], paired["other"], names, findings)
    chain = chain_named(path, text, names, findings, expected=MEMBER_EXAMPLE, noun="member")
    return None if chain is None else list(pairwise(chain))


def chain_named(
    path: KeyPath,
    text: str,
    names: Names,
    findings: Findings,
    *,
    expected: str = CHAIN_EXAMPLE,
    noun: str = "chain",
) -> list[str] | None:
    """Return the nodes of a chain in their order, two at least; None when it cannot be used."""
    parts = [part.strip() for part in text.translate(_OTHER_HYPHENS).split("-")]
    many = [RANGE in part and part not in names.declared for part in parts]
    if not all(parts) or (len(parts) < 2 and not many[0]) or any(map(is_pattern, parts)):
        findings.add(path, found=quoted(text), expected=expected)
        return None
    if any(a and b for a, b in pairwise(many)):
        findings.add(
            path,
            found=f"{quoted(text)}, two ranges joined by a hyphen",
            expected=expected,
            fix=f'For a member from each node of one to the other write "{" to ".join(parts)}".',
        )
        return None
    if len(parts) == 2 and parts[0] == parts[1]:
        findings.add(
            path,
            found=f"{noun} {quoted(text)} from a node to itself",
            expected="a member between two nodes",
        )
        return None
    found = [nodes_named(path, part, names, findings) for part in parts]
    if any(nodes is None for nodes in found):
        return None
    chain = [node for nodes in found if nodes is not None for node in nodes]
    if any(a == b for a, b in pairwise(chain)):
        findings.add(
            path,
            found=f"{noun} {quoted(text)} with a node joined to itself",
            expected="another node at each step",
        )
        return None
    return chain


def _between(
    path: KeyPath, text: str, one: str, other: str, names: Names, findings: Findings
) -> list[Ends] | None:
    expected = 'two ranges of as many nodes, such as "A1..A7 to B1..B7"'
    if not all(RANGE in side for side in (one, other)) or is_pattern(text):
        findings.add(
            path,
            found=quoted(text),
            expected=expected,
            fix='A chain along nodes is "A0..A8", one member "A0-A1".',
        )
        return None
    starts, ends = (nodes_named(path, side, names, findings) for side in (one, other))
    if starts is None or ends is None:
        return None
    if len(starts) != len(ends):
        found = f"{quoted(text)}, ranges of {len(starts)} and {counted(len(ends), 'node')}"
        findings.add(path, found=found, expected=expected)
        return None
    pairs = list(zip(starts, ends, strict=True))
    if any(a == b for a, b in pairs):
        found = f"{quoted(text)}, which joins a node to itself"
        findings.add(path, found=found, expected=expected)
        return None
    return pairs

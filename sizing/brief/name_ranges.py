"""Many nodes in one word: ranges ``A0..A8`` and patterns ``B*`` where nodes are listed.

A range runs over the numbers from its first to its last node, ``A0..A8`` or backwards
``A8..A0``, in steps with ``A0..A12 by 3``; the two ends differ in one number and in nothing
else (``T2_0..T2_6``, ``A01..A12``). In a pattern ``*`` stands for any characters and ``?`` for
one; it means every node of the brief that it fits, in the order of the brief. A name that a
node has is always that node.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from fnmatch import fnmatchcase

from sizing.brief.findings import Findings, KeyPath, Names, counted, listed, quoted

RANGE = ".."
MOST_IN_RANGE = 5_000
"""As many as a brief may have nodes; a longer range is a slip that would fill the memory."""

_STEP = re.compile(r"(?P<range>.*\S)\s+by\s+(?P<step>\S+)")
_TOKENS = re.compile(r"\d+|\D+")
RANGE_EXAMPLE = 'two nodes whose names differ in one number, such as "A0..A8"'


def is_many(text: str) -> bool:
    """Return whether a word is a range or a pattern rather than one name."""
    return RANGE in text or is_pattern(text)


def is_pattern(text: str) -> bool:
    """Return whether a word holds * or ?, which no node name may hold."""
    return "*" in text or "?" in text


def nodes_named(path: KeyPath, text: str, names: Names, findings: Findings) -> list[str] | None:
    """Return the names of the nodes that one word means; None when it cannot be used.

    The mistake is then recorded. All names are declared, but a node's own mistake may keep it
    out of ``names.index``.
    """
    if text in names.declared or not is_many(text):
        names.resolve(path, text)
        return [text] if text in names.declared else None
    if RANGE in text:
        return _range(path, text, names, findings)
    fitting = [name for name in names.declared if fnmatchcase(name, text)]
    if not fitting and names.complete:
        findings.add(
            path,
            found=f"the pattern {quoted(text)}, which fits no node",
            expected=f"a pattern of names such as {listed(names.declared, most=6)}",
            fix="* stands for any characters, ? for one.",
        )
    return fitting or None


def all_nodes_named(
    path: KeyPath, words: Sequence[str | None], names: Names, findings: Findings
) -> tuple[list[int], bool]:
    """Return the indices of the nodes that a list of words means, and whether all are good.

    A node named twice, also through two words that overlap, is a mistake. None stands for an
    item whose mistake is recorded already.
    """
    found: dict[str, str] = {}
    good = True
    for place, word in enumerate(words, start=1):
        nodes = None if word is None else nodes_named((*path, place), word, names, findings)
        if nodes is None or word is None:
            good = False
            continue
        twice = [node for node in nodes if node in found]
        if twice:
            good = False
            _add_twice((*path, place), word, twice, found, findings)
        found |= {node: word for node in nodes if node not in found}
    known = [names.index[node] for node in found if node in names.index]
    return known, good and len(known) == len(found)


def _add_twice(
    path: KeyPath,
    word: str,
    which: Sequence[str],
    before: dict[str, str],
    findings: Findings,
) -> None:
    first = before[which[0]]
    fix = f"{quoted(first)} holds {'it' if len(which) == 1 else which[0]} already."
    what = f"{'node' if len(which) == 1 else 'nodes'} {listed(which)} of {quoted(word)}"
    if list(which) == [word]:
        what = f"node {quoted(word)}"
        fix = "Delete it." if first == word else fix
    findings.add(path, found=f"{what} for the second time", expected="each node once", fix=fix)


def _range(path: KeyPath, text: str, names: Names, findings: Findings) -> list[str] | None:
    stepped = _STEP.fullmatch(text)
    step = _step(path, text, stepped["step"], findings) if stepped else 1
    first, _, last = (stepped["range"] if stepped else text).partition(RANGE)
    first, last = first.strip(), last.strip()
    if step is None:
        return None
    if not first or not last or is_pattern(first + last):
        findings.add(path, found=quoted(text), expected=RANGE_EXAMPLE)
        return None
    ends = [_end(path, text, end, names, findings) for end in (first, last)]
    if not all(ends):
        return None
    wanted = _numbered(first, last, step)
    if wanted is None:
        findings.add(path, found=f"the range {quoted(text)}", expected=RANGE_EXAMPLE)
        return None
    if len(wanted) < 2 or len(wanted) > MOST_IN_RANGE:
        findings.add(
            path,
            found=f"the range {quoted(text)} of {counted(len(wanted), 'node')}",
            expected=f"a range of 2 to {MOST_IN_RANGE} nodes",
        )
        return None
    return _whole_range(path, text, wanted, last, names, findings)


def _whole_range(
    path: KeyPath,
    text: str,
    wanted: Sequence[str],
    last: str,
    names: Names,
    findings: Findings,
) -> list[str] | None:
    missing = [name for name in wanted if name not in names.declared]
    if missing and names.complete:
        findings.add(
            path,
            found=f"the range {quoted(text)}, of which the brief has no {listed(missing)}",
            expected="a node for every number of the range",
            fix='Name the parts, or take every second node with "A0..A8 by 2".',
        )
    if missing:
        return None
    if wanted[-1] != last:
        findings.add(
            path,
            found=f"the range {quoted(text)}, which ends at {wanted[-1]}",
            expected=f"steps that reach {last}",
            fix=f"End it at {wanted[-1]}, and name {last} beside it if it is meant.",
        )
        return None
    return list(wanted)


def _step(path: KeyPath, text: str, step: str, findings: Findings) -> int | None:
    if step.isdecimal() and 1 <= int(step[:6]) <= MOST_IN_RANGE:
        return int(step)
    findings.add(
        path, found=quoted(text), expected='a step of whole numbers, such as "A0..A12 by 3"'
    )
    return None


def _end(path: KeyPath, text: str, name: str, names: Names, findings: Findings) -> bool:
    """Return whether an end of a range is a declared node; else record which one is meant."""
    if name in names.declared:
        return True
    if names.complete:
        findings.add(
            path,
            found=f"the unknown node {quoted(name)} in {quoted(text)}",
            expected=f"one of {listed(names.declared)}" if names.declared else "a node",
            fix=findings.did_you_mean(name, names.declared),
        )
    return False


def _numbered(first: str, last: str, step: int) -> list[str] | None:
    """Return the names from ``first`` to ``last``; None when not exactly one number differs."""
    a, b = _TOKENS.findall(first), _TOKENS.findall(last)
    differing = [i for i, (p, q) in enumerate(zip(a, b, strict=False)) if p != q]
    if first == last:
        return [first]
    if len(a) != len(b) or len(differing) != 1:
        return None
    (place,) = differing
    if not (a[place].isdecimal() and b[place].isdecimal()):
        return None
    low, high = int(a[place]), int(b[place])
    width = len(a[place]) if a[place].startswith("0") or b[place].startswith("0") else 1
    way = 1 if high >= low else -1
    if abs(high - low) // step >= MOST_IN_RANGE:
        return ["" for _ in range(MOST_IN_RANGE + 1)]
    before, after = "".join(a[:place]), "".join(a[place + 1 :])
    return [f"{before}{k:0{width}d}{after}" for k in range(low, high + way, way * step)]

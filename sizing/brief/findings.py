"""Collecting every mistake of one file, and saying each the same way.

A *key path* is a tuple of names and positions (counted from 1) such as
``("groups", "bottom-chord", "members", 3)``. A reader of another file format passes its own
``place`` to turn key paths into sheet and cell.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Collection, Iterable, Sequence
from difflib import get_close_matches

from sizing.errors import InputError, Problem
from sizing.units import Kind, QuantityError, UnitPair, parse

KeyPath = tuple[str | int, ...]

MOST_SUGGESTIONS = 200
"""Looking up near names is slow in a hopeless file; nobody reads so many suggestions."""
MOST_PROBLEMS = 1_000
"""Nobody mends more mistakes in one round; the rest of a hopeless file is counted."""
LONGEST_SHOWN = 60
_PLAIN_NAME = re.compile(r"[\w +'-]+")
LEAST_LIKENESS = 0.5
"""Two names of two letters that share one are just alike enough for a suggestion."""


def key_path_text(path: KeyPath) -> str:
    """Return ``groups.bottom-chord.members[3]``; the whole file for an empty path.

    Very long names are cut, as :func:`quoted` cuts them.
    """
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part}]"
        elif part.startswith("["):
            name = part.replace("\n", " / ")
            text += name if len(name) <= LONGEST_SHOWN + 2 else name[: LONGEST_SHOWN - 2] + "...]"
        else:
            name = _cut(part) if _PLAIN_NAME.fullmatch(part) else quoted(part)
            text += f".{name}" if text else name
    return text or "the file"


def shown(value: object) -> str:
    """Return a value as a message shows it: text quoted, lists and tables by their size."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return quoted(value)
    if isinstance(value, dict):
        return "an empty table" if not value else f"a table with {counted(len(value), 'key')}"
    if isinstance(value, (list, tuple)):
        return "an empty list" if not value else f"a list of {counted(len(value), 'value')}"
    if value is None:
        return "nothing"
    return _cut(str(value))


def quoted(text: str) -> str:
    """Return the text in quotation marks, cut when it is very long, line breaks made visible."""
    flat = text.replace("\r", "").replace("\n", " / ")
    return f'"{_cut(flat)}"'


def _cut(text: str) -> str:
    return text if len(text) <= LONGEST_SHOWN else text[: LONGEST_SHOWN - 3] + "..."


def counted(number: int, noun: str) -> str:
    """Return ``1 node`` or ``3 nodes``."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def listed(names: Collection[str], most: int = 12) -> str:
    """Return the names in a row; a long row is cut and its whole length told."""
    names = list(names)
    if len(names) <= most:
        return ", ".join(names)
    return ", ".join(names[:most]) + f" ... ({len(names)} in all)"


LONGEST_NAME = 60


class Findings:
    """The mistakes and cautions found so far in one file.

    ``place`` says a key path in words; ``order`` gives its position in the file, for sorting.
    """

    def __init__(
        self,
        file: str,
        place: Callable[[KeyPath], str] = key_path_text,
        order: Callable[[KeyPath], tuple[int, ...]] = lambda _: (),
    ) -> None:
        self.file = file
        self.cautions: list[str] = []
        self.place = place
        self._order = order
        self._paths: dict[Problem, KeyPath] = {}
        self._suggestions = 0
        self._uncollected = 0

    @property
    def problems(self) -> tuple[Problem, ...]:
        """The mistakes so far, in the order of the file."""
        return tuple(sorted(self._paths, key=lambda problem: self._order(self._paths[problem])))

    def __len__(self) -> int:
        return len(self._paths) + self._uncollected

    def add(self, path: KeyPath, *, found: str, expected: str, fix: str = "") -> None:
        """Record one mistake; beyond :data:`MOST_PROBLEMS` only count it."""
        if len(self._paths) >= MOST_PROBLEMS:
            self._uncollected += 1
            return
        problem = Problem(
            file=self.file, place=self.place(path), found=found, expected=expected, fix=fix
        )
        if problem not in self._paths:
            self._paths[problem] = path

    def caution(self, text: str) -> None:
        """Record something that is allowed but that a checking engineer wants to know."""
        if text not in self.cautions:
            self.cautions.append(text)

    def check_name(self, path: KeyPath, name: str, noun: str) -> None:
        """Record a name that cannot be printed in a schedule."""
        if not name.strip() or name != name.strip() or not name.isprintable():
            self.add(
                path,
                found=f"the {noun} name {quoted(name)}",
                expected="a name without spaces around it, line breaks or the like",
            )
        elif len(name) > LONGEST_NAME:
            self.add(
                path,
                found=f"a {noun} name of {len(name)} characters",
                expected=f"at most {LONGEST_NAME}",
            )

    def did_you_mean(self, name: str, known: Iterable[str]) -> str:
        """Return a question that names the nearest known name; empty when none is near."""
        near = self.nearest(name, known)
        return f"Did you mean {quoted(near)}?" if near else ""

    def nearest(self, name: str, known: Iterable[str]) -> str:
        """Return the nearest known name; empty when none is near."""
        self._suggestions += 1
        if self._suggestions > MOST_SUGGESTIONS:
            return ""
        folded = {candidate.casefold(): candidate for candidate in reversed(list(known))}
        close = get_close_matches(name.casefold(), folded, n=1, cutoff=LEAST_LIKENESS)
        return folded[close[0]] if close else ""

    def raise_if_any(self) -> None:
        """Raise :class:`InputError` with every mistake in the file's order, if there is one."""
        if not self._paths:
            return
        if not self._uncollected:
            raise InputError(self.problems)
        rest = Problem(
            file=self.file,
            place="the file",
            found=f"{self._uncollected} further mistakes",
            expected="none",
            fix="Mend those above first.",
        )
        raise InputError((*self.problems, rest))


class Quantities:
    """Reads quantities in one brief's units and records what is wrong with them."""

    def __init__(self, findings: Findings, units: UnitPair) -> None:
        self._findings = findings
        self._units = units

    @property
    def units(self) -> UnitPair:
        """The brief's units."""
        return self._units

    def read(self, path: KeyPath, value: object, kind: Kind) -> float | None:
        """Return the quantity in SI units; None, with the mistake recorded, when it is none."""
        try:
            return parse(value, kind, self._units)
        except QuantityError as error:
            self._findings.add(path, found=error.found, expected=error.expected, fix=error.fix)
            return None

    def vector(self, path: KeyPath, values: Sequence[object], kind: Kind) -> tuple[float, ...]:
        """Return all components in SI units; NaN stands for one whose mistake was recorded."""
        read = [self.read((*path, i), v, kind) for i, v in enumerate(values, start=1)]
        return tuple(math.nan if component is None else component for component in read)


class Names:
    """The declared names of one table, and which of them turned out usable.

    A reference to a name that is declared but faulty is silent: its own mistake is reported
    where it stands. ``complete`` is False when the table itself could not be read.
    """

    def __init__(
        self, findings: Findings, noun: str, declared: Iterable[str], *, complete: bool = True
    ) -> None:
        self._findings = findings
        self._noun = noun
        self.declared = tuple(dict.fromkeys(declared))
        self.complete = complete
        self.index: dict[str, int] = {}

    def resolve(self, path: KeyPath, name: str) -> int | None:
        """Return the index of a name; None, with the mistake recorded, when it is unknown."""
        if name in self.index:
            return self.index[name]
        if name not in self.declared and self.complete:
            self._findings.add(
                path,
                found=f"the unknown {self._noun} {quoted(name)}",
                expected=f"one of {listed(self.declared)}"
                if self.declared
                else f"a {self._noun} of this brief",
                fix=self._findings.did_you_mean(name, self.declared),
            )
        return None

    def resolve_all(self, path: KeyPath, names: Sequence[str | None]) -> list[int]:
        """Return the indices of the names that are known; a name given twice is a mistake.

        None stands for an item whose mistake is recorded already.
        """
        found: list[int] = []
        for place, name in enumerate(names, start=1):
            index = None if name is None else self.resolve((*path, place), name)
            if name is None or index is None:
                continue
            if index in found:
                self._findings.add(
                    (*path, place),
                    found=f"{self._noun} {quoted(name)} for the second time",
                    expected=f"each {self._noun} once",
                    fix="Delete it.",
                )
                continue
            found.append(index)
        return found

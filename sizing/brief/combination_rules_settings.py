"""Reading a rule's settings; every mistake is recorded with its key path and the nearest key."""

from __future__ import annotations

import math
import sys
from collections.abc import Collection, Mapping, Sequence

from sizing.brief.findings import Findings, KeyPath, listed, quoted, shown


class RuleTable:
    """One table of settings at ``path``; a faulty value is recorded and its default returned."""

    def __init__(
        self, findings: Findings, path: KeyPath, table: Mapping[str, object], keys: Sequence[str]
    ) -> None:
        self._findings = findings
        self._path = path
        self._table = table
        for key in table:
            if key not in keys:
                findings.add(
                    (*path, key),
                    found="an unknown key",
                    expected=f"one of {listed(keys, most=len(keys))}",
                    fix=findings.did_you_mean(key, keys),
                )

    def number(self, key: str, default: float, *, at_least: float, at_most: float) -> float:
        """Return a number within bounds."""
        value = self._table.get(key, default)
        if is_number(value, at_least, at_most):
            return float(value)  # type: ignore[arg-type]  # is_number has looked
        expected = f"a number from {at_least:g} to {at_most:g}"
        self._findings.add((*self._path, key), found=shown(value), expected=expected)
        return default

    def flag(self, key: str) -> bool:
        """Return true or false, false where not given."""
        value = self._table.get(key, False)
        if isinstance(value, bool):
            return value
        self._findings.add((*self._path, key), found=shown(value), expected="true or false")
        return False

    def choice(self, key: str, choices: Sequence[str], default: str) -> str:
        """Return one of the choices (case ignored)."""
        return self._one_of((*self._path, key), self._table.get(key, default), choices) or default

    def choices(self, key: str, choices: Sequence[str], default: Sequence[str]) -> tuple[str, ...]:
        """Return a list of different choices; a single text is a list of one."""
        value = self._table.get(key, list(default))
        items = [value] if isinstance(value, str) else value
        path = (*self._path, key)
        if not isinstance(items, (list, tuple)):
            self._findings.add(path, found=shown(value), expected=f"a list of {listed(choices)}")
            return tuple(default)
        found = [self._one_of((*path, i), item, choices) for i, item in enumerate(items, start=1)]
        return tuple(dict.fromkeys(item for item in found if item is not None))

    def table(self, key: str) -> dict[str, object]:
        """Return a table, empty where not given."""
        value = self._table.get(key, {})
        if isinstance(value, Mapping):
            return {str(name): item for name, item in value.items()}
        self._findings.add((*self._path, key), found=shown(value), expected="a table")
        return {}

    def pairs(
        self, key: str, known: Collection[str], default: Sequence[tuple[str, str]]
    ) -> frozenset[frozenset[str]]:
        """Return pairs of names, each pair in any order."""
        value = self._table.get(key, [list(pair) for pair in default])
        path = (*self._path, key)
        expected = 'a list of pairs such as [["imposed roof", "snow"]]'
        if not isinstance(value, (list, tuple)):
            self._findings.add(path, found=shown(value), expected=expected)
            return frozenset()
        pairs = []
        for i, pair in enumerate(value, start=1):
            if not isinstance(pair, (list, tuple)) or len(pair) != 2:
                self._findings.add((*path, i), found=shown(pair), expected="a pair of actions")
                continue
            names = [
                self._one_of((*path, i, j), name, sorted(known)) for j, name in enumerate(pair, 1)
            ]
            if None not in names:
                pairs.append(frozenset(name for name in names if name is not None))
        return frozenset(pairs)

    def _one_of(self, path: KeyPath, value: object, choices: Sequence[str]) -> str | None:
        for choice in choices:
            if isinstance(value, str) and value.strip().casefold() == choice.casefold():
                return choice
        self._findings.add(
            path,
            found=shown(value),
            expected="one of " + ", ".join(quoted(choice) for choice in choices),
            fix=self._findings.did_you_mean(value, choices) if isinstance(value, str) else "",
        )
        return None


def is_number(value: object, at_least: float = -math.inf, at_most: float = math.inf) -> bool:
    """Return whether ``value`` is a finite number (not a boolean) within bounds."""
    if isinstance(value, bool) or not isinstance(value, (int, float)):
        return False
    finite = abs(value) <= sys.float_info.max  # holds for whole numbers of any length, not for NaN
    return finite and at_least <= value <= at_most

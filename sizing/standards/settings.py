"""Reading a standard's settings: every mistake names the key, what was found and the fix."""

from __future__ import annotations

import difflib
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fnmatch import fnmatchcase
from typing import Any, Literal

from sizing.brief.model import Units
from sizing.standards.contract import SettingsError
from sizing.units import QuantityError, parse

Kind = Literal["stress", "density", "length"]
EXAMPLES: dict[Kind, str] = {
    "stress": "150 N/mm2",
    "density": "7850 kg/m3",
    "length": "22 mm",
}


GREATEST_NUMBER = 10**300
"""Whole numbers beyond do not fit a float."""
LONGEST_SHOWN = 80
"""Longer values are cut in messages."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Range:
    """Bounds in SI units of a quantity that make sense, and how a message says them."""

    least: float
    greatest: float
    text: str


def nearest(word: str, known: Sequence[str]) -> str | None:
    """Return the known word most like ``word`` (case ignored), or None when none is close."""
    folded = {name.casefold(): name for name in known}
    found = difflib.get_close_matches(word.casefold(), list(folded), n=1, cutoff=0.5)
    return folded[found[0]] if found else None


class SettingsReader:
    """Reads the settings of ``standard``; unknown keys are refused at once.

    Every method raises :class:`SettingsError` for a value of the wrong kind. A boolean is not
    a number, and a quantity is text with its unit.
    """

    def __init__(self, standard: str, settings: Mapping[str, Any], keys: Sequence[str]) -> None:
        self._standard = standard
        self._settings = settings
        for key in settings:
            if key not in keys:
                self._refuse_key(key, keys)

    def _refuse_key(self, key: str, keys: Sequence[str]) -> None:
        close = nearest(key, keys)
        raise SettingsError(
            key=key,
            found="an unknown setting",
            expected=f"one of {self._standard}'s settings: {', '.join(keys)}",
            fix=f'Did you mean "{close}"?' if close else "Remove it.",
        )

    def has(self, key: str) -> bool:
        """Return whether ``key`` is given."""
        return key in self._settings

    def forbid(self, key: str, because: str) -> None:
        """Refuse ``key`` where another setting leaves it without meaning."""
        if self.has(key):
            raise SettingsError(
                key=key,
                found=_shown(self._settings[key]),
                expected=f"no such setting together with {because}",
                fix="Remove one of the two.",
            )

    def choice(self, key: str, choices: Sequence[str], default: str) -> str:
        """Return one of ``choices``, or ``default`` where not given.

        Case does not matter, and a whole number counts as its digits (an edition such as 2022).
        """
        value = self._settings.get(key, default)
        whole = isinstance(value, int) and not isinstance(value, bool)
        word = _shown(value).strip('" ') if whole or isinstance(value, str) else ""
        for choice in choices:
            if choice.casefold() == word.casefold():
                return choice
        close = nearest(word, choices) if word else None
        raise SettingsError(
            key=key,
            found=_shown(value),
            expected="one of " + ", ".join(f'"{choice}"' for choice in choices),
            fix=f'Did you mean "{close}"?' if close else "",
        )

    def names(self, key: str) -> tuple[str, ...]:
        """Return a list of texts, empty where not given; a single text is a list of one."""
        value = self._settings.get(key, [])
        items = [value] if isinstance(value, str) else value
        if isinstance(items, (list, tuple)) and all(isinstance(item, str) for item in items):
            return tuple(items)
        raise SettingsError(
            key=key, found=_shown(value), expected='a list of texts such as ["webs", "posts*"]'
        )

    def number(
        self,
        key: str,
        default: float,
        *,
        at_least: float = -math.inf,
        above: float = -math.inf,
        at_most: float = math.inf,
    ) -> float:
        """Return a plain number within bounds, or ``default`` where not given."""
        value = self._settings.get(key, default)
        bounds = _bounds_text(at_least, above, at_most)
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            raise SettingsError(key=key, found=_shown(value), expected=f"a number{bounds}")
        number = float(value) if abs(value) < GREATEST_NUMBER else math.inf
        if not math.isfinite(number) or number < at_least or number <= above or number > at_most:
            raise SettingsError(key=key, found=_shown(value), expected=f"a number{bounds}")
        return number

    def required_number(self, key: str, *, at_least: float, at_most: float = math.inf) -> float:
        """Return a plain number that must be given."""
        if not self.has(key):
            raise self._missing(key, f"a number{_bounds_text(at_least, -math.inf, at_most)}")
        return self.number(key, math.nan, at_least=at_least, at_most=at_most)

    def quantity(self, key: str, kind: Kind, usual: Range | None = None) -> float | None:
        """Return a positive quantity in SI units, or None where not given.

        ``usual`` bounds it: beyond, the unit is a slip of the keyboard (GPa for MPa).
        """
        if not self.has(key):
            return None
        value = self._settings[key]
        try:
            quantity = parse(value, kind, Units(), bare=False)
        except QuantityError as error:
            raise SettingsError(
                key=key, found=error.found, expected=error.expected, fix=error.fix
            ) from error
        if quantity <= 0.0:
            raise SettingsError(key=key, found=_shown(value), expected=f"a {kind} above zero")
        if usual is not None and not usual.least <= quantity <= usual.greatest:
            raise SettingsError(
                key=key, found=_shown(value), expected=usual.text, fix="Is the unit right?"
            )
        return quantity

    def required_quantity(self, key: str, kind: Kind, usual: Range | None = None) -> float:
        """Return a positive quantity in SI units that must be given."""
        found = self.quantity(key, kind, usual)
        if found is None:
            raise self._missing(key, f'a {kind} such as "{EXAMPLES[kind]}"')
        return found

    def _missing(self, key: str, expected: str) -> SettingsError:
        return SettingsError(
            key=key,
            found="nothing",
            expected=expected,
            fix=f"Add {key} to the option; {self._standard} has no usual value for it.",
        )


def _shown(value: object) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, int) and abs(value) >= GREATEST_NUMBER:
        return "a number of more than 300 digits"
    text = f'"{value}"' if isinstance(value, str) else str(value)
    return text if len(text) <= LONGEST_SHOWN else text[: LONGEST_SHOWN - 4] + ' ..."'


def _bounds_text(at_least: float, above: float, at_most: float) -> str:
    parts = []
    if math.isfinite(at_least):
        parts.append(f"not below {at_least:g}")
    if math.isfinite(above):
        parts.append(f"above {above:g}")
    if math.isfinite(at_most):
        parts.append(f"not above {at_most:g}")
    return " " + " and ".join(parts) if parts else ""


def matches(name: str, patterns: Sequence[str]) -> bool:
    """Return whether a group name fits one of the patterns (* and ?, case counts)."""
    return any(fnmatchcase(name, pattern) for pattern in patterns)


def require_groups(key: str, patterns: Sequence[str], groups: Sequence[str]) -> None:
    """Raise :class:`SettingsError` for a pattern of setting ``key`` that fits no group."""
    for pattern in patterns:
        if not any(fnmatchcase(group, pattern) for group in groups):
            close = nearest(pattern, groups)
            raise SettingsError(
                key=key,
                found=f'"{pattern}", which fits no group',
                expected="one of " + ", ".join(sorted(set(groups))),
                fix=f'Did you mean "{close}"?' if close else "",
            )

"""Words that several documents share, so that they say the same thing in the same way."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Sequence

from sizing.documents.plain_text import visible
from sizing.results import Extreme, MemberResult, OptionResult
from sizing.selection.problem import FEASIBILITY_TOLERANCE

CLOSING_CAUTION = (
    "These sizes follow from the brief as written. Joints are not designed here. A licensed "
    "engineer must check the design against the code in force where it is built."
)

NOT_A_CUT_LENGTH = (
    "System length runs from node to node; it is not the length to saw. Masses are of bare "
    "sections, without joints, fittings or finish."
)

SIGNS = "Tension is positive (T), compression negative (C)."

ALARMS = frozenset({"NO", "UPLIFT", "no resistance"})
"""Cells that every writer makes stand out."""

_STATUS = {
    "proven": "proven lightest: nothing lighter in the catalogue passes",
    "within gap": "not proven lightest: search finished, the bound leaves a gap",
    "stopped": "not proven lightest: search was stopped, best design so far",
    "checked": "given sections, checked; nothing was searched",
}


def status_text(option: OptionResult) -> str:
    """Return the pick's status as a phrase, the least word kept when it is unknown."""
    phrase = _STATUS.get(option.status, visible(option.status))
    if option.status == "proven" and option.objective_text != "mass":
        phrase = "proven least: nothing in the catalogue with a lower total passes"
    return phrase


def met(utilisation: float) -> bool:
    """Return whether a check is met: utilisation at most 1, rounding apart."""
    return bool(utilisation <= 1.0 + FEASIBILITY_TOLERANCE)


def verdict(option: OptionResult) -> str:
    """Return whether every check of the option is met, in words."""
    return "every check is met" if option.adequate else "NOT ADEQUATE: at least one check fails"


def outcome_sentence(option: OptionResult) -> str:
    """Return verdict and status as one sentence."""
    words = f"{verdict(option)}; {status_text(option)}."
    return words[0].upper() + words[1:]


def ratio(utilisation: float) -> float | str:
    """Return a utilisation for a cell; a force on no resistance has no number."""
    return utilisation if math.isfinite(utilisation) else "no resistance"


def governing_check(member: MemberResult) -> str:
    """Return sense and clause of the check that decides a member."""
    if member.governing is None:
        return "no force"
    return visible(f"{member.governing}, {member.governing_clause}".rstrip(", "))


def extreme_force(extreme: Extreme | None) -> float:
    """Return the greatest force of one sense in N, 0 where the sense never occurs."""
    return extreme.force if extreme is not None else 0.0


_NUMBERED = re.compile(r"^(.*?)(\d{1,9})$", re.DOTALL)


def mark_runs(marks: Sequence[str]) -> str:
    """Return marks as short text, consecutive numbers joined: ``T1 to T4, T7``."""
    runs: list[list[str]] = []
    for mark in marks:
        if runs and _follows(runs[-1][-1], mark):
            runs[-1].append(mark)
        else:
            runs.append([mark])
    return visible(", ".join(f"{r[0]} to {r[-1]}" if len(r) > 2 else ", ".join(r) for r in runs))


def _follows(before: str, after: str) -> bool:
    a, b = _NUMBERED.match(before), _NUMBERED.match(after)
    if a is None or b is None or a.group(1) != b.group(1):
        return False
    return int(b.group(2)) == int(a.group(2)) + 1 and not b.group(2).startswith("0")


def listed(words: Iterable[str]) -> str:
    """Return words joined as in a sentence: ``x, y and z``."""
    *most, last = tuple(words) or ("",)
    return f"{', '.join(most)} and {last}" if most else last

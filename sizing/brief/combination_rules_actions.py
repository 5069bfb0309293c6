"""Load cases sorted into actions, and which cases of an action may act at the same time.

An *action* is what a combination rule gives one factor: all cases of one kind, or of one
``action`` name where the brief gives it. Within it,

* snow, wind and temperature cases are alternatives: arrangements and directions, one at a time;
* imposed, roof imposed and other cases are free parts: any selection acts at full value;
* cases with the same ``alternative_set`` are alternatives, whatever their kind (internal
  pressure cases in a set of their own then act together with every wind direction).

Permanent cases act together. Those that ``may_be_absent``, and settlements, are there or not.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import product

from sizing.brief.model import ActionKind, LoadCase

Choice = tuple[int, ...]
NONE: Choice = ()

ALTERNATIVE_KINDS: tuple[ActionKind, ...] = ("snow", "wind", "temperature")


@dataclass(frozen=True, kw_only=True, slots=True)
class Action:
    """One action: ``choices`` are the non-empty selections of its cases that act together."""

    name: str
    kind: ActionKind
    choices: tuple[Choice, ...]

    @property
    def or_none(self) -> tuple[Choice, ...]:
        """The choices, and that the action is absent (last)."""
        return (*self.choices, NONE)


@dataclass(frozen=True, kw_only=True, slots=True)
class Actions:
    """All actions of a brief.

    ``permanent``: cases that are always there; ``optional``: selections (the empty one
    included) of permanent cases that may be absent; ``settlements``: likewise. ``variable``:
    the variable actions in brief order. ``sets`` gives each case's alternative set or None.
    """

    permanent: Choice
    optional: tuple[Choice, ...]
    settlements: tuple[Choice, ...]
    variable: tuple[Action, ...]
    sets: tuple[str | None, ...]

    def compatible(self, choices: Sequence[Choice]) -> bool:
        """Return whether no two cases of the choices belong to the same alternative set."""
        named = [self.sets[q] for choice in choices for q in choice if self.sets[q] is not None]
        return len(named) == len(set(named))


def action_name(case: LoadCase) -> str:
    """Return the name of the case's action: as given, else its kind."""
    return case.action or case.kind


def alternative_set(case: LoadCase) -> str | None:
    """Return the set of which one case acts at a time; None for a case that acts with any."""
    if case.alternative_set is not None:
        return case.alternative_set or None
    return action_name(case) if case.kind in ALTERNATIVE_KINDS else None


@dataclass(frozen=True, kw_only=True, slots=True)
class Sorted:
    """Case indices: permanent ones, those that may be absent, settlements, variable actions."""

    permanent: tuple[int, ...]
    optional: tuple[int, ...]
    settlements: tuple[int, ...]
    variable: dict[str, tuple[int, ...]]


def sort_cases(cases: Sequence[LoadCase], *, by_kind: bool = False) -> Sorted:
    """Sort the cases into actions; ``by_kind`` takes all cases of a kind as one action."""
    variable: dict[str, tuple[int, ...]] = {}
    optional: list[int] = []
    settlements: list[int] = []
    permanent: list[int] = []
    for q, case in enumerate(cases):
        if case.kind == "settlement":
            settlements.append(q)
        elif case.kind == "permanent":
            (optional if case.may_be_absent else permanent).append(q)
        else:
            name = case.kind if by_kind else action_name(case)
            variable[name] = (*variable.get(name, ()), q)
    return Sorted(
        permanent=tuple(permanent),
        optional=tuple(optional),
        settlements=tuple(settlements),
        variable=variable,
    )


def actions_of(cases: Sequence[LoadCase], *, by_kind: bool = False) -> Actions:
    """Return the actions with every selection of their cases that acts together.

    Selections multiply: ask :func:`count_selections` first.
    """
    sets = tuple(alternative_set(case) for case in cases)
    found = sort_cases(cases, by_kind=by_kind)
    return Actions(
        permanent=found.permanent,
        optional=tuple(selections(found.optional, sets)),
        settlements=tuple(selections(found.settlements, sets)),
        variable=tuple(
            Action(
                name=name,
                kind=cases[of[0]].kind,
                choices=tuple(choice for choice in selections(of, sets) if choice),
            )
            for name, of in found.variable.items()
        ),
        sets=sets,
    )


def count_selections(cases: Sequence[LoadCase], *, by_kind: bool = False) -> dict[str, int]:
    """Return the number of selections, none included, of each action without making them.

    Permanent cases that may be absent, and settlements, are counted under those names.
    """
    sets = tuple(alternative_set(case) for case in cases)
    found = sort_cases(cases, by_kind=by_kind)
    groups = {
        "permanent cases that may be absent": found.optional,
        "settlement": found.settlements,
        **found.variable,
    }
    return {
        name: math.prod(len(of) + 1 for of in _slots(cases_, sets))
        for name, cases_ in groups.items()
    }


def selections(cases: Sequence[int], sets: Sequence[str | None]) -> Iterator[Choice]:
    """Yield every selection of ``cases`` with at most one of each set, fullest first."""
    slots = _slots(cases, sets)
    for picked in product(*([(q,) for q in of] + [NONE] for of in slots)):
        yield tuple(sorted(q for choice in picked for q in choice))


def _slots(cases: Sequence[int], sets: Sequence[str | None]) -> list[list[int]]:
    """Return the cases by alternative set; a case without a set has a slot of its own."""
    slots: dict[str | int, list[int]] = {}
    for q in cases:
        slots.setdefault(sets[q] or q, []).append(q)
    return list(slots.values())

"""Combinations in the making: what every rule yields before they are named and numbered."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from itertools import product

from sizing.brief.combination_rules_actions import NONE, Action, Actions, Choice
from sizing.brief.combination_rules_durations import UsualDurations, shortest_duration
from sizing.brief.model import Combination, LoadCase, State

DIGITS = 12
"""Factors are products of numbers of a few digits; this takes off binary rounding (0.9000...1)."""

Factors = Mapping[int, float]
Part = tuple[Action, Choice]


@dataclass(frozen=True, kw_only=True, slots=True)
class Draft:
    """A combination without its name: ``letter`` begins the name, ``U`` for strength.

    ``timed_by``: the cases whose shortest load duration is the combination's; ``None``: all.
    """

    letter: str
    state: State
    factors: Factors
    origin: str
    timed_by: Choice | None = None
    long_term: Factors = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True)
class PermanentState:
    """The permanent part of a combination: factors, and words for what is unusual about it."""

    factors: Factors
    words: str


def permanent_states(
    actions: Actions, cases: Sequence[LoadCase], values: Sequence[tuple[float, str]], settled: float
) -> Iterator[PermanentState]:
    """Yield the permanent part for each (factor, words) of ``values``: all cases together.

    Cases that may be absent are there or not, settlements at ``settled`` likewise.
    """
    for (value, words), optional, settlement in product(
        values, actions.optional, actions.settlements
    ):
        missing = sorted(set(actions.optional[0]) - set(optional))
        said = [words] if words else []
        said += [f"without {names(missing, cases)}"] if missing else []
        said += [f"with {names(settlement, cases)}"] if settlement else []
        factors = dict.fromkeys((*actions.permanent, *optional), value)
        yield PermanentState(
            factors=factors | dict.fromkeys(settlement, settled), words=", ".join(said)
        )


def companions(
    actions: Actions, leading: Part | None, excluded: frozenset[frozenset[str]]
) -> Iterator[tuple[Part, ...]]:
    """Yield every admissible selection of the other variable actions, the fullest first.

    Each is absent or acts with one of its choices; none shares an alternative set with another
    part, and none belongs to an ``excluded`` pair (of action names or kinds).
    """
    others = [a for a in actions.variable if leading is None or a is not leading[0]]
    for picked in product(*(action.or_none for action in others)):
        parts = tuple((a, c) for a, c in zip(others, picked, strict=True) if c != NONE)
        together = parts if leading is None else (leading, *parts)
        if actions.compatible([choice for _, choice in together]) and not _clash(
            [action for action, _ in together], excluded
        ):
            yield parts


def _clash(together: Sequence[Action], excluded: frozenset[frozenset[str]]) -> bool:
    return any(
        frozenset((x, y)) in excluded
        for i, first in enumerate(together)
        for second in together[i + 1 :]
        for x in {first.name, first.kind}
        for y in {second.name, second.kind}
    )


def choices_of(actions: Iterable[Action]) -> Iterator[Part]:
    """Yield every action with every one of its choices."""
    for action in actions:
        for choice in action.choices:
            yield action, choice


def names(of: Iterable[int], cases: Sequence[LoadCase]) -> str:
    """Return the names of the cases, joined by a plus sign."""
    return " + ".join(cases[q].name for q in of)


def spread(parts: Iterable[Part], factor: Mapping[str, float]) -> dict[int, float]:
    """Return case index → factor of the parts, with one factor for each action name."""
    return {q: factor[action.name] for action, choice in parts for q in choice}


def with_parts(parts: Iterable[Part], cases: Sequence[LoadCase]) -> str:
    """Return `` with wind-left + imposed``; empty for no parts."""
    said = names((q for _, choice in parts for q in choice), cases)
    return f" with {said}" if said else ""


def finished(
    drafts: Iterable[Draft], cases: Sequence[LoadCase], usual: UsualDurations, first: str
) -> tuple[Combination, ...]:
    """Name the drafts U1, U2, ..., S1, S2, ... and drop those that say the same as an earlier one.

    ``first`` begins every origin (the rule's name).
    """
    seen: set[object] = set()
    count: dict[str, int] = {}
    combinations = []
    for draft in drafts:
        factors = {q: round(f, DIGITS) for q, f in sorted(draft.factors.items()) if f != 0.0}
        timed_by = tuple(factors) if draft.timed_by is None else draft.timed_by
        duration = shortest_duration(timed_by, cases, usual)
        long_term = {q: f for q, f in sorted(draft.long_term.items()) if f != 0.0}
        key = (draft.letter, duration, tuple(factors.items()))
        if not factors or key in seen:
            continue
        seen.add(key)
        count[draft.letter] = count.get(draft.letter, 0) + 1
        combinations.append(
            Combination(
                name=f"{draft.letter}{count[draft.letter]}",
                state=draft.state,
                factors=factors,
                duration=duration,
                origin=f"{first} {draft.origin}",
                long_term=long_term,
            )
        )
    return tuple(combinations)

"""Load combinations from a rule: cases with their kinds in, named combinations out.

In a brief the rule is a name, or a table of its settings::

    combination_rule = "EN 1990"

    [combination_rule]
    rule = "EN 1990"
    expression = "6.10a and 6.10b"
    psi = { snow = "snow Nordic", wind = [0.5, 0.2, 0.0] }
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence

from sizing.brief.combination_rules_actions import (
    action_name,
    actions_of,
    count_selections,
)
from sizing.brief.combination_rules_asce7 import asce7, read_asce7
from sizing.brief.combination_rules_draft import finished
from sizing.brief.combination_rules_durations import (
    UsualDurations,
    ask_en1995,
    usual_durations,
)
from sizing.brief.combination_rules_en1990 import RULE as EN_1990
from sizing.brief.combination_rules_en1990 import USUAL_PSI, en1990, read_en1990
from sizing.brief.findings import Findings, KeyPath, quoted, shown
from sizing.brief.model import Combination, LoadCase

ASCE_7: dict[str, tuple[str, str]] = {
    f"ASCE {edition} {method}": (edition, method)
    for edition in ("7-16", "7-22")
    for method in ("LRFD", "ASD")
}
RULES = (EN_1990, *ASCE_7)

MOST_SELECTIONS = 500
"""Two permanent cases, three of snow and four of wind make 20; a set of thousands of combinations
is one that nobody can check, and shows that alternatives were not told apart."""


def expand(
    rule: str,
    cases: Sequence[LoadCase],
    settings: Mapping[str, object],
    standards: Iterable[str] = (),
) -> tuple[Combination, ...]:
    """Return the combinations of ``rule`` (see :data:`RULES`) for the cases.

    ``standards`` are the names of the options' standards: they settle the usual load durations.
    Raises :class:`sizing.errors.InputError` with every mistake in the settings.
    """
    findings = Findings("combination rule")
    combinations = read_rule(findings, (), {"rule": rule, **settings}, cases, standards)
    findings.raise_if_any()
    return combinations


def read_rule(
    findings: Findings,
    path: KeyPath,
    value: object,
    cases: Sequence[LoadCase],
    standards: Iterable[str] = (),
) -> tuple[Combination, ...]:
    """Return the combinations of the brief's ``combination_rule``, at key path ``path``.

    ``value`` is the rule's name or its table. Mistakes are recorded in ``findings``; the answer
    is then empty.
    """
    table = {"rule": value} if isinstance(value, str) else value
    if not isinstance(table, Mapping):
        expected = f"the name of a rule ({', '.join(RULES)}) or a table with the key rule"
        findings.add(path, found=shown(value), expected=expected)
        return ()
    rule = _rule_name(findings, (*path, "rule"), table.get("rule"))
    settings = {str(key): item for key, item in table.items() if key != "rule"}
    before = len(findings.problems)
    _check_actions(findings, cases)
    if rule is None:
        return ()
    by_kind = rule != EN_1990
    if _too_many(findings, path, cases, by_kind=by_kind) or len(findings.problems) > before:
        return ()
    actions = actions_of(cases, by_kind=by_kind)
    standards = tuple(standards)
    usual = usual_durations(standards)
    if rule == EN_1990:
        european = read_en1990(findings, path, settings, actions)
        if ask_en1995(standards):
            _caution_storage(findings, settings.get("psi"), cases, usual)
        drafts = en1990(cases, actions, european)
    else:
        american = read_asce7(findings, path, settings, cases, *ASCE_7[rule])
        drafts = asce7(cases, actions, american)
    if len(findings.problems) > before:
        return ()
    return finished(drafts, cases, usual, rule)


def _caution_storage(
    findings: Findings, psi: object, cases: Sequence[LoadCase], usual: UsualDurations
) -> None:
    """Say where timber counts a storage load as medium-term: EN 1995-1-1 Table 2.2 has it long."""
    if not isinstance(psi, Mapping):
        return
    for case in cases:
        category = psi.get(action_name(case), psi.get(case.kind))
        storage = isinstance(category, str) and category.strip().casefold() == "storage"
        if storage and (case.duration or usual[case.kind]) == "medium":
            findings.caution(
                f"Combination rule {EN_1990}: load case {case.name} is storage, which acts long "
                '(EN 1995-1-1 Table 2.2), but counts as medium-term; set duration = "long".'
            )


def usual_long_term(factors: Mapping[int, float], cases: Sequence[LoadCase]) -> dict[int, float]:
    """Return the long-term part of a serviceability combination that is written out by hand.

    Permanent actions with their factor, variable ones with ψ2 of EN 1990 Table A1.1 (of their
    kind), but not more than their factor.
    """
    parts: dict[int, float] = {}
    for q, factor in factors.items():
        kind = cases[q].kind
        psi2 = USUAL_PSI[kind][2] if kind in USUAL_PSI else abs(factor)
        share = min(psi2, abs(factor))
        if share != 0.0:
            parts[q] = share if factor > 0.0 else -share
    return parts


def _rule_name(findings: Findings, path: KeyPath, value: object) -> str | None:
    folded = {"".join(name.casefold().split()): name for name in RULES}
    if isinstance(value, str):
        known = folded.get("".join(value.casefold().split()))
        if known is not None:
            return known
    findings.add(
        path,
        found=shown(value),
        expected="one of " + ", ".join(quoted(name) for name in RULES),
        fix=findings.did_you_mean(value, RULES) if isinstance(value, str) else "",
    )
    return None


def _check_actions(findings: Findings, cases: Sequence[LoadCase]) -> None:
    """Record cases of different kinds in one action, and permanent keys on variable cases."""
    kinds: dict[str, str] = {}
    for case in cases:
        path = ("cases", case.name)
        if case.kind in ("permanent", "settlement"):
            continue
        kind = kinds.setdefault(action_name(case), case.kind)
        if kind != case.kind:
            findings.add(
                (*path, "action"),
                found=f"a {case.kind} case in the action {quoted(action_name(case))}",
                expected=f"cases of one kind in one action; its first case is {kind}",
            )
        if case.may_be_absent:
            findings.add(
                (*path, "may_be_absent"),
                found=f"true for a {case.kind} case",
                expected="it on permanent cases only; a variable action may always be absent",
            )


def _too_many(
    findings: Findings, path: KeyPath, cases: Sequence[LoadCase], *, by_kind: bool
) -> bool:
    """Record more selections of cases than anyone can check."""
    counts = count_selections(cases, by_kind=by_kind)
    total = math.prod(counts.values())
    if total <= MOST_SELECTIONS:
        return False
    widest = max(counts, key=lambda name: counts[name])
    findings.add(
        path,
        found=f"{total} selections of load cases that may act together",
        expected=f"at most {MOST_SELECTIONS}",
        fix=f"Give cases of {quoted(widest)} that never act together the same alternative_set, "
        "or join those that always do in one case.",
    )
    return True

"""Combinations of a brief: those written out, and those that a rule makes of the load cases."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from sizing.brief.combination_rules import read_rule, usual_long_term
from sizing.brief.combination_rules_durations import shortest_duration, usual_durations
from sizing.brief.findings import Findings, KeyPath, Names, Quantities, listed, quoted
from sizing.brief.load_cases import CaseTable
from sizing.brief.model import Combination, LoadCase
from sizing.brief.raw_tables import RawBrief, RawCombination, read_entry

GREATEST_FACTOR = 10.0
"""Partial and combination factors lie below 2; ten times a load case is a slip."""


@dataclass(frozen=True, kw_only=True)
class CombinationTable:
    """The combinations and their names.

    ``whole``: all were read without a mistake, so that what is missing is missing indeed.
    ``assumed``: indices of those whose long-term part is the usual one, not stated.
    """

    combinations: tuple[Combination, ...]
    names: Names
    whole: bool
    assumed: frozenset[int]


def read_combinations(
    raw: RawBrief,
    cases: CaseTable,
    standards: Sequence[str],
    findings: Findings,
    quantities: Quantities,
    *,
    present: bool,
) -> CombinationTable:
    """Return the combinations written out, in brief order, and after them those of the rule.

    ``standards`` are the names of the options' standards: they settle the usual load durations
    (EN 1995-1-1 Table 2.2 or NDS Table 2.3.2, see :mod:`sizing.brief.combination_rules_durations`).
    ``present`` is False when the list of combinations itself could not be read.
    """
    before = len(findings)
    entries = [_entry(place, value, findings) for place, value in enumerate(raw.combinations, 1)]
    declared = [e.name for _, e, faulty in entries if e is not None and "name" not in faulty]
    all_named = present and len(declared) == len(entries)
    made = _made_by_rule(raw, cases, standards, declared, findings)
    names = Names(
        findings,
        "combination",
        [*declared, *(c.name for c in made)],
        complete=all_named and (raw.combination_rule is None or bool(made)),
    )
    written, assumed = _written(entries, cases, standards, names, findings, quantities)
    combinations = (*written, *made)
    names.index = {c.name: i for i, c in enumerate(combinations)}
    states_read = all(e is not None and "state" not in faulty for _, e, faulty in entries)
    if present and states_read and (raw.combination_rule is None or made):
        states = [e.state for _, e, _ in entries if e is not None] + [c.state for c in made]
        _must_hold_strength(states, findings)
    _caution(combinations, cases.cases, findings)
    _caution_unfactored(combinations, standards, findings)
    return CombinationTable(
        combinations=combinations,
        names=names,
        whole=present and cases.whole and len(findings) == before,
        assumed=frozenset(assumed),
    )


def _made_by_rule(
    raw: RawBrief,
    cases: CaseTable,
    standards: Sequence[str],
    declared: Sequence[str],
    findings: Findings,
) -> tuple[Combination, ...]:
    """Return the combinations of the brief's rule; none while the load cases hold mistakes."""
    if raw.combination_rule is None or not cases.whole:
        return ()
    path: KeyPath = ("combination_rule",)
    made = read_rule(findings, path, raw.combination_rule, cases.cases, standards)
    clash = [c.name for c in made if c.name in declared]
    if clash:
        findings.add(
            path,
            found=f"the names {listed(clash)} both written out and given by the rule",
            expected="a name of its own for each combination",
            fix="Rename the combinations that are written out.",
        )
    return made


def _written(
    entries: Sequence[tuple[KeyPath, RawCombination | None, frozenset[str]]],
    cases: CaseTable,
    standards: Sequence[str],
    names: Names,
    findings: Findings,
    quantities: Quantities,
) -> tuple[list[Combination], set[int]]:
    usual = usual_durations(standards)
    combinations: list[Combination] = []
    assumed: set[int] = set()
    for path, entry, faulty in entries:
        if entry is None:
            continue
        factors = _factors(path, entry, faulty, cases, findings, quantities)
        long_term = _long_term(path, entry, factors, cases, findings, quantities)
        if entry.name in names.index:
            findings.add(
                (*path, "name"),
                found=f"combination {quoted(entry.name)} for the second time",
                expected="a name of its own for each combination",
            )
        if "name" in faulty or entry.name in names.index:
            continue
        names.index[entry.name] = len(combinations)
        if entry.state == "serviceability" and not entry.long_term:
            long_term = usual_long_term(factors, cases.cases)
            assumed.add(len(combinations))
        combinations.append(
            Combination(
                name=entry.name,
                state=entry.state,
                factors=factors,
                duration=entry.duration or shortest_duration(tuple(factors), cases.cases, usual),
                long_term=long_term,
            )
        )
    return combinations, assumed


def _entry(
    place: int, value: Any, findings: Findings
) -> tuple[KeyPath, RawCombination | None, frozenset[str]]:
    path = named_place("combinations", place, value)
    entry, faulty = read_entry(RawCombination, value, path, findings, "a table [[combinations]]")
    if entry is not None and "name" not in faulty:
        findings.check_name((*path, "name"), entry.name, "combination")
    return path, entry, faulty


def named_place(table: str, place: int, value: Any) -> KeyPath:
    """Return the key path of an entry of a list, by its name where it has one."""
    name = value.get("name") if isinstance(value, dict) else None
    if isinstance(name, str) and name.strip() and not name.isdigit():
        return (table, f"[{name}]")
    return (table, place)


def _factors(
    path: KeyPath,
    entry: RawCombination,
    faulty: frozenset[str],
    cases: CaseTable,
    findings: Findings,
    quantities: Quantities,
) -> dict[int, float]:
    place = (*path, "factors")
    factors, good = read_factors(place, entry.factors, cases.names, findings, quantities)
    if good and not factors and "factors" not in faulty:
        findings.add(
            place,
            found="only zero factors" if entry.factors else "no factors",
            expected="at least one factor that is not 0",
        )
    return factors


def read_factors(
    path: KeyPath,
    raw: Mapping[str, object],
    cases: Names,
    findings: Findings,
    quantities: Quantities,
) -> tuple[dict[int, float], bool]:
    """Return the factors that are not zero by case index, and whether all are good."""
    factors: dict[int, float] = {}
    good = True
    for name, value in raw.items():
        case = cases.resolve((*path, name), name)
        factor = quantities.read((*path, name), value, "dimensionless")
        if factor is not None and abs(factor) > GREATEST_FACTOR:
            findings.add(
                (*path, name),
                found=f"{factor:g}",
                expected=f"a factor of at most {GREATEST_FACTOR:g}",
            )
        if case is None or factor is None:
            good = False
        elif factor != 0.0:
            factors[case] = factor
    return factors, good


def _long_term(
    path: KeyPath,
    entry: RawCombination,
    factors: Mapping[int, float],
    cases: CaseTable,
    findings: Findings,
    quantities: Quantities,
) -> dict[int, float]:
    """Return the long-term part; only a serviceability combination has one."""
    place = (*path, "long_term")
    part, _ = read_factors(place, entry.long_term, cases.names, findings, quantities)
    if entry.long_term and entry.state == "strength":
        findings.add(
            place,
            found="a long-term part of a strength combination",
            expected="long_term in serviceability combinations only",
            fix="Delete it.",
        )
    for case in part.keys() - factors.keys() if factors else ():
        findings.add(
            (*place, cases.cases[case].name),
            found="a load case that is not among the factors",
            expected="load cases of the combination",
        )
    return part


def _must_hold_strength(states: Sequence[str], findings: Findings) -> None:
    if "strength" not in states:
        found = f"no strength combination among {len(states)}" if states else "nothing"
        findings.add(
            ("combinations",),
            found=found,
            expected='a table [[combinations]] with state = "strength", or a combination_rule',
        )


def _caution_unfactored(
    combinations: Sequence[Combination], standards: Sequence[str], findings: Findings
) -> None:
    """Say where nothing is raised above its characteristic value, as design resistances ask."""
    european = [name for name in standards if name.casefold().startswith(("en", "eurocode", "ec"))]
    factors = [f for c in combinations if c.state == "strength" for f in c.factors.values()]
    if european and factors and max(abs(f) for f in factors) <= 1.0:
        findings.caution(
            "No strength combination has a factor above 1, but the resistances of "
            f"{european[0]} are design values: they go with factored loads, EN 1990 6.10."
        )


def _caution(
    combinations: Sequence[Combination], cases: Sequence[LoadCase], findings: Findings
) -> None:
    used = {q for c in combinations for q in c.factors}
    for q, case in enumerate(cases):
        if q not in used:
            findings.caution(f"Load case {case.name} is in no combination.")
    if cases and not any(case.self_weight for case in cases):
        findings.caution(
            "No load case has self_weight = true: the members' own weight is left out unless the "
            "nodal loads include it."
        )
    for c in combinations:
        own = [cases[q].name for q in c.factors if cases[q].self_weight]
        if len(own) > 1:
            findings.caution(
                f"Combination {c.name} counts self-weight {len(own)} times, in the load cases "
                f"{', '.join(own)}."
            )

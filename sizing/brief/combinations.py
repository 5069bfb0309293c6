"""Combinations of a brief: those written out, each with its shortest load duration."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Any, get_args

from sizing.brief.findings import Findings, KeyPath, Names, Quantities, quoted
from sizing.brief.load_cases import CaseTable
from sizing.brief.model import ActionKind, Combination, LoadCase, LoadDuration
from sizing.brief.raw_tables import RawCombination, read_entry

USUAL_DURATION: dict[ActionKind, LoadDuration] = {
    "permanent": "permanent",
    "imposed": "medium",
    "imposed roof": "short",
    "snow": "medium",
    "wind": "short",
    "temperature": "medium",
    "settlement": "permanent",
    "other": "medium",
}
"""EN 1995-1-1:2004 Table 2.2 (from memory): self-weight permanent, imposed floor load medium,
wind short or instantaneous, snow medium or short by national choice (the longer is taken here,
on the safe side); roof access short: EN 1991-1-1 category H, national choice (from memory).
Temperature, settlement and other: common practice. A case's own ``duration`` overrides."""

GREATEST_FACTOR = 10.0
"""Partial and combination factors lie below 2; ten times a load case is a slip."""


def read_combinations(
    raw: Sequence[Any],
    cases: CaseTable,
    findings: Findings,
    quantities: Quantities,
    *,
    complete: bool,
) -> tuple[tuple[Combination, ...], Names]:
    """Return all combinations in brief order, and their names.

    ``complete`` is False when the list itself could not be read.
    """
    entries = [_entry(place, value, findings) for place, value in enumerate(raw, start=1)]
    declared = [e.name for _, e, faulty in entries if e is not None and "name" not in faulty]
    names = Names(
        findings, "combination", declared, complete=complete and len(declared) == len(raw)
    )
    combinations: list[Combination] = []
    for path, entry, faulty in entries:
        if entry is None:
            continue
        factors, good = read_factors(
            (*path, "factors"), entry.factors, cases.names, findings, quantities
        )
        good = good and "factors" not in faulty
        if good and not factors:
            findings.add(
                (*path, "factors"),
                found="only zero factors" if entry.factors else "no factors",
                expected="at least one factor that is not 0",
            )
        long_term = _long_term(path, entry, factors, cases, findings, quantities)
        if entry.name in names.index:
            findings.add(
                (*path, "name"),
                found=f"combination {quoted(entry.name)} for the second time",
                expected="a name of its own for each combination",
            )
            continue
        if "name" in faulty:
            continue
        names.index[entry.name] = len(combinations)
        combinations.append(
            Combination(
                name=entry.name,
                state=entry.state,
                factors=factors,
                duration=entry.duration or shortest_duration(cases.cases[q] for q in factors),
                long_term=long_term,
            )
        )
    if complete and all(e is not None and "state" not in faulty for _, e, faulty in entries):
        _must_hold_strength([e for _, e, _ in entries if e is not None], findings)
    _caution(combinations, cases.cases, findings)
    return tuple(combinations), names


def shortest_duration(cases: Iterable[LoadCase]) -> LoadDuration:
    """Return the shortest load duration of the cases (EN 1995-1-1 3.1.3(2), from memory)."""
    order: tuple[LoadDuration, ...] = get_args(LoadDuration)
    durations = [case.duration or USUAL_DURATION[case.kind] for case in cases]
    return max(durations, key=order.index, default="permanent")


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


def _must_hold_strength(entries: Sequence[RawCombination], findings: Findings) -> None:
    if not any(entry.state == "strength" for entry in entries):
        found = f"no strength combination among {len(entries)}" if entries else "nothing"
        findings.add(
            ("combinations",),
            found=found,
            expected='at least one table [[combinations]] with state = "strength"',
        )


def _caution(
    combinations: Sequence[Combination], cases: Sequence[LoadCase], findings: Findings
) -> None:
    used = {q for c in combinations for q in c.factors}
    for q, case in enumerate(cases):
        if q not in used:
            findings.caution(f"Load case {case.name} is in no combination.")
    for c in combinations:
        own = [cases[q].name for q in c.factors if cases[q].self_weight]
        if len(own) > 1:
            findings.caution(
                f"Combination {c.name} counts self-weight {len(own)} times, in the load cases "
                f"{', '.join(own)}."
            )

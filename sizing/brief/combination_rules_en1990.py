"""EN 1990 combinations of actions for buildings: 6.10 or 6.10a and 6.10b, and serviceability.

6.10   Σ γG Gk + γQ Qk,1 + Σ γQ ψ0,i Qk,i                      (6.4.3.2)
6.10a  Σ γG Gk + γQ ψ0,1 Qk,1 + Σ γQ ψ0,i Qk,i
6.10b  Σ ξ γG Gk + γQ Qk,1 + Σ γQ ψ0,i Qk,i
characteristic  Σ Gk + Qk,1 + Σ ψ0,i Qk,i                      (6.14b)
frequent        Σ Gk + ψ1,1 Qk,1 + Σ ψ2,i Qk,i                 (6.15b)
quasi-permanent Σ Gk + Σ ψ2,i Qk,i                             (6.16b)

Whether an action helps or harms differs from member to member, so every variable action leads
in turn, each of the others is there (times ψ0) or not, and all permanent actions (one source,
Table A1.2(B) Note 3) are unfavourable or favourable together. Left out are only combinations
whose effects lie between those of others with no shorter load duration: favourable permanent
actions alone, and favourable permanent actions in 6.10a. Values recommended by EN 1990:2002
with A1:2005, Tables A1.1, A1.2(A), A1.2(B) and B3 (recalled). γ of settlement: as permanent.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import TypeGuard

from sizing.brief.combination_rules_actions import Action, Actions
from sizing.brief.combination_rules_draft import (
    Draft,
    PermanentState,
    choices_of,
    companions,
    names,
    permanent_states,
    spread,
    with_parts,
)
from sizing.brief.combination_rules_settings import RuleTable, is_number
from sizing.brief.findings import Findings, KeyPath, quoted, shown
from sizing.brief.model import ActionKind, LoadCase

Psi = tuple[float, float, float]

PSI: dict[str, Psi] = {
    "domestic": (0.7, 0.5, 0.3),
    "offices": (0.7, 0.5, 0.3),
    "congregation": (0.7, 0.7, 0.6),
    "shopping": (0.7, 0.7, 0.6),
    "storage": (1.0, 0.9, 0.8),
    "traffic up to 30 kN": (0.7, 0.7, 0.6),
    "traffic 30 to 160 kN": (0.7, 0.5, 0.3),
    "roof": (0.0, 0.0, 0.0),
    "snow Nordic": (0.7, 0.5, 0.2),
    "snow above 1000 m": (0.7, 0.5, 0.2),
    "snow up to 1000 m": (0.5, 0.2, 0.0),
    "wind": (0.6, 0.2, 0.0),
    "temperature": (0.6, 0.5, 0.0),
}
"""EN 1990 Table A1.1: ψ0, ψ1, ψ2 by category."""

UNREDUCED: Psi = (1.0, 1.0, 1.0)

USUAL_PSI: dict[ActionKind, Psi] = {
    "imposed": PSI["offices"],
    "imposed roof": PSI["roof"],
    "snow": PSI["snow up to 1000 m"],
    "wind": PSI["wind"],
    "temperature": PSI["temperature"],
    "other": UNREDUCED,
}

CHOICES: dict[ActionKind, str] = {
    "imposed": "categories A and B, domestic and offices",
    "snow": "sites up to 1000 m outside the Nordic countries",
    "other": "no reduction",
}
"""Kinds of which Table A1.1 has several rows, or none, and the row that is usual here."""

RULE = "EN 1990"

NEVER_TOGETHER = (("imposed roof", "snow"), ("imposed roof", "wind"))
"""EN 1991-1-1 3.3.2(1): imposed load on roofs of category H acts without snow or wind."""

EXPRESSIONS = ("6.10", "6.10a and 6.10b")
SERVICEABILITY = ("characteristic", "frequent", "quasi-permanent", "variable")
ALONE = "permanent alone"
KEYS = (
    "expression",
    "gamma_G_sup",
    "gamma_G_inf",
    "gamma_Q",
    "xi",
    "K_FI",
    "psi",
    "never_together",
    "serviceability",
    "equilibrium",
)
EQU_PERMANENT, EQU_VARIABLE = 0.90, 1.50
MOST_GAMMA = 3.0
"""No partial factor of any national annex comes near; a greater one is a slip of the pen."""


@dataclass(frozen=True, kw_only=True, slots=True)
class EN1990Settings:
    """Partial and combination factors; ``psi`` by action name, pairs that never act together."""

    expression: str
    gamma_sup: float
    gamma_inf: float
    gamma_q: float
    xi: float
    k_fi: float
    psi: Mapping[str, Psi]
    never_together: frozenset[frozenset[str]]
    serviceability: tuple[str, ...]
    equilibrium: bool


def read_en1990(
    findings: Findings, path: KeyPath, table: Mapping[str, object], actions: Actions
) -> EN1990Settings:
    """Read the settings of the rule; mistakes are recorded in ``findings``."""
    read = RuleTable(findings, path, table, KEYS)
    given = read.table("psi")
    _caution_usual(findings, given, actions.variable)
    known = {name for action in actions.variable for name in (action.name, action.kind)}
    return EN1990Settings(
        expression=read.choice("expression", EXPRESSIONS, "6.10"),
        gamma_sup=read.number("gamma_G_sup", 1.35, at_least=1.0, at_most=MOST_GAMMA),
        gamma_inf=read.number("gamma_G_inf", 1.00, at_least=0.0, at_most=1.0),
        gamma_q=read.number("gamma_Q", 1.50, at_least=1.0, at_most=MOST_GAMMA),
        xi=read.number("xi", 0.85, at_least=0.5, at_most=1.0),
        k_fi=read.number("K_FI", 1.0, at_least=0.8, at_most=1.2),
        psi=_read_psi(findings, (*path, "psi"), given, actions.variable),
        never_together=read.pairs("never_together", known | set(USUAL_PSI), NEVER_TOGETHER),
        serviceability=read.choices("serviceability", SERVICEABILITY, ("characteristic",)),
        equilibrium=read.flag("equilibrium"),
    )


def _caution_usual(
    findings: Findings, given: Mapping[str, object], actions: Sequence[Action]
) -> None:
    """Say which ψ were taken where the table leaves a choice and the brief makes none."""
    for action in actions:
        if action.kind in CHOICES and not {action.name, action.kind} & given.keys():
            values = ", ".join(f"{psi:g}" for psi in USUAL_PSI[action.kind])
            findings.caution(
                f"Combination rule {RULE}: {action.name} takes ψ0, ψ1, ψ2 = {values} "
                f"({CHOICES[action.kind]}); set psi where that does not hold."
            )


def _read_psi(
    findings: Findings, path: KeyPath, given: Mapping[str, object], actions: Sequence[Action]
) -> dict[str, Psi]:
    psi = {action.name: USUAL_PSI[action.kind] for action in actions}
    for name, value in given.items():
        if name not in psi and name not in USUAL_PSI:
            findings.add(
                (*path, name),
                found="an unknown action",
                expected=f"a variable action of this brief: {', '.join(psi) or 'there is none'}",
                fix=findings.did_you_mean(name, psi),
            )
            continue
        values = _psi_values(findings, (*path, name), value)
        for action in actions:
            # A table for the kind serves every action of it that has no table of its own.
            if values is not None and (
                action.name == name or (action.kind == name and action.name not in given)
            ):
                psi[action.name] = values
    return psi


def _psi_values(findings: Findings, path: KeyPath, value: object) -> Psi | None:
    if isinstance(value, str):
        for category, values in PSI.items():
            if category.casefold() == value.strip().casefold():
                return values
    elif _is_psi(value):
        first, second, third = (float(v) for v in value)
        return first, second, third
    findings.add(
        path,
        found=shown(value),
        expected="[ψ0, ψ1, ψ2], each from 0 to 1, or a category of Table A1.1: "
        + ", ".join(quoted(category) for category in PSI),
        fix=findings.did_you_mean(value, PSI) if isinstance(value, str) else "",
    )
    return None


def _is_psi(value: object) -> TypeGuard[Sequence[float]]:
    if not isinstance(value, (list, tuple)) or len(value) != 3:
        return False
    return all(is_number(v, 0.0, 1.0) for v in value)


def en1990(
    cases: Sequence[LoadCase], actions: Actions, settings: EN1990Settings
) -> Iterator[Draft]:
    """Yield the combinations of EN 1990, strength first."""
    rule = _Rule(cases=cases, actions=actions, settings=settings)
    yield from rule.strength()
    states = {
        "characteristic": rule.characteristic,
        "frequent": rule.frequent,
        "quasi-permanent": rule.quasi_permanent,
        "variable": rule.variable_only,
    }
    for kind in settings.serviceability:
        yield from states[kind]()


@dataclass(frozen=True, kw_only=True, slots=True)
class _Rule:
    cases: Sequence[LoadCase]
    actions: Actions
    settings: EN1990Settings

    def strength(self) -> Iterator[Draft]:
        """Yield 6.10, or 6.10a and 6.10b, and EQU where asked for."""
        s = self.settings
        unfavourable, q = s.gamma_sup * s.k_fi, s.gamma_q * s.k_fi
        favourable = (s.gamma_inf, "permanent favourable")
        own, others = self._factors(q, None), self._factors(q, 0)
        if s.expression == "6.10":
            yield from self._alone("6.10", unfavourable)
            states = self._permanent([(unfavourable, ""), favourable], unfavourable)
            yield from self._led("U", "6.10", states, own, others)
        else:
            yield from self._alone("6.10a", unfavourable)
            states = self._permanent([(unfavourable, "")], unfavourable)
            yield from self._unled("U", "6.10a", states, others)
            states = self._permanent([(s.xi * unfavourable, ""), favourable], unfavourable)
            yield from self._led("U", "6.10b", states, own, others)
        if s.equilibrium:
            q = EQU_VARIABLE * s.k_fi
            states = self._permanent([(EQU_PERMANENT, "permanent favourable")], unfavourable)
            yield from self._led("E", "EQU", states, self._factors(q, None), self._factors(q, 0))

    def characteristic(self) -> Iterator[Draft]:
        """Yield 6.14b."""
        yield from self._serviceability("S", "characteristic 6.14b", None, 0)

    def frequent(self) -> Iterator[Draft]:
        """Yield 6.15b."""
        yield from self._serviceability("F", "frequent 6.15b", 1, 2)

    def quasi_permanent(self) -> Iterator[Draft]:
        """Yield 6.16b."""
        states, text = self._permanent([(1.0, "")], 1.0), "quasi-permanent 6.16b"
        for state in states:
            yield self._draft("Q", text, ALONE, state, {})
        yield from self._unled("Q", text, states, self._factors(1.0, 2))

    def variable_only(self) -> Iterator[Draft]:
        """Yield the variable actions of 6.14b without the permanent ones."""
        states = (PermanentState(factors={}, words=""),)
        own, others = self._factors(1.0, None), self._factors(1.0, 0)
        yield from self._led("V", "characteristic 6.14b variable actions", states, own, others)

    def _serviceability(
        self, letter: str, text: str, own: int | None, others: int
    ) -> Iterator[Draft]:
        states = self._permanent([(1.0, "")], 1.0)
        for state in states:
            yield self._draft(letter, text, ALONE, state, {})
        leading, accompanying = self._factors(1.0, own), self._factors(1.0, others)
        yield from self._led(letter, text, states, leading, accompanying)

    def _factors(self, q: float, psi: int | None) -> dict[str, float]:
        """Return action name → q times ψ0, ψ1 or ψ2, or times 1 for ``None``."""
        values = self.settings.psi.items()
        return {name: q if psi is None else q * three[psi] for name, three in values}

    def _permanent(
        self, values: Sequence[tuple[float, str]], settled: float
    ) -> tuple[PermanentState, ...]:
        return tuple(permanent_states(self.actions, self.cases, values, settled))

    def _alone(self, expression: str, unfavourable: float) -> Iterator[Draft]:
        """Permanent actions alone; favourable ones only where a settlement acts against them."""
        for state in self._permanent([(unfavourable, "")], unfavourable):
            yield self._draft("U", expression, ALONE, state, {})
        favourable = [(self.settings.gamma_inf, "permanent favourable")]
        for state in self._permanent(favourable, unfavourable):
            if any(self.cases[q].kind == "settlement" for q in state.factors):
                yield self._draft("U", expression, ALONE, state, {})

    def _led(
        self,
        letter: str,
        expression: str,
        states: Sequence[PermanentState],
        own: Mapping[str, float],
        others: Mapping[str, float],
    ) -> Iterator[Draft]:
        """Every action leads in turn with its ``own`` factor, the others accompany or not."""
        for lead in choices_of(self.actions.variable):
            if own[lead[0].name] == 0.0:
                continue
            for parts in companions(self.actions, lead, self.settings.never_together):
                acting = tuple(part for part in parts if others[part[0].name] != 0.0)
                said = f"{names(lead[1], self.cases)} leading{with_parts(acting, self.cases)}"
                variable = spread([lead], own) | spread(acting, others)
                for state in states:
                    yield self._draft(letter, expression, said, state, variable)

    def _unled(
        self,
        letter: str,
        expression: str,
        states: Sequence[PermanentState],
        factor: Mapping[str, float],
    ) -> Iterator[Draft]:
        """No action leads: all that act have their ``factor``."""
        for parts in companions(self.actions, None, self.settings.never_together):
            acting = tuple(part for part in parts if factor[part[0].name] != 0.0)
            if not acting:
                continue
            said = names((q for _, choice in acting for q in choice), self.cases)
            for state in states:
                yield self._draft(letter, expression, said, state, spread(acting, factor))

    def _draft(
        self,
        letter: str,
        expression: str,
        said: str,
        state: PermanentState,
        variable: Mapping[int, float],
    ) -> Draft:
        strength = letter in "UE"
        words = f", {state.words}" if state.words else ""
        return Draft(
            letter=letter,
            state="strength" if strength else "serviceability",
            factors=dict(state.factors) | dict(variable),
            origin=f"{expression}, {said}{words}",
            long_term={} if strength else dict(state.factors) | self._long_term(variable),
        )

    def _long_term(self, variable: Mapping[int, float]) -> dict[int, float]:
        """Return ψ2 of every case that acts, whatever its factor (EN 1995-1-1 2.2.3(5))."""
        return {
            q: self.settings.psi[action.name][2]
            for action in self.actions.variable
            for choice in action.choices
            for q in choice
            if q in variable
        }

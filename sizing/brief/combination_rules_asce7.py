"""ASCE 7 load combinations, editions 7-16 and 7-22, for strength design (LRFD) and ASD.

D permanent, L imposed, Lr imposed roof, S snow, W wind (strength level), R one of Lr and S:

LRFD (2.3.1)  1. 1.4D   2. 1.2D + 1.6L + 0.5R   3. 1.2D + 1.6R + (L or 0.5W)
              4. 1.2D + 1.0W + L + 0.5R   5. 0.9D + 1.0W
ASD (2.4.1)   1. D   2. D + L   3. D + R   4. D + 0.75L + 0.75R   5. D + 0.6W
              6. D + 0.75L + 0.75(0.6W) + 0.75R   7. 0.6D + 0.6W

7-22 takes snow at strength level: 1.0S in 3, 0.3S in 2 and 4; ASD 0.7S and 0.75(0.7S). L in 3
and 4 may be halved by setting (2.3.1 exception 1). Loads act with the sign they are given: an
uplift case is simply a wind case that lifts. Effects of loads not acting are investigated
(2.3.1, 2.4.1): every companion is there or not. Temperature and settlement (2.3.4, 2.4.4) join
every combination, there or not, at a factor of 1 unless set. Rain and earthquake are not
covered. Recalled; confirm against the printed standard, above all the 7-22 snow factors.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from itertools import product

from sizing.brief.combination_rules_actions import NONE, Action, Actions, Choice
from sizing.brief.combination_rules_draft import Draft, PermanentState, names, permanent_states
from sizing.brief.combination_rules_settings import RuleTable
from sizing.brief.findings import Findings, KeyPath, quoted
from sizing.brief.model import ActionKind, LoadCase

SERVICEABILITY = ("total", "variable")
KEYS = ("live_load_factor", "self_straining_factor", "long_term_live_load", "serviceability")
LIVE_LONG_TERM = 0.5
"""Share of the imposed load that counts for creep: D + 0.5L, ASCE 7 Appendix CC.2.1."""

SYMBOLS: dict[ActionKind, str] = {
    "imposed": "L",
    "imposed roof": "Lr",
    "snow": "S",
    "wind": "W",
}
Slot = Mapping[ActionKind, float]


@dataclass(frozen=True, kw_only=True, slots=True)
class Part:
    """A selection of cases of one kind, at one factor; no cases: the slot stays empty."""

    kind: ActionKind
    factor: float
    choice: Choice


NOTHING = Part(kind="other", factor=0.0, choice=NONE)
Parts = tuple[Part, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class SnowFactors:
    """Snow's factor when it leads and when it accompanies (LRFD), and its ASD multiple."""

    leading: float
    companion: float
    allowable: float


SNOW = {
    "7-16": SnowFactors(leading=1.6, companion=0.5, allowable=1.0),
    "7-22": SnowFactors(leading=1.0, companion=0.3, allowable=0.7),
}


@dataclass(frozen=True, kw_only=True, slots=True)
class ASCE7Settings:
    """Edition ``7-16`` or ``7-22``, ``LRFD`` or ``ASD``, and what the user may choose."""

    edition: str
    method: str
    live_load_factor: float
    self_straining: float
    long_term_live: float
    serviceability: tuple[str, ...]


def read_asce7(
    findings: Findings,
    path: KeyPath,
    table: Mapping[str, object],
    cases: Sequence[LoadCase],
    edition: str,
    method: str,
) -> ASCE7Settings:
    """Read the settings of the rule; mistakes are recorded in ``findings``."""
    read = RuleTable(findings, path, table, KEYS)
    for case in cases:
        if case.kind == "other":
            findings.add(
                path,
                found=f'case {quoted(case.name)} of kind "other"',
                expected="kinds to which ASCE 7 gives a factor",
                fix="Give the case another kind, or write its combinations out.",
            )
    _caution_levels(findings, {case.kind for case in cases}, edition)
    return ASCE7Settings(
        edition=edition,
        method=method,
        live_load_factor=read.number("live_load_factor", 1.0, at_least=0.5, at_most=1.0),
        self_straining=read.number("self_straining_factor", 1.0, at_least=0.75, at_most=1.6),
        long_term_live=read.number(
            "long_term_live_load", LIVE_LONG_TERM, at_least=0.0, at_most=1.0
        ),
        serviceability=read.choices("serviceability", SERVICEABILITY, ("total",)),
    )


def _caution_levels(findings: Findings, kinds: set[ActionKind], edition: str) -> None:
    """Say at which level wind and snow must be given; the factors differ by edition."""
    if "wind" in kinds:
        findings.caution(
            f"Combination rule ASCE {edition}: wind cases count as strength-level wind (maps of "
            "7-10 and later); pressures from older maps do not belong here."
        )
    if "snow" in kinds:
        level = "strength-level" if SNOW[edition].leading == 1.0 else "service-level"
        findings.caution(
            f"Combination rule ASCE {edition}: snow cases count as {level} snow of that edition."
        )


@dataclass(frozen=True, kw_only=True, slots=True)
class Formula:
    """One numbered combination: factor on D, then slots of loads of which one or none acts.

    A slot maps kind → factor. ``leading`` must act. Of ``others`` at least ``least`` act;
    ``full``: every slot for which the brief has a load is filled (its parts are covered by
    other combinations). ``timed_by_leading``: the load duration is that of the leading load
    (NDS Table N3 gives the time effect factor by it), permanent where none leads; else that of
    the shortest (NDS 2.3.2).
    """

    number: str
    permanent: float
    leading: Slot = field(default_factory=dict)
    others: tuple[Slot, ...] = ()
    least: int = 0
    full: bool = False
    timed_by_leading: bool = False


def formulas(settings: ASCE7Settings) -> tuple[Formula, ...]:
    """Return the numbered strength combinations of the edition and method."""
    snow = SNOW[settings.edition]
    if settings.method == "LRFD":
        return _lrfd(snow, settings.live_load_factor)
    return _asd(snow)


def _lrfd(snow: SnowFactors, live: float) -> tuple[Formula, ...]:
    roof: Slot = {"imposed roof": 1.6, "snow": snow.leading}
    roof_too: Slot = {"imposed roof": 0.5, "snow": snow.companion}
    wind: Slot = {"wind": 1.0}

    def led(number: int, permanent: float, leading: Slot, others: tuple[Slot, ...] = ()) -> Formula:
        return Formula(
            number=f"2.3.1({number})",
            permanent=permanent,
            leading=leading,
            others=others,
            timed_by_leading=True,
        )

    return (
        Formula(number="2.3.1(1)", permanent=1.4, timed_by_leading=True),
        led(2, 1.2, {"imposed": 1.6}, (roof_too,)),
        led(3, 1.2, roof, ({"imposed": live, "wind": 0.5},)),
        led(4, 1.2, wind, ({"imposed": live}, roof_too)),
        led(5, 0.9, wind),
    )


def _asd(snow: SnowFactors) -> tuple[Formula, ...]:
    roof: Slot = {"imposed roof": 1.0, "snow": snow.allowable}
    three_quarters: tuple[Slot, ...] = (
        {"imposed": 0.75},
        {"imposed roof": 0.75, "snow": 0.75 * snow.allowable},
    )
    return (
        Formula(number="2.4.1(1)", permanent=1.0),
        Formula(number="2.4.1(2)", permanent=1.0, leading={"imposed": 1.0}),
        Formula(number="2.4.1(3)", permanent=1.0, leading=roof),
        Formula(number="2.4.1(4)", permanent=1.0, others=three_quarters, full=True),
        Formula(number="2.4.1(5)", permanent=1.0, leading={"wind": 0.6}),
        Formula(
            number="2.4.1(6)",
            permanent=1.0,
            leading={"wind": 0.75 * 0.6},
            others=three_quarters,
            least=1,
        ),
        Formula(number=UPLIFT_ASD, permanent=0.6, leading={"wind": 0.6}),
    )


UPLIFT_ASD = "2.4.1(7)"


def asce7(cases: Sequence[LoadCase], actions: Actions, settings: ASCE7Settings) -> Iterator[Draft]:
    """Yield the combinations of ASCE 7, strength first; ``actions`` are sorted by kind."""
    by_kind = {action.kind: action for action in actions.variable}
    rule = _Rule(cases=cases, actions=actions, settings=settings, by_kind=by_kind)
    for formula in formulas(settings):
        yield from rule.expanded(formula, "U", with_permanent=True)
    service = [f for f in _asd(SNOW[settings.edition]) if f.number != UPLIFT_ASD]
    for kind in settings.serviceability:
        for formula in service:
            letter = "S" if kind == "total" else "V"
            yield from rule.expanded(formula, letter, with_permanent=kind == "total")


@dataclass(frozen=True, kw_only=True, slots=True)
class _Rule:
    cases: Sequence[LoadCase]
    actions: Actions
    settings: ASCE7Settings
    by_kind: Mapping[ActionKind, Action]

    def expanded(self, formula: Formula, letter: str, *, with_permanent: bool) -> Iterator[Draft]:
        """Yield the formula with every admissible selection of the loads of the brief."""
        if with_permanent:
            values, settled = [(formula.permanent, "")], self.settings.self_straining
            states = tuple(permanent_states(self.actions, self.cases, values, settled))
        else:
            states = (PermanentState(factors={}, words=""),)
        for parts in self._selections(formula):
            for strain in self._strain():
                for state in states:
                    yield self._draft(formula, letter, parts, strain, state)

    def _selections(self, formula: Formula) -> Iterator[Parts]:
        leading = self._filled(formula.leading) if formula.leading else [NOTHING]
        others = [self._filled(slot) for slot in formula.others]
        others = [filled for filled in others if filled]
        if not formula.full:
            others = [[*filled, NOTHING] for filled in others]
        for picked in product(leading, *others):
            parts = tuple(part for part in picked if part.choice)
            acting = sum(1 for part in picked[1:] if part.choice)
            if acting >= formula.least and self.actions.compatible([p.choice for p in parts]):
                yield parts

    def _filled(self, slot: Slot) -> list[Part]:
        """Return every way to fill a slot with loads of the brief."""
        return [
            Part(kind=kind, factor=factor, choice=choice)
            for kind, factor in slot.items()
            if kind in self.by_kind
            for choice in self.by_kind[kind].choices
        ]

    def _strain(self) -> tuple[Choice, ...]:
        action = self.by_kind.get("temperature")
        return (NONE,) if action is None else (NONE, *action.choices)

    def _draft(
        self,
        formula: Formula,
        letter: str,
        parts: Parts,
        strain: Choice,
        state: PermanentState,
    ) -> Draft:
        factors = dict(state.factors)
        long_term = {} if letter == "U" else dict(state.factors)
        for part in parts:
            factors |= dict.fromkeys(part.choice, part.factor)
            if letter != "U" and part.kind == "imposed":
                long_term |= dict.fromkeys(part.choice, self.settings.long_term_live)
        factors |= dict.fromkeys(strain, self.settings.self_straining)
        timed = None
        if formula.timed_by_leading and letter == "U":
            timed = parts[0].choice if parts else NONE
        return Draft(
            letter=letter,
            state="strength" if letter == "U" else "serviceability",
            factors=factors,
            origin=self._origin(formula, letter, parts, strain, state),
            timed_by=timed,
            long_term=long_term,
        )

    def _origin(
        self,
        formula: Formula,
        letter: str,
        parts: Parts,
        strain: Choice,
        state: PermanentState,
    ) -> str:
        terms = [f"{formula.permanent:g}D"] if letter != "V" else []
        terms += [f"{part.factor:g}{SYMBOLS[part.kind]}" for part in parts]
        terms += [f"{self.settings.self_straining:g}T"] if strain else []
        acting = [*(q for part in parts for q in part.choice), *strain]
        said = f": {names(acting, self.cases)}" if acting else ""
        words = f", {state.words}" if state.words else ""
        number = formula.number if letter == "U" else "serviceability"
        return f"{number}, {' + '.join(terms)}{said}{words}"

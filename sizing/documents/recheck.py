"""The recheck: governing tension and compression of every member, ready to be worked again.

Checks whose worked lines follow the same formulas stand in one block, one row per member, one
column per line, so that a formula runs down its column unchanged. Numbers are in one system of
units (N, mm, N/mm², or kip, in, ksi), in which formulas need no conversion factors.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

from sizing.brief.model import Brief
from sizing.documents.plain_text import visible
from sizing.results import Extreme, MemberResult, OptionResult
from sizing.standards.contract import Sense, Step
from sizing.standards.formula import Formula, symbols_in
from sizing.units import factor

SENSES: tuple[Sense, ...] = ("tension", "compression")


@dataclass(frozen=True, kw_only=True, slots=True)
class SheetUnits:
    """A consistent system: names of the units of force, length and stress, and SI factors."""

    force: str
    length: str
    stress: str
    scales: tuple[tuple[str, float], ...]

    def scale(self, unit: str) -> float:
        """Return the number in this system for one SI ``unit``; 1 for ratios."""
        return dict(self.scales).get(unit, 1.0)

    def name(self, unit: str) -> str:
        """Return the name of the unit that stands for an SI ``unit``."""
        named = {"N": self.force, "Pa": self.stress, "m": self.length, "-": ""}
        powers = {"m²": "²", "m2": "²", "m³": "³", "m⁴": "⁴", "m4": "⁴"}
        return f"{self.length}{powers[unit]}" if unit in powers else named.get(unit, unit)


def sheet_units(*, us: bool) -> SheetUnits:
    """Return N, mm and N/mm², or kip, in and ksi."""
    force, length, stress = ("kip", "in", "ksi") if us else ("N", "mm", "N/mm²")
    f, m = float(1 / factor(force, "force")), float(1 / factor(length, "length"))
    # The stress is force over length squared to the last digit, or the columns would not agree.
    scales = {"N": f, "m": m, "m²": m**2, "m2": m**2, "m³": m**3, "m⁴": m**4, "m4": m**4}
    return SheetUnits(
        force=force, length=length, stress=stress, scales=(*scales.items(), ("Pa", f / m**2))
    )


@dataclass(frozen=True, kw_only=True, slots=True)
class RecheckLine:
    """One column of a block; ``formula`` is None for an input."""

    symbol: str
    expression: str
    unit: str
    clause: str
    meaning: str
    formula: Formula | None


@dataclass(frozen=True, kw_only=True, slots=True)
class RecheckRow:
    """One check: ``values`` are those of the worked lines, SI; ``force`` in N, signed.

    ``resistance`` (cap on utilisation included) and ``utilisation`` are the tool's.
    """

    mark: str
    group: str
    section: str
    combination: str
    clause: str
    force: float
    values: tuple[float, ...]
    cap: float
    resistance: float
    utilisation: float


@dataclass(frozen=True, kw_only=True, slots=True)
class RecheckBlock:
    """Checks of one sense that share their formulas."""

    sense: Sense
    lines: tuple[RecheckLine, ...]
    rows: tuple[RecheckRow, ...]


def recheck_blocks(brief: Brief, option: OptionResult) -> tuple[RecheckBlock, ...]:
    """Return all checks of an option, those of one form together, tension first."""
    caps = {group.name: group.utilisation_cap for group in brief.groups}
    blocks: dict[tuple[object, ...], list[tuple[tuple[Step, ...], RecheckRow]]] = {}
    for sense in SENSES:
        for member, extreme in _checks(option, sense):
            if extreme.steps:
                row = _row(member, extreme, caps.get(member.group, 1.0))
                blocks.setdefault((sense, _form(extreme.steps)), []).append((extreme.steps, row))
    return tuple(
        RecheckBlock(
            sense="tension" if key[0] == "tension" else "compression",
            lines=_shared([_lines(steps) for steps, _ in found]),
            rows=tuple(row for _, row in found),
        )
        for key, found in blocks.items()
    )


def not_rechecked(option: OptionResult) -> tuple[str, ...]:
    """Return the marks of members whose section offers no resistance to a force they carry."""
    return tuple(
        member.mark
        for member in option.members
        if any(e is not None and not e.steps for e in (member.tension, member.compression))
    )


def _checks(option: OptionResult, sense: Sense) -> Iterator[tuple[MemberResult, Extreme]]:
    for member in option.members:
        extreme = member.tension if sense == "tension" else member.compression
        if extreme is not None:
            yield member, extreme


def _row(member: MemberResult, extreme: Extreme, cap: float) -> RecheckRow:
    return RecheckRow(
        mark=visible(member.mark),
        group=visible(member.group),
        section=visible(member.designation),
        combination=visible(extreme.governing_combination),
        clause=visible(extreme.clause),
        force=extreme.governing_force,
        values=tuple(step.value for step in extreme.steps),
        cap=cap,
        resistance=extreme.resistance,
        utilisation=extreme.utilisation,
    )


def _shared(checks: list[tuple[RecheckLine, ...]]) -> tuple[RecheckLine, ...]:
    """Return the columns of a block, in words that hold for all of its rows."""
    columns = []
    for lines in zip(*checks, strict=True):
        words = {
            name: values.pop() if len(values) == 1 else ""
            for name in ("expression", "clause", "meaning")
            for values in [{str(getattr(line, name)) for line in lines}]
        }
        columns.append(replace(lines[0], **words))
    return tuple(columns)


def _form(steps: tuple[Step, ...]) -> tuple[object, ...]:
    return tuple((line.symbol, line.unit, line.formula) for line in _lines(steps))


def _lines(steps: tuple[Step, ...]) -> tuple[RecheckLine, ...]:
    """Return the columns; what rests on a value without end (no length: no limit) is an input."""
    endless = frozenset(step.symbol for step in steps if not math.isfinite(step.value))
    return tuple(
        RecheckLine(
            symbol=visible(step.symbol),
            expression=visible(step.expression),
            unit=step.unit,
            clause=visible(step.clause),
            meaning=visible(step.meaning),
            formula=_kept(step, endless),
        )
        for step in steps
    )


def _kept(step: Step, endless: frozenset[str]) -> Formula | None:
    if step.formula is None or step.symbol in endless or symbols_in(step.formula) & endless:
        return None
    return step.formula

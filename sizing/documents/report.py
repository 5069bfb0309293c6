"""report.html: the calculation report, one file that opens and prints anywhere."""

from __future__ import annotations

import base64
import hashlib
import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from importlib.resources import files
from typing import Any
from xml.etree import ElementTree as Xml

from sizing.documents.cutting_drawing import cutting_drawing
from sizing.documents.drawing import svg_text
from sizing.documents.hand_check import hand_checks
from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.rows import job_tables
from sizing.documents.state_drawing import (
    caption,
    deciding_combination,
    force_drawing,
    most_deflected,
    state_data,
    utilisation_drawing,
)
from sizing.documents.tables import Cell, Column, essential_part, printed
from sizing.documents.wording import ALARMS, CLOSING_CAUTION, met, outcome_sentence
from sizing.results import JobResult, OptionResult, WorkedCheck
from sizing.standards.contract import Step

FIGURES = 4
"""Significant figures of a worked line: enough to follow by hand to 1 in 1000."""

SHORT_TEXT = 18
"""Characters up to which a cell is kept on one line: marks, sections, combinations."""

TEMPLATE = "report.html.jinja"
SCRIPT = "report_script.js"


@dataclass(frozen=True, kw_only=True, slots=True)
class _Line:
    """One worked line ready for print."""

    symbol: str
    expression: str
    value: str
    clause: str
    meaning: str


@dataclass(frozen=True, kw_only=True, slots=True)
class _Worked:
    """One worked check ready for print."""

    heading: str
    lines: tuple[_Line, ...]
    closing: str
    met: bool


def report_bytes(
    job: JobResult,
    issued: date,
    drawings: Sequence[Xml.Element],
    previous: Mapping[str, Any] | None = None,
) -> bytes:
    """Return report.html for ``job`` as UTF-8, with ``drawings`` inside and no outside links.

    ``drawings`` are those of :func:`sizing.documents.drawing.draw_options`; ``previous`` is an
    earlier result, since which the page tells what changed.
    """
    tables = job_tables(job, issued, previous)
    cover, *shared = tables.shared
    script = files("sizing.documents").joinpath(SCRIPT).read_text(encoding="utf-8")
    page: str = _template().render(
        title=visible(job.brief.title),
        cover=cover,
        shared={table.name: table for table in shared},
        options=[
            {
                "name": visible(option.option),
                "outcome": outcome_sentence(option),
                "adequate": option.adequate,
                "drawing": svg_text(drawing),
                **_states(job, option, tables.units),
                **_by_hand(job, option, tables.units),
                "bars": "" if bars is None else svg_text(bars),
                "worked": [
                    _worked(check, tables.units, _caps(job, option).get(check.mark, 1.0))
                    for check in option.worked
                ],
                "tables": {table.name: essential_part(table) for table in own},
            }
            for (option, own), drawing in zip(tables.by_option, drawings, strict=True)
            for bars in [cutting_drawing(option, tables.units)]
        ],
        brief=f"{visible(job.brief.source.name)}, SHA-256 {job.brief.source.sha256}",
        maker=f"sizing {job.version}",
        issued=issued.isoformat(),
        closing=CLOSING_CAUTION,
        us=tables.units.us,
        script=script,
        script_hash=_hash_of(script),
    )
    return (page + "\n").encode("utf-8", "replace")


def _states(job: JobResult, option: OptionResult, units: ShownUnits) -> dict[str, Any]:
    """Return drawings of utilisation, forces and deflection, and the data to redraw them."""
    first, sag = deciding_combination(option), most_deflected(option)
    brief = job.brief
    return {
        "utilisation": svg_text(utilisation_drawing(brief, option)),
        "forces": svg_text(force_drawing(brief, option, units, first)),
        "caption": caption(brief, option, units, first),
        "sag": "" if sag is None else svg_text(force_drawing(brief, option, units, sag)),
        "sag_caption": "" if sag is None else caption(brief, option, units, sag),
        "first": first,
        "combinations": [visible(c.name) for c in option.combinations],
        "marks": [visible(m.mark) for m in option.members],
        "state": _script_data(state_data(brief, option, units)),
    }


def _by_hand(job: JobResult, option: OptionResult, units: ShownUnits) -> dict[str, Any]:
    checks, why_not = hand_checks(job.brief, option, units)
    return {"by_hand": checks, "why_not_by_hand": why_not}


def _script_data(data: dict[str, Any]) -> str:
    """Return JSON that cannot end the element it stands in, whatever names it holds."""
    text = json.dumps(data, ensure_ascii=True, separators=(",", ":"), allow_nan=False)
    return text.replace("&", "\\u0026").replace("<", "\\u003c").replace(">", "\\u003e")


def _hash_of(script: str) -> str:
    """Return the hash by which a browser knows the page's own script (CSP level 2)."""
    digest = hashlib.sha256(script.encode("utf-8")).digest()
    return f"sha256-{base64.b64encode(digest).decode('ascii')}"


def _template() -> Any:
    from jinja2 import (
        Environment,
        PackageLoader,
        StrictUndefined,
    )

    environment = Environment(
        loader=PackageLoader("sizing.documents", "."),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.filters["printed"] = printed
    environment.filters["cell_class"] = _cell_class
    environment.filters["css_text"] = _css_text
    return environment.get_template(TEMPLATE)


def _cell_class(cell: Cell, column: Column) -> str:
    alarm = cell in ALARMS or (
        column.style == "ratio" and isinstance(cell, float) and not met(cell)
    )
    kind = "n" if column.numeric else "t"
    if kind == "t" and isinstance(cell, str):
        kind = "t s" if len(cell) <= SHORT_TEXT else "t p"
    return f"{kind} alarm" if alarm else kind


def _css_text(words: str) -> str:
    """Return words as a CSS string in which nothing but letters and digits stands bare."""
    return (
        '"' + "".join(c if c.isalnum() and c.isascii() else f"\\{ord(c):x} " for c in words) + '"'
    )


def _caps(job: JobResult, option: OptionResult) -> dict[str, float]:
    """Return the utilisation cap that applies to each mark."""
    of_group = {group.name: group.utilisation_cap for group in job.brief.groups}
    return {member.mark: of_group.get(member.group, 1.0) for member in option.members}


def _worked(check: WorkedCheck, units: ShownUnits, cap: float) -> _Worked:
    passes = met(check.utilisation)
    force = units.force.fitted([check.force])
    of = "" if cap == 1.0 else f" of the group's cap, {cap:.2f} of the resistance"
    share = f"{check.utilisation:.3f}" if math.isfinite(check.utilisation) else "no resistance"
    return _Worked(
        heading=f"Member {visible(check.mark)}, {visible(check.designation)}: {check.sense}",
        lines=tuple(_line(step, units) for step in check.steps),
        closing=(
            f"Force in {visible(check.combination)}: {force.text(check.force)} ({check.sense}); "
            f"utilisation {share}{of}"
        ),
        met=passes,
    )


def _line(step: Step, units: ShownUnits) -> _Line:
    return _Line(
        symbol=visible(step.symbol),
        expression=visible(step.expression),
        value=quantity_text(step.value, step.unit, units),
        clause=visible(step.clause),
        meaning=visible(step.meaning),
    )


def quantity_text(value: float, unit: str, units: ShownUnits) -> str:
    """Return an SI value in the units of the report, four significant figures."""
    shown: dict[str, Quantity] = {
        "N": units.force,
        "m": units.movement,
        "m²": units.area,
        "m2": units.area,
        "m⁴": units.second_moment,
        "m4": units.second_moment,
        "Pa": units.stress,
    }
    if not math.isfinite(value):
        return "unlimited"
    known = shown.get(unit)
    if known is not None:
        return f"{_figures(known.of(value))} {known.unit}"
    return f"{_figures(value)} {'' if unit == '-' else visible(unit)}".strip()


def _figures(value: float) -> str:
    if value == 0.0:
        return "0"
    size = math.floor(math.log10(abs(value)))
    if -4 <= size <= 8:
        return f"{value:.{max(0, FIGURES - 1 - size)}f}"
    return f"{value:.{FIGURES - 1}e}"

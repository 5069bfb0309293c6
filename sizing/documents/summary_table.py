"""One row per option: what it is, what it weighs and costs, and how sure that is."""

from __future__ import annotations

import math
from collections.abc import Callable

from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import ratio, status_text
from sizing.results import JobResult, OptionResult

CARBON = Quantity(unit="kgCO2e", scale=1.0, places=0)


def summary_table(job: JobResult, units: ShownUnits) -> Table:
    """Return the options side by side; cost and carbon only where the brief gives rates."""
    mass, total = units.mass, objective_quantity(job, units)
    columns = (
        Column(head="Option"),
        Column(head="Standard"),
        Column(head="Grade"),
        Column(head="Catalogue"),
        Column(head="Mass of members", unit=mass.unit, style="number", places=mass.places),
        *(c for c, _ in _price_columns(job)),
        Column(
            head="Outer surface",
            unit=units.surface.unit,
            style="number",
            places=units.surface.places,
        ),
        Column(head="Volume", unit=units.volume.unit, style="number", places=units.volume.places),
        Column(head="Minimised"),
        Column(head="Total minimised", unit=total.unit, style="number", places=total.places),
        Column(head="Lower bound", unit=total.unit, style="number", places=total.places),
        Column(head="Gap", unit="%", style="number", places=2),
        Column(head="Greatest utilisation", style="ratio"),
        Column(head="Governed by", style="prose"),
        Column(head="Deflection utilisation", style="ratio"),
        Column(head="Different sections", style="whole"),
        Column(head="All checks met"),
        Column(head="Lightest?", style="prose"),
    )
    rows = [_row(job, option, units, total) for option in job.options]
    for name, reason in job.without_answer:
        cells: list[Cell] = [None] * len(columns)
        cells[0], cells[-2], cells[-1] = visible(name), "NO", f"no answer: {visible(reason)}"
        rows.append(tuple(cells))
    return Table(
        name="Summary",
        title="Summary of options",
        columns=columns,
        rows=tuple(rows),
        notes=(
            "Lower bound: no choice of sections from the catalogue that passes can total less.",
            "Options are comparable only if loads, limits and restraint are the same for each.",
            *_price_notes(job),
        ),
        large_paper=True,
    )


def _row(
    job: JobResult, option: OptionResult, units: ShownUnits, total: Quantity
) -> tuple[Cell, ...]:
    deflection = max((d.utilisation for d in option.deflections), default=None)
    surface = option.surface
    return (
        visible(option.option),
        visible(option.standard),
        visible(option.grade),
        visible(option.catalogue),
        units.mass.of(option.mass),
        *(of(option) for of in (read for _, read in _price_columns(job))),
        units.surface.of(surface) if math.isfinite(surface) else "not given",
        units.volume.of(option.volume),
        visible(option.objective_text),
        total.of(option.objective),
        total.of(option.bound) if option.bound is not None else "none",
        100.0 * option.gap if option.gap is not None else "unknown",
        ratio(option.utilisation),
        _governing(option),
        ratio(deflection) if deflection is not None else "no limit set",
        len({s.designation for s in option.sections}),
        "yes" if option.adequate else "NO",
        f"{status_text(option)} ({visible(option.method)})",
    )


def _governing(option: OptionResult) -> str:
    """Return the check with the greatest utilisation of all, and where it stands."""
    group = max(option.groups, key=lambda g: g.utilisation, default=None)
    limit = max(option.deflections, key=lambda d: d.utilisation, default=None)
    if limit is not None and (group is None or limit.utilisation > group.utilisation):
        return visible(f"deflection {limit.limit_name} at {limit.node}")
    return "" if group is None else visible(f"{group.governed_by} at {group.governing_member}")


def _cost(option: OptionResult) -> Cell:
    return option.cost if option.cost is not None else "no rates"


def _carbon(option: OptionResult) -> Cell:
    return option.carbon if option.carbon is not None else "no factors"


def _biogenic(option: OptionResult) -> Cell:
    return option.biogenic if option.biogenic is not None else "not given"


def _price_columns(job: JobResult) -> list[tuple[Column, Callable[[OptionResult], Cell]]]:
    """Return columns and readers of cost and carbon, where any option has them."""
    found: list[tuple[Column, Callable[[OptionResult], Cell]]] = []
    if any(o.cost is not None for o in job.options):
        unit = "/".join(sorted({visible(o.currency) for o in job.options if o.currency}))
        found.append((Column(head="Cost", unit=unit, style="number", places=2), _cost))
    if any(o.carbon is not None for o in job.options):
        head = Column(head="Carbon A1 to A3", unit=CARBON.unit, style="number", places=0)
        found.append((head, _carbon))
    if any(o.biogenic is not None for o in job.options):
        head = Column(head="Biogenic carbon, apart", unit=CARBON.unit, style="number", places=0)
        found.append((head, _biogenic))
    return found


def _price_notes(job: JobResult) -> tuple[str, ...]:
    if not _price_columns(job):
        return ()
    return ("Cost and carbon follow from the rates in the brief, for members only.",)


def objective_quantity(job: JobResult, units: ShownUnits) -> Quantity:
    """Return the unit of what was minimised."""
    if job.brief.minimise == "mass":
        return units.mass
    if job.brief.minimise == "carbon":
        return CARBON
    currencies = sorted({visible(o.currency) for o in job.options if o.currency})
    return Quantity(unit="/".join(currencies) or "currency", scale=1.0, places=2)


def objective_text(job: JobResult, units: ShownUnits, value: float) -> str:
    """Return a total of what was minimised with its unit."""
    return objective_quantity(job, units).text(value)

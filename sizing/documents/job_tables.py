"""Tables of the whole job: cover, nodes, loads, basis and cautions."""

from __future__ import annotations

from datetime import date

from sizing.brief.model import Brief
from sizing.documents.force_tables import axes
from sizing.documents.plain_text import paragraphs, visible
from sizing.documents.quantities import ShownUnits
from sizing.documents.summary_table import objective_text
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import CLOSING_CAUTION, listed, status_text, verdict
from sizing.results import JobResult, OptionResult

ITEM_COLUMNS = (Column(head="Item"), Column(head="Entry", style="prose"))


def cover_table(job: JobResult, issued: date) -> Table:
    """Return the facts of the job that identify this issue."""
    brief = job.brief
    rows: list[tuple[Cell, ...]] = [
        ("Title", visible(brief.title)),
        ("Issued", issued.isoformat()),
        ("Brief", visible(brief.source.name)),
        ("Brief, SHA-256", brief.source.sha256),
        ("Made by", f"sizing {job.version}"),
        ("Truss", _extent(brief)),
        ("Loads", _load_count(brief)),
        ("Minimised", brief.minimise),
        ("Options", visible(", ".join(option.name for option in brief.options))),
    ]
    rows += [("Note", line) for line in paragraphs(brief.notes)]
    rows += [
        (f"Result, {visible(o.option)}", f"{verdict(o)}; {status_text(o)}") for o in job.options
    ]
    rows += [
        (f"Result, {visible(name)}", f"no answer: {visible(why)}")
        for name, why in job.without_answer
    ]
    rows += [
        ("Read first", CLOSING_CAUTION),
    ]
    return Table(
        name="Cover",
        title="Schedule of truss members",
        columns=ITEM_COLUMNS,
        rows=tuple(rows),
        notes=("Numbers are values worked out elsewhere; the sheet Recheck alone has formulas.",),
    )


def _extent(brief: Brief) -> str:
    kind = "plane" if brief.dimensions == 2 else "space"
    counts = (len(brief.nodes), len(brief.members), len(brief.groups), len(brief.supports))
    nodes, members, groups, supports = counts
    return (
        f"{kind} truss, pin-jointed: {nodes} nodes, {members} members, {groups} groups, "
        f"{supports} supported nodes"
    )


def _load_count(brief: Brief) -> str:
    strength = len(brief.combinations_of("strength"))
    service = len(brief.combinations_of("serviceability"))
    return (
        f"{len(brief.cases)} load cases; {strength} strength and {service} serviceability "
        "combinations"
    )


def nodes_table(brief: Brief, units: ShownUnits) -> Table:
    """Return node coordinates and supports, so that a checker can key the truss again."""
    length = units.length
    names = axes(brief)
    held = {s.node: s.held for s in brief.supports}
    rows: tuple[tuple[Cell, ...], ...] = tuple(
        (
            visible(node.name),
            *(length.of(coordinate) for coordinate in node.position),
            listed(a for a, h in zip(names, held.get(i, ()), strict=False) if h),
        )
        for i, node in enumerate(brief.nodes)
    )
    return Table(
        name="Nodes",
        title="Nodes and supports",
        columns=(
            Column(head="Node"),
            *(
                Column(head=a, unit=length.unit, style="number", places=length.places + 1)
                for a in names
            ),
            Column(head="Held along"),
        ),
        rows=rows,
        notes=(f"Axis {names[-1]} points up.",),
    )


def loads_table(brief: Brief, units: ShownUnits) -> Table:
    """Return every nodal load of every load case."""
    names = axes(brief)
    force = units.force.fitted(
        f for case in brief.cases for load in case.nodal.values() for f in load
    )
    rows: list[tuple[Cell, ...]] = []
    for case in brief.cases:
        head = (visible(case.name), case.kind, case.duration or "usual for its kind")
        if case.self_weight:
            rows.append((*head, "weight of members", *(None,) * len(names)))
        rows += [
            (*head, visible(brief.nodes[node].name), *(force.of(f) for f in load))
            for node, load in sorted(case.nodal.items())
        ]
    return Table(
        name="Loads",
        title="Load cases, before factors",
        columns=(
            Column(head="Load case"),
            Column(head="Kind"),
            Column(head="Duration"),
            Column(head="Node"),
            *(
                Column(head=f"Load {a}", unit=force.unit, style="number", places=force.places)
                for a in names
            ),
        ),
        rows=tuple(rows),
        notes=(f"Loads act at nodes only; axis {names[-1]} points up.",),
    )


def basis_table(job: JobResult, option: OptionResult, units: ShownUnits) -> Table:
    """Return the basis of design of one option."""
    bound = "none" if option.bound is None else objective_text(job, units, option.bound)
    gap = "unknown" if option.gap is None else f"{100.0 * option.gap:.2f} %"
    rows: list[tuple[Cell, ...]] = [
        ("Standard", visible(f"{option.standard} {option.edition}".strip())),
        ("Grade", visible(option.grade)),
        ("Catalogue", visible(f"{option.catalogue} (file {option.catalogue_source.name})")),
        ("Catalogue, SHA-256", option.catalogue_source.sha256),
        ("Brief", visible(job.brief.source.name)),
        ("Brief, SHA-256", job.brief.source.sha256),
        ("Made by", f"sizing {job.version}"),
        ("Minimised", visible(option.objective_text)),
        ("Result", f"{verdict(option)}; {status_text(option)}"),
        ("Method", visible(option.method)),
        ("Lower bound", f"{bound}; gap {gap}"),
        ("Structural analyses", str(option.analyses)),
        ("Mass of members", units.mass.text(option.mass)),
        (
            "Connection allowance",
            f"{100.0 * option.connection_allowance:.1f} % added to member weight in the loads; "
            "not in the masses listed",
        ),
    ]
    stated = tuple(_plain_item(what) for what, _ in option.basis)
    rows = [row for row in rows if not any(s.startswith(_plain_item(str(row[0]))) for s in stated)]
    rows += [(visible(what), visible(value)) for what, value in option.basis]
    rows += _left_out(option)
    return Table(name="Basis", title="Basis of design", columns=ITEM_COLUMNS, rows=tuple(rows))


def _plain_item(item: str) -> str:
    return item.replace(",", "").casefold()


def _left_out(option: OptionResult) -> list[tuple[Cell, ...]]:
    """Return the sections that the standard could not use, one row per reason."""
    by_reason: dict[str, list[str]] = {}
    for name, why in option.left_out:
        by_reason.setdefault(why, []).append(visible(name))
    return [
        ("Sections left out", f"{', '.join(dict.fromkeys(names))}: {visible(why)}")
        for why, names in by_reason.items()
    ]


def cautions_table(option: OptionResult) -> Table:
    """Return what the answer does not cover and what it assumes."""
    return Table(
        name="Cautions",
        title="Cautions: what is assumed and what is not checked",
        columns=(Column(head="No.", style="whole"), Column(head="Caution", style="prose")),
        rows=tuple(
            (i, visible(text)) for i, text in enumerate(option.cautions or (CLOSING_CAUTION,), 1)
        ),
    )

"""Reading a brief: a TOML file in, a valid :class:`~sizing.brief.model.Brief` in SI units out."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

from sizing.brief.combinations import read_combinations
from sizing.brief.deflections import read_deflection_limits
from sizing.brief.findings import Findings, KeyPath, Quantities, key_path_text
from sizing.brief.groups_and_members import read_groups
from sizing.brief.load_cases import read_cases
from sizing.brief.model import Brief, SourceFile, Units
from sizing.brief.nodes_and_supports import read_nodes, read_supports
from sizing.brief.options import read_options
from sizing.brief.raw_tables import RawBrief, RawUnits, read_entry
from sizing.brief.toml_file import load_toml
from sizing.brief.truss_checks import check_truss


def read_brief(path: Path) -> Brief:
    """Return the brief in the file at ``path``.

    Raises :class:`~sizing.errors.InputError` with all mistakes of the file at once: each with
    its place, what was found, what belongs there and the likely fix.
    """
    source, tables = load_toml(path)
    return brief_from_tables(tables, source)


def brief_from_tables(
    tables: dict[str, Any],
    source: SourceFile,
    place: Callable[[KeyPath], str] = key_path_text,
) -> Brief:
    """Return the brief in tables shaped like the TOML file's, whatever file they come from.

    ``place`` turns a key path into the words of that file for messages. Raises
    :class:`~sizing.errors.InputError` as :func:`read_brief` does.
    """
    findings = Findings(source.name, place)
    entry, faulty = read_entry(RawBrief, tables, (), findings, "tables")
    raw = entry or RawBrief.model_validate({})
    units = _read_units(raw, faulty, findings)
    quantities = Quantities(findings, units)

    def present(key: str) -> bool:
        return key not in faulty

    nodes = read_nodes(raw.nodes, findings, quantities, present=present("nodes"))
    supports = read_supports(raw.supports, nodes, findings, present=present("supports"))
    groups = read_groups(raw.groups, nodes, findings, quantities, present=present("groups"))
    check_truss(nodes, groups, findings)
    cases = read_cases(raw.cases, nodes, findings, quantities, present=present("cases"))
    before = len(findings.problems)
    combinations, names = read_combinations(
        raw.combinations, cases, findings, quantities, complete=present("combinations")
    )
    limits = read_deflection_limits(
        raw.deflection_limits,
        nodes,
        supports,
        cases,
        combinations,
        names,
        findings,
        quantities,
        states_known=present("combinations") and len(findings.problems) == before,
    )
    options = read_options(raw.options, findings, quantities, present=present("options"))
    findings.raise_if_any()
    return Brief(
        title=raw.title.strip() or source.path.stem,
        source=source,
        units=units,
        minimise=raw.minimise,
        nodes=nodes.nodes,
        supports=supports,
        groups=groups.groups,
        members=groups.members,
        cases=cases.cases,
        combinations=combinations,
        deflection_limits=limits,
        options=options,
        notes=raw.notes,
        cautions=tuple(findings.cautions),
    )


def _read_units(raw: RawBrief, faulty: frozenset[str], findings: Findings) -> Units:
    if "units" in faulty:
        return Units()
    entry, _ = read_entry(RawUnits, raw.units, ("units",), findings, "a table of units")
    return Units() if entry is None else Units(force=entry.force, length=entry.length)
